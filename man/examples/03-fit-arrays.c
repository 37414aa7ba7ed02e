/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Fits alpha(T) to values that a program holds in arrays, prints what the fit says, and saves the record.

       03-fit-arrays RECORD.json

   The rows are of two kinds, coefficients below room temperature and means above it; both go into the same solve. The
   material is invented. Needs libkelspan-fit, which links GSL and LAPACKE and is GPL-3.0-or-later, as is what links
   it. */
#include <stdio.h>
#include <stdlib.h>

#include <kelspan-fit.h>

/* Values in SI: kelvin and 1/K. The standard uncertainties are independent from row to row. */
static const struct { double t, alpha, u; } cold[] = {
    { 80, 8.11e-6, 0.02e-6 },  { 110, 11.19e-6, 0.02e-6 }, { 140, 13.07e-6, 0.02e-6 }, { 170, 14.28e-6, 0.02e-6 },
    { 200, 15.10e-6, 0.02e-6 }, { 230, 15.71e-6, 0.02e-6 }, { 260, 16.20e-6, 0.02e-6 }, { 290, 16.55e-6, 0.02e-6 },
};
static const struct { double from, to, mean, u; } warm[] = {
    { 293.15, 323.15, 16.75e-6, 0.02e-6 }, { 293.15, 373.15, 16.97e-6, 0.01e-6 }, { 293.15, 423.15, 17.17e-6, 0.01e-6 },
};
enum { COLD = sizeof cold / sizeof cold[0], WARM = sizeof warm / sizeof warm[0], ROWS = COLD + WARM };

int
main(int argc, char **argv)
{
    if (argc != 2) {
        fprintf(stderr, "usage: %s RECORD.json\n", argv[0]);
        return 2;
    }

    /* Each column is one way in which values were obtained: it has a kind and the resolution of its last digit. */
    const kel_column columns[] = {
        { .kind = KEL_KIND_COEFFICIENT, .unit = "1/K", .resolution = 0.01e-6 },
        { .kind = KEL_KIND_MEAN, .unit = "1/K", .resolution = 0.01e-6 },
    };
    kel_observation rows[ROWS] = { { .kind = KEL_KIND_COEFFICIENT } };
    for (size_t i = 0; i < COLD; i++)
        rows[i] = (kel_observation){
            .kind = KEL_KIND_COEFFICIENT, .from = cold[i].t, .to = cold[i].t, .value = cold[i].alpha, .column = 0,
            .u_absolute = cold[i].u, .u_stated = true, .line = i + 1, .printed_lo = cold[i].t, .printed_hi = cold[i].t,
        };
    for (size_t i = 0; i < WARM; i++)
        rows[COLD + i] = (kel_observation){
            .kind = KEL_KIND_MEAN, .from = warm[i].from, .to = warm[i].to, .value = warm[i].mean, .column = 1,
            .u_absolute = warm[i].u, .u_stated = true, .line = COLD + i + 1, .printed_lo = warm[i].from,
            .printed_hi = warm[i].to,
        };

    kel_error err;
    kel_table *table;
    kel_record *record = NULL;
    kel_fit_report *report = NULL;
    if (kel_table_from_arrays(&table, "example", columns, 2, rows, ROWS, 293.15, KEL_BASE_REFERENCE, &err) < 0) {
        fprintf(stderr, "row %zu: %s\n", err.line, err.message);
        return 1;
    }
    const kel_table *tables[] = { table };
    kel_fit_options options = KEL_FIT_OPTIONS_INIT; /* degree auto, the table's reference and base */
    kel_status status = kel_fit(&record, &report, tables, 1, &options, &err);
    if (status >= 0)
        status = kel_record_save(record, argv[1], &err);
    if (status < 0) {
        fprintf(stderr, "%s\n", err.message);
    } else {
        const kel_content *c = kel_record_content(record);
        printf("%zu observations, %zu parameters, chi2 %.1f, valid from %g K to %g K\n", c->observations, c->parameters,
               c->chi2, c->range.lo, c->range.hi);
        for (size_t i = 0; i < report->warning_count; i++)
            printf("warning: %s\n", report->warnings[i].text);
        for (size_t i = 0; i < c->row_count; i++)
            printf("%7.2f K %7.2f K  observed %6.2f  fitted %6.2f  residual %6.3f  (1e-6/K)\n", c->rows[i].from,
                   c->rows[i].to, c->rows[i].observed * 1e6, c->rows[i].fitted * 1e6, c->rows[i].residual * 1e6);
        printf("saved as %s\n", argv[1]);
    }
    kel_fit_report_free(report);
    kel_record_free(record);
    kel_table_free(table);
    return status < 0;
}

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Writes a small record without any fit: make_record RECORD.json. alpha rises by a line from 8e-6 1/K at 80 K to
   12e-6 1/K at 300 K with a relative uncertainty of 1 %. Public headers of libkelspan only, so that it serves where
   nothing else is installed. */
#include <math.h>
#include <stdio.h>

#include <kelspan.h>

int
main(int argc, char **argv)
{
    if (argc != 2)
        return 2;
    static const double mean[] = { 10e-6, 2e-6 }, mode[] = { 10e-8, 2e-8 };
    const kel_piece piece = { 80.0, 300.0, 0, 2 };
    const kel_mode relative = { KEL_MODE_SHARED, "stated 1 %", { mode, NULL } };
    kel_source source = {
        .name = "invented", .digest = "", .reference_temperature = 293.15, .base = KEL_BASE_REFERENCE,
    };
    kel_content content = {
        .form = "adopted", .base = KEL_BASE_REFERENCE, .reference_temperature = 293.15, .range = { 80.0, 300.0 },
        .pieces = &piece, .piece_count = 1, .coefficient_count = 2, .mean = { mean, NULL },
        .modes = &relative, .mode_count = 1,
        .variance = KEL_VARIANCE_STATED, .scatter_known = true, .degrees_of_freedom = NAN,
        .residual_standard_deviation = NAN, .chi2 = NAN, .sources = &source, .source_count = 1,
    };
    kel_record *record;
    kel_error err;
    kel_status status = kel_record_build(&record, &content, &err);
    if (status >= 0)
        status = kel_record_save(record, argv[1], &err);
    if (status < 0)
        fprintf(stderr, "%s\n", err.message);
    kel_record_free(record);
    return status < 0;
}

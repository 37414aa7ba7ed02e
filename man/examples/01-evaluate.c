/* SPDX-License-Identifier: Apache-2.0 */
/* Evaluates a saved record: the coefficient and the expansion at each temperature given, with standard uncertainty.

       01-evaluate RECORD.json 77K 20degC ...

   Needs libkelspan alone. Exit status 0; 1 if something failed; 3 if an answer was extrapolated. */
#include <stdio.h>
#include <stdlib.h>

#include <kelspan.h>

/* u is NaN where it is not known; a program that goes on to use it should say so instead of taking it for zero. */
static void
print_answer(const char *name, double value, const char *unit, const kel_answer *answer, double scale)
{
    printf("  %s %.6g %s", name, value, unit);
    if (answer->flags & KEL_FLAG_UNKNOWN_U)
        printf(", u not known");
    else
        printf(", u %.2g %s", answer->u * scale, unit);
    printf("%s\n", answer->flags & KEL_FLAG_EXTRAPOLATED ? "  extrapolated" : "");
}

int
main(int argc, char **argv)
{
    if (argc < 3) {
        fprintf(stderr, "usage: %s RECORD.json T...\n", argv[0]);
        return 2;
    }

    kel_record *record;
    kel_error err;
    if (kel_record_load(&record, argv[1], &err) < 0) {
        fprintf(stderr, "%s: %s\n", argv[1], err.message);
        return 1;
    }
    const kel_content *content = kel_record_content(record);
    printf("%s, valid from %g K to %g K, e = 0 at %g K\n", argv[1], content->range.lo, content->range.hi,
           content->reference_temperature);

    int status = EXIT_SUCCESS;
    for (int i = 2; i < argc; i++) {
        double t;
        if (kel_quantity_parse(&t, NULL, KEL_DIM_TEMPERATURE, argv[i], &err) < 0) {
            fprintf(stderr, "%s\n", err.message);
            status = EXIT_FAILURE;
            break;
        }
        kel_answer alpha, e;
        kel_status a = kel_record_coefficient(&alpha, record, t, &err);
        kel_status b = a < 0 ? a : kel_record_expansion(&e, record, t, &err);
        if (a < 0 || b < 0) {
            fprintf(stderr, "%s: %s\n", argv[i], err.message);
            status = EXIT_FAILURE;
            break;
        }
        printf("T = %g K\n", t);
        print_answer("coefficient", alpha.value * 1e6, "1e-6/K", &alpha, 1e6);
        print_answer("expansion  ", e.value * 1e6, "ppm", &e, 1e6);
        /* A positive status is an answer with a reservation; the larger, the graver. */
        if (a == KEL_W_EXTRAPOLATED || b == KEL_W_EXTRAPOLATED)
            status = 3;
    }
    kel_record_free(record);
    return status;
}

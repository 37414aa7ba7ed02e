/* SPDX-License-Identifier: Apache-2.0 */
/* Integrates alpha over many intervals in one call: a bar with a temperature for each of its elements is cooled, and
   every element reports its change of length, with a flag where the answer leaves the validity range.

       02-integrate-array RECORD.json

   The array calls allocate nothing and may be called by any number of threads on one record. Needs libkelspan alone. */
#include <stdio.h>
#include <stdlib.h>

#include <kelspan.h>

enum { ELEMENTS = 1000 };

int
main(int argc, char **argv)
{
    if (argc != 2) {
        fprintf(stderr, "usage: %s RECORD.json\n", argv[0]);
        return 2;
    }
    kel_record *record;
    kel_error err;
    if (kel_record_load(&record, argv[1], &err) < 0) {
        fprintf(stderr, "%s: %s\n", argv[1], err.message);
        return 1;
    }

    /* The warm end stays at the upper end of the validity range, the cold end goes 5 K below the lower one. */
    kel_interval range = kel_record_content(record)->range;
    static double from[ELEMENTS], to[ELEMENTS], integral[ELEMENTS], u[ELEMENTS];
    static unsigned char flags[ELEMENTS];
    double coldest = range.lo > 5 ? range.lo - 5 : 0;
    for (size_t i = 0; i < ELEMENTS; i++) {
        from[i] = range.hi;
        to[i] = range.hi + (coldest - range.hi) * (double)i / (ELEMENTS - 1);
    }

    /* The status is the gravest of all elements: one look tells whether the flags need a closer one. */
    kel_status status = kel_record_integral_n(integral, u, flags, record, from, to, ELEMENTS, &err);
    if (status < 0) {
        fprintf(stderr, "element %zu: %s\n", err.line, err.message);
        kel_record_free(record);
        return 1;
    }

    const double length = 1e-3; /* of each element, m */
    double change = 0.0;
    size_t outside = 0;
    for (size_t i = 0; i < ELEMENTS; i++) {
        change += length * integral[i];
        if (flags[i] & KEL_FLAG_EXTRAPOLATED)
            outside++;
    }
    printf("%d elements, bar of %g m, cooled from %g K to %g K at its cold end\n", ELEMENTS, length * ELEMENTS,
           range.hi, coldest);
    printf("change of length %.4g mm\n", change * 1e3);
    printf("coldest element: integral %.6g", integral[ELEMENTS - 1]);
    if (flags[ELEMENTS - 1] & KEL_FLAG_UNKNOWN_U)
        printf(", u not known\n");
    else
        printf(", u %.2g\n", u[ELEMENTS - 1]);
    printf("extrapolated: %zu elements%s\n", outside,
           status == KEL_W_EXTRAPOLATED ? ", so the sum is an extrapolation too" : "");
    kel_record_free(record);
    return 0;
}

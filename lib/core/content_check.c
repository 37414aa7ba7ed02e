/* SPDX-License-Identifier: Apache-2.0 */
/* The rules of a record's content, so that no code that uses a record has to look again. This file: how a breach is reported,
   and the curve with its pieces, transitions, modes, range and gaps. The data behind it: content_check_data.c.

   The same rules hold for content that a program gives and for a file; places are named as in the file. */
#include "content_check.h"
#include "record_parts.h"

#include <math.h>

void
kel__breach(kel__checker *checker, kel__place place, const char *what)
{
    if (checker->status != KEL_OK)
        return;
    if (place.list == NULL)
        checker->status = kel_error_set(checker->err, checker->code, 0, 0, "%s %s", place.key, what);
    else
        checker->status = kel_error_set(checker->err, checker->code, 0, 0, "%s[%zu].%s %s", place.list, place.index,
                                        place.key, what);
}

/* "= 300 K" and what is wrong with it, which may hold one other number at its %s. */
static void
breach_number(kel__checker *checker, kel__place place, double x, const char *what, double other)
{
    char got[KEL_NUMBER_SIZE], text[256];
    kel_number_format(got, x);
    char limit[KEL_NUMBER_SIZE];
    kel_number_format(limit, other);
    kel_error line;
    kel_error_set(&line, KEL_OK, 0, 0, what, limit);
    kel_error whole;
    kel_error_set(&whole, KEL_OK, 0, 0, "= %s %s", got, line.message);
    (void)text;
    kel__breach(checker, place, whole.message);
}

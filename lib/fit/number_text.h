/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers in messages, independent of locale. Not installed. */
#ifndef KELSPAN_NUMBER_TEXT_H
#define KELSPAN_NUMBER_TEXT_H

#include <kelspan.h>

/* A temperature as a message shows it: up to 7 significant digits, without zeros at the end. out: KEL_NUMBER_SIZE
   bytes. */
static inline void
kel__temperature_name(char *out, double t)
{
    double rounded;
    size_t n = kel_number_format_digits(out, t, 7);
    if (kel_number_read(&rounded, out, n, NULL) == KEL_OK)
        kel_number_format(out, rounded);
}

#endif

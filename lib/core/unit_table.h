/* SPDX-License-Identifier: Apache-2.0 */
/* The names that a unit is composed of. */
#ifndef KELSPAN_UNIT_TABLE_H
#define KELSPAN_UNIT_TABLE_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

/* One name: its factor to SI is numerator/denominator 10^exponent; offset_e2/100 is added first where a point on a
   scale is meant. */
typedef struct kel__symbol {
    const char *name;     /* as kelspan writes it, ASCII */
    int length, temperature; /* dimension: powers of m and K */
    int numerator, denominator, exponent;
    int offset_e2;
} kel__symbol;

/* The longest name at the front of the n bytes; *used gets its length. NULL if there is none, or if it runs on into a
   longer word. */
const kel__symbol *kel__symbol_match(size_t *used, const char *bytes, size_t n);

/* Does a degree sign stand at the front of the n bytes? The one sign that may follow another name without anything
   between: m°C. */
bool kel__degree_sign(const char *bytes, size_t n);

/* A unit taken apart: 10^above / 10^below times names, each with sign +1 above or -1 below the line. */
enum { KEL__MAX_FACTORS = 8 };

typedef struct kel__product {
    struct { const kel__symbol *symbol; int sign; } factor[KEL__MAX_FACTORS];
    size_t count;
    int above, below;
    bool bare_name; /* one name, without number, exponent or slash */
} kel__product;

/* Takes the n bytes, not empty, apart. False if they follow no grammar of units; *at is then the first byte that is not
   understood. */
bool kel__unit_grammar(kel__product *out, size_t *at, const char *bytes, size_t n);

#endif

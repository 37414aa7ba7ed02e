/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The head of a table's column: `quantity[: label] [unit]`. Not installed. */
#ifndef KELSPAN_HEADER_H
#define KELSPAN_HEADER_H

#include <kelspan.h>
#include "phrase.h"

typedef enum kel__quantity {
    KEL__NOTHING,              /* an empty head, or a column that is passed over */
    KEL__TEMPERATURE, KEL__FROM, KEL__TO, KEL__INTERVAL,
    KEL__COEFFICIENT, KEL__MEAN, KEL__EXPANSION, KEL__CONTRACTION,
    KEL__UNCERTAINTY, KEL__SOURCE, KEL__STATUS, KEL__RESERVATIONS
} kel__quantity;

typedef struct kel__heading {
    kel__quantity quantity;
    kel__word label;           /* n = 0: none */
    kel__word unit_text;       /* as printed; n = 0: the quantity has none */
    kel_unit unit;
    kel__word factor;          /* of an uncertainty: the number behind k=, or n = 0 */
    bool limits;               /* an uncertainty that is the half-width of a rectangle */
    double divisor;            /* of an uncertainty: printed value / divisor is standard */
} kel__heading;

/* Parses head[n], whose first byte stands at line, column (line 0: on the command line). The words point into head. */
kel_status kel__heading_parse(kel__heading *out, const char *head, size_t n, size_t line, size_t column,
                              kel_error *err);

/* 'QUANTITY [UNIT]=NAME-OR-NUMBER' of --column: the heading, and what names the column. The words point into text. */
kel_status kel__heading_option(kel__heading *out, kel__word *name, const char *text, kel_error *err);

/* "temperature", "mean coefficient", ...: the word that kelspan writes. */
const char *kel__quantity_name(kel__quantity quantity);

static inline bool
kel__is_value(kel__quantity q)
{
    return q >= KEL__COEFFICIENT && q <= KEL__CONTRACTION;
}

/* Of a value's quantity. */
static inline kel_kind
kel__kind_of(kel__quantity q)
{
    return q == KEL__COEFFICIENT ? KEL_KIND_COEFFICIENT : q == KEL__MEAN ? KEL_KIND_MEAN : KEL_KIND_EXPANSION;
}

#endif

/* SPDX-License-Identifier: Apache-2.0 */
/* How the rules of a record's content are checked and reported. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_CONTENT_CHECK_H
#define KELSPAN_CONTENT_CHECK_H

#include "core.h"
#include "names.h"

/* The first breach is kept; later ones are passed over. */
typedef struct kel__checker {
    kel_status code;    /* that a breach gives */
    kel_error *err;
    kel_status status;
} kel__checker;

/* What a number has to be. */
typedef enum kel__rule { KEL__FINITE, KEL__FINITE_OR_NAN, KEL__NOT_NEGATIVE, KEL__NOT_NEGATIVE_OR_NAN } kel__rule;

/* Where something stands: "list[index].key", or "key" for a NULL list. */
typedef struct kel__place {
    const char *list;
    size_t index;
    const char *key;
} kel__place;

/* A breach at a place; `what` goes on after it. */
void kel__breach(kel__checker *checker, kel__place place, const char *what);

void kel__check_number(kel__checker *checker, kel__place place, double x, kel__rule rule);
void kel__check_word(kel__checker *checker, kel__place place, const kel__words *list, int word);
void kel__check_there(kel__checker *checker, kel__place place, const void *pointer, size_t count);

/* Sources, columns, rows and their counts (content_check_data.c). */
void kel__check_data(kel__checker *checker, const kel_content *content);

#endif

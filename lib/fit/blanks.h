/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What counts as a blank in tables and metadata: space, tab, and the spaces that documents put between columns and
   digits. */
#ifndef KELSPAN_BLANKS_H
#define KELSPAN_BLANKS_H

#include <stdbool.h>
#include <stddef.h>

/* Bytes of the blank at p (p < end): 1 for space and tab, 2 for U+00A0, 3 for U+2009 and U+202F, 0 if there is none. */
size_t kel__blank(const char *p, const char *end);

/* Moves *p and *n so that blanks at both ends are left out. */
void kel__trim(const char **p, size_t *n);

/* The order of two texts when trimmed, with each run of blanks as one and the case of ASCII letters folded: "Product
   Form" = "product form". Negative, 0 or positive. */
int kel__compare_words(const char *a, size_t n, const char *b, size_t m);
bool kel__same_words(const char *a, size_t n, const char *b, size_t m);
bool kel__is_word(const char *p, size_t n, const char *word);

#endif

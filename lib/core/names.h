/* SPDX-License-Identifier: Apache-2.0 */
/* Words that stand for enumerators in records. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_NAMES_H
#define KELSPAN_NAMES_H

#include "core.h"

/* A list of words; a word's place is its enumerator. */
typedef struct kel__words {
    const char *const *words;
    int count;
} kel__words;

extern const kel__words kel__bases, kel__kinds, kel__mode_kinds, kel__variances, kel__step_kinds;
extern const kel__words kel__sides;        /* -1, 0, +1 of kel_fitted.side, from place 0 */
extern const kel__words kel__continuities; /* -1 to 2 of kel_content.continuity, from place 0 */
extern const kel__words kel__forms;        /* kel_content.form */

/* The word at a place, "unknown" if there is none; the place of a word, -1 if it is not in the list. */
const char *kel__word(const kel__words *list, int place);
int kel__word_place(const kel__words *list, const char *word);

#endif

/* SPDX-License-Identifier: Apache-2.0 */
/* Enumerators and their words, each list once: writing a record, reading it and messages all look here. */
#include "names.h"

#include <string.h>

#define WORDS(...)                                                                   \
    {                                                                                \
        (const char *const[]){ __VA_ARGS__ },                                        \
        (int)(sizeof(const char *const[]){ __VA_ARGS__ } / sizeof(const char *))     \
    }

const kel__words kel__bases = WORDS("reference length", "current length");
const kel__words kel__kinds = WORDS("coefficient", "mean coefficient", "expansion");
const kel__words kel__mode_kinds = WORDS("fit", "shared", "lot");
const kel__words kel__variances = WORDS("none", "given", "estimated", "mixed", "stated");
const kel__words kel__step_kinds = WORDS("none", "fitted", "stated");
const kel__words kel__sides = WORDS("below", "none", "above");
const kel__words kel__continuities = WORDS("none", "value", "slope", "curvature");
const kel__words kel__forms = WORDS("polynomial", "piecewise", "adopted");

const char *
kel__word(const kel__words *list, int place)
{
    return place >= 0 && place < list->count ? list->words[place] : "unknown";
}

int
kel__word_place(const kel__words *list, const char *word)
{
    for (int i = 0; i < list->count; i++)
        if (strcmp(list->words[i], word) == 0)
            return i;
    return -1;
}

const char *
kel_base_name(kel_base base)
{
    return kel__word(&kel__bases, (int)base);
}

const char *
kel_kind_name(kel_kind kind)
{
    return kel__word(&kel__kinds, (int)kind);
}

const char *
kel_mode_kind_name(kel_mode_kind kind)
{
    return kel__word(&kel__mode_kinds, (int)kind);
}

const char *
kel_variance_name(kel_variance variance)
{
    return kel__word(&kel__variances, (int)variance);
}

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Words of enumerators: those that files and messages promise, "unknown" beyond, and back again. */
#include "../support/unit.h"

#include "names.h"

START_TEST(promised_words)
{
    ck_assert_str_eq(kel_base_name(KEL_BASE_REFERENCE), "reference length");
    ck_assert_str_eq(kel_base_name(KEL_BASE_CURRENT), "current length");
    ck_assert_str_eq(kel_kind_name(KEL_KIND_COEFFICIENT), "coefficient");
    ck_assert_str_eq(kel_kind_name(KEL_KIND_MEAN), "mean coefficient");
    ck_assert_str_eq(kel_kind_name(KEL_KIND_EXPANSION), "expansion");
    ck_assert_str_eq(kel_mode_kind_name(KEL_MODE_FIT), "fit");
    ck_assert_str_eq(kel_mode_kind_name(KEL_MODE_SHARED), "shared");
    ck_assert_str_eq(kel_mode_kind_name(KEL_MODE_LOT), "lot");
    ck_assert_str_eq(kel_variance_name(KEL_VARIANCE_NONE), "none");
    ck_assert_str_eq(kel_variance_name(KEL_VARIANCE_GIVEN), "given");
    ck_assert_str_eq(kel_variance_name(KEL_VARIANCE_ESTIMATED), "estimated");
    ck_assert_str_eq(kel_variance_name(KEL_VARIANCE_MIXED), "mixed");
    ck_assert_str_eq(kel_variance_name(KEL_VARIANCE_STATED), "stated");
    ck_assert_str_eq(kel__word(&kel__step_kinds, KEL_STEP_NONE), "none");
    ck_assert_str_eq(kel__word(&kel__step_kinds, KEL_STEP_FITTED), "fitted");
    ck_assert_str_eq(kel__word(&kel__step_kinds, KEL_STEP_STATED), "stated");
}
END_TEST

START_TEST(beyond_the_enumerators)
{
    ck_assert_str_eq(kel_base_name((kel_base)2), "unknown");
    ck_assert_str_eq(kel_kind_name((kel_kind)3), "unknown");
    ck_assert_str_eq(kel_mode_kind_name((kel_mode_kind)3), "unknown");
    ck_assert_str_eq(kel_variance_name((kel_variance)5), "unknown");
    ck_assert_str_eq(kel__word(&kel__bases, -1), "unknown");
}
END_TEST

START_TEST(there_and_back)
{
    const kel__words *const lists[] = { &kel__bases, &kel__kinds, &kel__mode_kinds, &kel__variances, &kel__step_kinds,
                                        &kel__sides, &kel__continuities, &kel__forms };
    for (int l = 0; l < KEL_LENGTH(lists); l++) {
        for (int i = 0; i < lists[l]->count; i++)
            ck_assert_int_eq(kel__word_place(lists[l], kel__word(lists[l], i)), i);
        ck_assert_int_eq(kel__word_place(lists[l], "unknown"), -1);
        ck_assert_int_eq(kel__word_place(lists[l], ""), -1);
    }
    ck_assert_int_eq(kel__sides.count, 3);
    ck_assert_int_eq(kel__continuities.count, 4);
}
END_TEST

KEL_TCASE(words, promised_words, beyond_the_enumerators, there_and_back)
KEL_TEST_MAIN("names", words)

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Error reports and the names of the statuses. */
#include "unit.h"

#include <kelspan.h>
#include <string.h>

static const kel_status statuses[] = { KEL_OK, KEL_W_TRANSITION, KEL_W_GAP, KEL_W_EXTRAPOLATED, KEL_E_ARGUMENT,
                                       KEL_E_NOMEM, KEL_E_SYNTAX,
                                       KEL_E_UNIT, KEL_E_RANGE, KEL_E_DATA, KEL_E_RANK, KEL_E_CONVERGENCE, KEL_E_IO,
                                       KEL_E_DIGEST, KEL_E_VERSION };

START_TEST(every_status_has_its_own_name)
{
    for (int i = 0; i < KEL_LENGTH(statuses); i++) {
        const char *name = kel_status_text(statuses[i]);
        ck_assert_msg(name != NULL && name[0] != '\0' && strcmp(name, "unknown status") != 0, "status %d has no name",
                      statuses[i]);
        for (int j = 0; j < i; j++)
            ck_assert_msg(strcmp(name, kel_status_text(statuses[j])) != 0, "statuses %d and %d are both '%s'",
                          statuses[i], statuses[j], name);
    }
    ck_assert_str_eq(kel_status_text((kel_status)99), "unknown status");
    ck_assert_str_eq(kel_status_text((kel_status)-99), "unknown status");
    /* The sign is the class, and the larger the graver. */
    ck_assert(KEL_W_TRANSITION > 0 && KEL_W_GAP > KEL_W_TRANSITION && KEL_W_EXTRAPOLATED > KEL_W_GAP &&
              KEL_E_ARGUMENT < 0);
}
END_TEST

START_TEST(fills_in_and_returns)
{
    kel_error err;
    memset(&err, 0x55, sizeof err);
    ck_assert_int_eq(kel_error_set(&err, KEL_E_DATA, 12, 34, "row %d of '%s'", 7, "nt40.csv"), KEL_E_DATA);
    ck_assert(err.code == KEL_E_DATA && err.line == 12 && err.column == 34);
    ck_assert_str_eq(err.message, "row 7 of 'nt40.csv'");
    ck_assert_int_eq(kel_error_set(NULL, KEL_E_RANGE, 1, 1, "nobody reads this"), KEL_E_RANGE);
    ck_assert_str_eq(kel_version(), KEL_VERSION);
}
END_TEST

/* Characters of one to four bytes, so placed that each of their bytes in turn falls on the buffer's end: the cut
   message keeps whole characters only and as many as fit. */
static const char *const characters[] = { "x", "\xC2\xB0", "\xE2\x88\x92", "\xF0\x9D\x9B\xBC" };

START_TEST(cut_at_a_character)
{
    kel_error err;
    const char *c = characters[_i];
    size_t size = strlen(c), room = sizeof err.message - 1;
    for (size_t lead = 0; lead < 8; lead++) {
        char text[1024] = "";
        memset(text, 'a', lead);
        for (size_t n = lead; n + size < 800; n += size)
            memcpy(text + n, c, size + 1);
        kel_error_set(&err, KEL_E_DATA, 0, 0, "%s", text);
        size_t n = strlen(err.message), want = lead + (room - lead) / size * size;
        ck_assert_msg(n == want, "%zu bytes before characters of %zu: %zu bytes kept, expected %zu", lead, size, n,
                      want);
        ck_assert(memcmp(err.message, text, n) == 0);
    }
    /* What fits exactly is not cut. */
    char text[sizeof err.message];
    memset(text, 'b', sizeof text - 1);
    text[sizeof text - 1] = '\0';
    kel_error_set(&err, KEL_E_DATA, 0, 0, "%s", text);
    ck_assert_str_eq(err.message, text);
}
END_TEST

static TCase *
cuts(void)
{
    TCase *c = tcase_create("cuts");
    tcase_add_loop_test(c, cut_at_a_character, 0, KEL_LENGTH(characters));
    return c;
}

KEL_TCASE(cases, every_status_has_its_own_name, fills_in_and_returns)

KEL_TEST_MAIN("status", cases, cuts)

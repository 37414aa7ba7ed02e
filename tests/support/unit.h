/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What every unit test shares: a main, test cases from lists, and the way to files of the source tree.

   A test program is
       START_TEST(one) { ... } END_TEST
       KEL_TCASE(basics, one, two)
       static TCase *loops(void) { TCase *c = tcase_create("loops"); tcase_add_loop_test(c, three, 0, KEL_LENGTH(rows));
   return c; } KEL_TEST_MAIN("integrate", basics, loops) and prints Check's usual summary. Link tests/support/compare.c
   and Check. */
#ifndef KEL_TEST_UNIT_H
#define KEL_TEST_UNIT_H

#include <check.h>
#include <stdio.h>
#include <stdlib.h>

#include "compare.h"

#define KEL_LENGTH(array) ((int)(sizeof(array) / sizeof(array)[0]))

/* ck_assert_msg for loops of a million turns: Check writes a line to a file for each of its own assertions, this only
   on failure. */
#define KEL_REQUIRE(condition, ...)                                                       \
    do {                                                                                  \
        if (!(condition))                                                                 \
            ck_abort_msg(__VA_ARGS__);                                                    \
    } while (0)

/* Under AddressSanitizer: a request that is too large gives NULL, as without it. */
const char *__asan_default_options(void);
const char *
__asan_default_options(void)
{
    return "allocator_may_return_null=1";
}

/* Where the source tree lies. The environment wins, so that a build outside the tree and an installed test both
   work. */
#ifndef KEL_SOURCE_DIR
#define KEL_SOURCE_DIR "."
#endif

/* The path of a file of the source tree: kel_test_file("datasets/README"). Lives until the eighth call after it. */
static inline const char *
kel_test_file(const char *relative)
{
    static char paths[8][4096];
    static unsigned turn;
    char *path = paths[turn++ % 8];
    const char *dir = getenv("KEL_SOURCE_DIR");
    if (dir == NULL || dir[0] == '\0')
        dir = KEL_SOURCE_DIR;
    int n = snprintf(path, sizeof paths[0], "%s/%s", dir, relative);
    ck_assert_msg(n > 0 && n < (int)sizeof paths[0], "the path of '%s' is too long", relative);
    return path;
}

/* Defines TCase *name(void) that holds the listed tests. */
#define KEL_TCASE(name, ...)                                                              \
    static TCase *name(void)                                                              \
    {                                                                                     \
        TCase *kel_case = tcase_create(#name);                                            \
        const TTest *const kel_tests[] = { __VA_ARGS__ };                                 \
        for (size_t kel_i = 0; kel_i < sizeof kel_tests / sizeof kel_tests[0]; kel_i++)   \
            tcase_add_test(kel_case, kel_tests[kel_i]);                                   \
        return kel_case;                                                                  \
    }

typedef TCase *kel_tcase_function(void);

static inline int
kel_test_run(const char *name, kel_tcase_function *const *cases, size_t n)
{
    /* Check's 4 s are too few under a sanitizer on a busy machine. The cases below read this when they are made. */
    setenv("CK_DEFAULT_TIMEOUT", "120", 0);
    Suite *suite = suite_create(name);
    for (size_t i = 0; i < n; i++)
        suite_add_tcase(suite, cases[i]());
    SRunner *runner = srunner_create(suite);
    srunner_run_all(runner, CK_NORMAL);
    int failed = srunner_ntests_failed(runner);
    srunner_free(runner);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}

/* The program's main, from a name in quotes and functions that build a TCase each. */
#define KEL_TEST_MAIN(name, ...)                                                          \
    int main(void)                                                                        \
    {                                                                                     \
        kel_tcase_function *const kel_cases[] = { __VA_ARGS__ };                          \
        return kel_test_run(name, kel_cases, sizeof kel_cases / sizeof kel_cases[0]);     \
    }

#endif

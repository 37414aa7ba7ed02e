/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Hull and gaps of supports: the rule at, just inside and just outside both of its limits. */
#include "unit.h"

#include <math.h>
#include <string.h>

#include "../../lib/fit/support.h"

enum { MOST = 16 };

static const struct {
    const char *label;
    double limit;
    kel_interval range;        /* NaN: the hull */
    size_t n;
    kel_interval support[MOST];
    size_t gaps;
    kel_interval gap[4];
} cases[] = {
    { "nothing", 0, { NAN, NAN }, 0, { { 0, 0 } }, 0, { { 0, 0 } } },
    { "one temperature", 0, { NAN, NAN }, 1, { { 4, 4 } }, 0, { { 0, 0 } } },
    { "one temperature three times", 0, { NAN, NAN }, 3, { { 4, 4 }, { 4, 4 }, { 4, 4 } }, 0, { { 0, 0 } } },
    { "two temperatures: the only stretch is the median", 0, { NAN, NAN }, 2, { { 4, 4 }, { 300, 300 } }, 0,
      { { 0, 0 } } },
    { "even steps", 0, { NAN, NAN }, 4, { { 0, 0 }, { 10, 10 }, { 20, 20 }, { 30, 30 } }, 0, { { 0, 0 } } },
    { "4 medians exactly", 0, { NAN, NAN }, 5, { { 0, 0 }, { 10, 10 }, { 20, 20 }, { 30, 30 }, { 70, 70 } }, 0,
      { { 0, 0 } } },
    { "just above 4 medians", 0, { NAN, NAN }, 5, { { 0, 0 }, { 10, 10 }, { 20, 20 }, { 30, 30 }, { 70.01, 70.01 } }, 1,
      { { 30, 70.01 } } },
    { "not in order", 0, { NAN, NAN }, 5, { { 71, 71 }, { 10, 10 }, { 0, 0 }, { 30, 30 }, { 20, 20 } }, 1,
      { { 30, 71 } } },
    { "repeated temperatures make no stretch", 0, { NAN, NAN }, 8,
      { { 0, 0 }, { 0, 0 }, { 0, 0 }, { 0, 0 }, { 10, 10 }, { 20, 20 }, { 30, 30 }, { 55, 55 } }, 0, { { 0, 0 } } },
    { "above 4 medians, 10 % of the range exactly", 0, { NAN, NAN }, 13,
      { { 0, 0 }, { 1, 1 }, { 2, 2 }, { 3, 3 }, { 4, 4 }, { 5, 5 }, { 6, 6 }, { 7, 7 }, { 8, 8 }, { 18, 18 },
        { 19, 19 }, { 20, 20 }, { 100, 100 } },
      1, { { 20, 100 } } },
    { "just above 10 % of the range", 0, { NAN, NAN }, 13,
      { { 0, 0 }, { 1, 1 }, { 2, 2 }, { 3, 3 }, { 4, 4 }, { 5, 5 }, { 6, 6 }, { 7, 7 }, { 8, 8 }, { 18.01, 18.01 },
        { 19, 19 }, { 20, 20 }, { 100, 100 } },
      2, { { 8, 18.01 }, { 20, 100 } } },
    { "the median of an even number is the mean of the middle two", 0, { NAN, NAN }, 5,
      { { 0, 0 }, { 1, 1 }, { 2, 2 }, { 5, 5 }, { 13.1, 13.1 } }, 1, { { 5, 13.1 } } }, /* 1 1 3 8.1: 4 times 2 */
    { "ends of intervals support", 0, { NAN, NAN }, 3, { { 0, 100 }, { 25, 50 }, { 50, 75 } }, 0, { { 0, 0 } } },
    { "an interval over a stretch does not fill it", 0, { NAN, NAN }, 4,
      { { 0, 100 }, { 1, 2 }, { 3, 4 }, { 5, 6 } }, 1, { { 6, 100 } } },
    { "a limit", 9, { NAN, NAN }, 4, { { 0, 0 }, { 9, 9 }, { 18.5, 18.5 }, { 20, 20 } }, 1, { { 9, 18.5 } } },
    { "a large limit", 1000, { NAN, NAN }, 3, { { 0, 0 }, { 1, 1 }, { 900, 900 } }, 0, { { 0, 0 } } },
    { "cut to a range", 9, { 3, 60 }, 3, { { 0, 0 }, { 20, 20 }, { 100, 100 } }, 2, { { 3, 20 }, { 20, 60 } } },
    { "outside the range", 9, { 20, 60 }, 3, { { 0, 0 }, { 20, 20 }, { 100, 100 } }, 1, { { 20, 60 } } },
    { "10 % of the range, not of the hull", 0, { 0, 60 }, 7,
      { { 0, 0 }, { 1, 1 }, { 2, 2 }, { 3, 3 }, { 4, 4 }, { 12, 12 }, { 100, 100 } }, 2, { { 4, 12 }, { 12, 60 } } },
};

START_TEST(gaps)
{
    const char *label = cases[_i].label;
    kel_arena *arena = kel_arena_new();
    kel_interval range = isnan(cases[_i].range.lo) ? kel__support_hull(cases[_i].support, cases[_i].n)
        : cases[_i].range;
    const kel_interval *found;
    size_t n;
    ck_assert_int_eq(kel__support_gaps(&found, &n, arena, cases[_i].support, cases[_i].n, range, cases[_i].limit,
                                       NULL), KEL_OK);
    ck_assert_msg(n == cases[_i].gaps, "%s: %zu gaps", label, n);
    for (size_t i = 0; i < n; i++) {
        ck_assert_ulp_for(label, found[i].lo, cases[_i].gap[i].lo, 0);
        ck_assert_ulp_for(label, found[i].hi, cases[_i].gap[i].hi, 0);
    }
    kel_arena_free(arena);
}
END_TEST

START_TEST(hull)
{
    static const kel_interval support[] = { { 20, 30 }, { 4, 4 }, { 10, 77 } };
    kel_interval none = kel__support_hull(support, 0), all = kel__support_hull(support, 3);
    ck_assert(isnan(none.lo) && isnan(none.hi));
    ck_assert_ulp(all.lo, 4, 0);
    ck_assert_ulp(all.hi, 77, 0);
}
END_TEST

/* The reference may lie above: the interval runs upwards all the same. */
START_TEST(supports)
{
    kel_observation o = { .kind = KEL_KIND_EXPANSION, .from = 293, .to = 77 };
    kel_interval s = kel__support_of(&o);
    ck_assert_ulp(s.lo, 77, 0);
    ck_assert_ulp(s.hi, 293, 0);
    o.to = 400;
    s = kel__support_of(&o);
    ck_assert_ulp(s.lo, 293, 0);
    ck_assert_ulp(s.hi, 400, 0);
}
END_TEST

KEL_TCASE(singles, hull, supports)

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, gaps, 0, KEL_LENGTH(cases));
    return c;
}

KEL_TEST_MAIN("support", singles, loops)

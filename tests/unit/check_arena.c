/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Memory released all at once: zeroed, aligned, disjoint, and refusing sizes that overflow. */
#include "unit.h"

#include <kelspan.h>
#include <stdalign.h>
#include <stdint.h>
#include <string.h>

START_TEST(zeroed_aligned_disjoint)
{
    /* Around the first block's size, the largest block's, and far beyond. */
    static const size_t sizes[] = { 0,    1,    2,    7,    8,    15,     16,     17,     100,
                                    1008, 1023, 1024, 1025, 4096, 262143, 262144, 262145, 1000000 };
    enum { N = 400 };
    unsigned char *p[N];
    size_t size[N];
    kel_arena *arena = kel_arena_new();
    ck_assert_ptr_nonnull(arena);
    for (int i = 0; i < N; i++) {
        size[i] = sizes[(i * 7 + i / 5) % (i < 360 ? 15 : KEL_LENGTH(sizes))];
        p[i] = kel_arena_take(arena, size[i], 1);
        ck_assert_ptr_nonnull(p[i]);
        ck_assert_msg((uintptr_t)p[i] % alignof(max_align_t) == 0, "take %d of %zu bytes is not aligned", i, size[i]);
        for (size_t j = 0; j < size[i]; j++)
            KEL_REQUIRE(p[i][j] == 0, "take %d: byte %zu is not zero", i, j);
        memset(p[i], i % 251 + 1, size[i]);
    }
    /* Had two of them overlapped, one would have lost its bytes. */
    for (int i = 0; i < N; i++)
        for (size_t j = 0; j < size[i]; j++)
            KEL_REQUIRE(p[i][j] == i % 251 + 1, "take %d: byte %zu was overwritten", i, j);
    kel_arena_free(arena);
}
END_TEST

START_TEST(overflow_is_refused)
{
    kel_arena *arena = kel_arena_new();
    ck_assert_ptr_nonnull(arena);
    ck_assert_ptr_null(kel_arena_take(arena, SIZE_MAX, 2));
    ck_assert_ptr_null(kel_arena_take(arena, SIZE_MAX / 2, 3));
    ck_assert_ptr_null(kel_arena_take(arena, SIZE_MAX, 1));
    ck_assert_ptr_null(kel_arena_take(arena, SIZE_MAX - 64, 1));
    ck_assert_ptr_null(kel_arena_bytes(arena, "x", SIZE_MAX));
    ck_assert_ptr_null(kel_arena_copy(arena, "x", SIZE_MAX, 8));
    /* The arena is as good as before. */
    ck_assert_str_eq(kel_arena_string(arena, "still here"), "still here");
    kel_arena_free(arena);
    kel_arena_free(NULL);
}
END_TEST

START_TEST(copies)
{
    kel_arena *arena = kel_arena_new();
    ck_assert_ptr_nonnull(arena);
    double x[3] = { 1.5, -2.5, 3.5 };
    double *y = kel_arena_copy(arena, x, 3, sizeof x[0]);
    ck_assert(y != NULL && y != x && memcmp(x, y, sizeof x) == 0);
    ck_assert_ptr_nonnull(kel_arena_copy(arena, NULL, 0, 8));
    char text[] = "invar";
    char *s = kel_arena_string(arena, text), *b = kel_arena_bytes(arena, text, 2),
         *none = kel_arena_bytes(arena, NULL, 0);
    text[0] = 'X';
    ck_assert_str_eq(s, "invar");
    ck_assert_str_eq(b, "in");
    ck_assert_str_eq(none, "");
    ck_assert_ptr_null(kel_arena_string(arena, NULL));
    char *with_nul = kel_arena_bytes(arena, "a\0b", 3);
    ck_assert(memcmp(with_nul, "a\0b", 4) == 0);
    kel_arena_free(arena);
}
END_TEST

KEL_TCASE(cases, zeroed_aligned_disjoint, overflow_is_refused, copies)

KEL_TEST_MAIN("arena", cases)

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The reduced problem: conditions against the bordered normal equations in 33 digits, rank and the piece that is named,
   condition, the small routines behind it. */
#include "unit.h"
#include "problem.h"
#include "quad.h"

#include <string.h>

enum { HEIGHT = 14, MOST = 8 };

/* Entries in -0.5..0.5 without structure. */
static double
pseudo(unsigned *state)
{
    *state = *state * 1664525u + 1013904223u;
    return (double)(*state >> 8) / (1 << 24) - 0.5;
}

/* Two pieces of `count` coefficients each, `shared` more unknowns. */
static kel__solution
two_pieces(size_t count, size_t shared)
{
    static kel_piece pieces[2];
    pieces[0] = (kel_piece){ 100, 200, 0, count };
    pieces[1] = (kel_piece){ 200, 300, count, count };
    return (kel__solution){ .layout = { .pieces = pieces,
                                        .piece_count = 2,
                                        .coefficients = 2 * count,
                                        .curve = 2 * count,
                                        .unknowns = 2 * count + shared } };
}

static void
fill(double *r, size_t n)
{
    unsigned state = 7;
    for (size_t i = 0; i < n; i++)
        r[i] = pseudo(&state);
}

/* a x = b by elimination with row exchanges; a (n x n by rows) and b are destroyed, b becomes x. */
static void
eliminate(quad *a, quad *b, size_t n)
{
    for (size_t k = 0; k < n; k++) {
        size_t p = k;
        for (size_t i = k + 1; i < n; i++)
            if (quad_abs(a[i * n + k]) > quad_abs(a[p * n + k]))
                p = i;
        for (size_t j = 0; j < n; j++) {
            quad t = a[k * n + j];
            a[k * n + j] = a[p * n + j];
            a[p * n + j] = t;
        }
        quad t = b[k];
        b[k] = b[p];
        b[p] = t;
        for (size_t i = 0; i < n; i++) {
            quad f = i == k ? 0 : a[i * n + k] / a[k * n + k];
            for (size_t j = 0; j < n && f != 0; j++)
                a[i * n + j] -= f * a[k * n + j];
            if (f != 0)
                b[i] -= f * b[k];
        }
    }
    for (size_t k = 0; k < n; k++)
        b[k] /= a[k * n + k];
}

/* Conditions by rows over six coefficients; `repeated`: how many of them say nothing new. */
static const struct {
    const char *label;
    size_t count, repeated, shared;
    double rows[3][6];
    double scale;
} constrained[] = {
    { "none", 0, 0, 0, { { 0 } }, 1 },
    { "one", 1, 0, 0, { { 1, 1, 1, -1, 1, -1 } }, 1 },
    { "two", 2, 0, 0, { { 1, 1, 1, -1, 1, -1 }, { 0, 1, 4, 0, -1, 4 } }, 1 },
    { "two and shared columns", 2, 0, 2, { { 1, 1, 1, -1, 1, -1 }, { 0, 1, 4, 0, -1, 4 } }, 1 },
    { "one twice", 2, 1, 0, { { 1, 1, 1, -1, 1, -1 }, { 2, 2, 2, -2, 2, -2 } }, 1 },
    { "one of three empty", 3, 1, 1, { { 1, 1, 1, -1, 1, -1 }, { 0 }, { 0, 1, 4, 0, -1, 4 } }, 1 },
    { "large numbers", 1, 0, 0, { { 1, 1, 1, -1, 1, -1 } }, 1e9 },
    { "small numbers", 1, 0, 0, { { 1, 1, 1, -1, 1, -1 } }, 1e-9 },
};

START_TEST(conditions)
{
    static double r[HEIGHT * (MOST + 1)], rows[3 * 6];
    kel__solution s = two_pieces(3, constrained[_i].shared);
    size_t n = s.layout.unknowns, m = constrained[_i].count, real = 0;
    fill(r, HEIGHT * (n + 1));
    for (size_t i = 0; i < HEIGHT * n; i++)
        r[i] *= constrained[_i].scale;
    memcpy(rows, constrained[_i].rows, sizeof rows);
    s.layout.conditions = rows;
    s.layout.condition_count = m;
    kel_arena *memory = kel_arena_new();
    kel_error err = { 0 };
    ck_assert_msg(kel__reduce(&s, memory, r, HEIGHT, &err) == KEL_OK, "%s: %s", constrained[_i].label, err.message);
    ck_assert_uint_eq(s.parameters, 6 - (m - constrained[_i].repeated));
    ck_assert_int_eq(s.rank, (int)s.parameters);
    ck_assert(s.every_piece);

    /* [A'A C'; C 0][x; lambda] = [A'b; 0], without the conditions that repeat others. */
    enum { BORDERED = MOST + 3 };
    static quad a[BORDERED * BORDERED], b[BORDERED];
    size_t size = n + m - constrained[_i].repeated;
    memset(a, 0, sizeof a);
    memset(b, 0, sizeof b);
    for (size_t j = 0; j < n; j++)
        for (size_t i = 0; i < HEIGHT; i++) {
            b[j] += (quad)r[j * HEIGHT + i] * r[n * HEIGHT + i];
            for (size_t k = 0; k < n; k++)
                a[j * size + k] += (quad)r[j * HEIGHT + i] * r[k * HEIGHT + i];
        }
    for (size_t c = 0; c < m; c++) {
        bool empty = true, twice = c > 0 && rows[c * 6] == 2;
        for (size_t j = 0; j < 6; j++)
            empty &= rows[c * 6 + j] == 0;
        if (empty || twice)
            continue;
        for (size_t j = 0; j < 6; j++)
            a[(n + real) * size + j] = a[j * size + n + real] =
                rows[c * 6 + j] * (quad)constrained[_i].scale * constrained[_i].scale;
        real++;
    }
    ck_assert_uint_eq(n + real, size);
    eliminate(a, b, size);
    double largest = 0, norm = 0;
    for (size_t j = 0; j < n; j++)
        largest = fmax(largest, fabs((double)b[j]));
    for (size_t j = 0; j < n; j++) /* condition numbers here are below 30 */
        ck_assert_abs_for(constrained[_i].label, s.x[j] / largest, (double)b[j] / largest, 1e-13, "of the largest");
    for (size_t c = 0; c < m; c++) {
        double sum = 0;
        for (size_t j = 0; j < 6; j++)
            sum += rows[c * 6 + j] * s.x[j];
        ck_assert_abs_for(constrained[_i].label, sum / largest, 0, 64 * KEL__EPS, "of the largest");
    }
    for (size_t i = 0; i < HEIGHT; i++) {
        double e = r[n * HEIGHT + i];
        for (size_t j = 0; j < n; j++)
            e -= r[j * HEIGHT + i] * s.x[j];
        norm = hypot(norm, e);
    }
    ck_assert_lre_for(constrained[_i].label, s.residual, norm, 12);

    /* basis: conditions vanish on it; triangle: R'R of the columns that it makes, with the shared ones. */
    size_t k = s.parameters, all = k + constrained[_i].shared;
    static double columns[MOST][HEIGHT];
    for (size_t p = 0; p < all; p++)
        for (size_t i = 0; i < HEIGHT; i++) {
            columns[p][i] = p < k ? 0 : r[(6 + p - k) * HEIGHT + i];
            for (size_t j = 0; p < k && j < 6; j++)
                columns[p][i] += s.basis[p * 6 + j] * r[j * HEIGHT + i];
        }
    for (size_t p = 0; p < all; p++)
        for (size_t q = 0; q < all; q++) {
            double want = 0, got = 0, size_p = 0, size_q = 0;
            for (size_t i = 0; i < HEIGHT; i++) {
                want += columns[p][i] * columns[q][i];
                size_p += columns[p][i] * columns[p][i];
                size_q += columns[q][i] * columns[q][i];
            }
            for (size_t i = 0; i < all; i++)
                got += s.triangle[p * all + i] * s.triangle[q * all + i];
            ck_assert_abs_for(constrained[_i].label, (got - want) / sqrt(size_p * size_q), 0, 1e-14,
                              "of the columns' lengths");
        }
    kel_arena_free(memory);
}
END_TEST

/* The last column of piece `piece` is the one before it plus `apart` of something new. The rank's limit is 16 eps
   max(rows, columns) = 5e-14 of the largest singular value; the smallest one is near apart/2. */
static const struct {
    const char *label;
    size_t piece;
    double apart;
    bool whole;
    const char *words;
} ranks[] = {
    { "first piece, equal", 0, 0, false,
      "determine only 5 of 6 parameters: between 100 K and 200 K they do not carry degree 2" },
    { "second piece, equal", 1, 0, false,
      "determine only 5 of 6 parameters: between 200 K and 300 K they do not carry degree 2" },
    { "just below the limit", 1, 1e-14, false, "between 200 K and 300 K" },
    { "just above the limit", 1, 1e-12, true, NULL },
    { "well above", 0, 1e-3, true, NULL },
};

START_TEST(rank)
{
    static double r[HEIGHT * 7];
    kel__solution s = two_pieces(3, 0);
    fill(r, HEIGHT * 7);
    double *last = r + (3 * ranks[_i].piece + 2) * HEIGHT;
    for (size_t i = 0; i < HEIGHT; i++)
        last[i] = last[(ptrdiff_t)i - HEIGHT] + ranks[_i].apart * last[i];
    kel_arena *memory = kel_arena_new();
    kel_error err = { 0 };
    kel_status status = kel__reduce(&s, memory, r, HEIGHT, &err);
    ck_assert_msg(status == (ranks[_i].whole ? KEL_OK : KEL_E_RANK), "%s: %d, condition %g", ranks[_i].label, status,
                  s.condition);
    ck_assert_int_eq(s.rank, ranks[_i].whole ? 6 : 5);
    ck_assert(s.every_piece == ranks[_i].whole);
    ck_assert_double_gt(s.condition * fmax(ranks[_i].apart, 1e-15), 0.5);
    if (ranks[_i].words != NULL)
        ck_assert_msg(strstr(err.message, ranks[_i].words) != NULL, "%s: %s", ranks[_i].label, err.message);
    kel_arena_free(memory);
}
END_TEST

/* A piece without rows of its own that a condition ties to its neighbour: the whole is determined, the piece is not. */
START_TEST(a_piece_that_leans_on_its_neighbour)
{
    static double r[HEIGHT * 5], condition[] = { 1, 1, -1, 0 };
    kel__solution s = two_pieces(2, 0);
    fill(r, HEIGHT * 5);
    memset(r + 2 * HEIGHT, 0, HEIGHT * sizeof *r);
    s.layout.conditions = condition;
    s.layout.condition_count = 1;
    kel_arena *memory = kel_arena_new();
    ck_assert_int_eq(kel__reduce(&s, memory, r, HEIGHT, NULL), KEL_OK);
    ck_assert(!s.every_piece);
    ck_assert_int_eq(s.rank, 3);
    ck_assert_abs(s.x[0] + s.x[1] - s.x[2], 0, 16 * KEL__EPS * (fabs(s.x[0]) + fabs(s.x[1])), "1");
    kel_arena_free(memory);
}
END_TEST

START_TEST(nothing_at_all)
{
    static double r[HEIGHT * 5];
    kel__solution s = two_pieces(2, 0);
    kel_arena *memory = kel_arena_new();
    kel_error err = { 0 };
    ck_assert_int_eq(kel__reduce(&s, memory, r, HEIGHT, &err), KEL_E_RANK);
    ck_assert_int_eq(s.rank, 0);
    ck_assert(isinf(s.condition));
    ck_assert_ptr_nonnull(strstr(err.message, "only 0 of 4 parameters"));
    kel_arena_free(memory);
}
END_TEST

/* Two columns at an angle: singular values of unit columns are sqrt(1 +- cos), so that the condition is cot(angle/2)
   whatever their lengths. */
static const struct {
    double angle, length;
} angles[] = { { 1.5707963267948966, 1 }, { 1, 1 }, { 1, 1e-7 }, { 0.1, 1e12 }, { 1e-6, 3 } };

START_TEST(condition_number)
{
    double a = angles[_i].angle, length = angles[_i].length,
           r[12] = { 1, 0, 0, 0, length * cos(a), length * sin(a), 0, 0, 1, 2, 3, 4 };
    kel_piece piece = { 0, 1, 0, 2 };
    kel__solution s = { .layout = {
                            .pieces = &piece, .piece_count = 1, .coefficients = 2, .curve = 2, .unknowns = 2 } };
    kel_arena *memory = kel_arena_new();
    ck_assert_int_eq(kel__reduce(&s, memory, r, 4, NULL), KEL_OK);
    /* The smallest singular value a/sqrt 2 is known to a few eps of the largest. */
    ck_assert_abs(s.condition * tan(a / 2), 1, 16 * KEL__EPS / a, "of cot(angle/2)");
    ck_assert_double_eq(s.residual, 5);
    kel_arena_free(memory);
}
END_TEST

static const double bad[] = { NAN, INFINITY, -INFINITY };

START_TEST(numbers_that_are_none)
{
    static double r[HEIGHT * 5];
    for (size_t at = 0; at < HEIGHT * 5; at += HEIGHT + 1) {
        kel__solution s = two_pieces(2, 0);
        fill(r, HEIGHT * 5);
        r[at] = bad[_i];
        kel_arena *memory = kel_arena_new();
        ck_assert_int_eq(kel__reduce(&s, memory, r, HEIGHT, NULL), KEL_E_RANGE);
        kel_arena_free(memory);
    }
}
END_TEST

START_TEST(triangles)
{
    /* R by columns; R (1, 2, 3) and R' (1, 2, 3) worked by hand. */
    const double r[] = { 2, 0, 0, 1, 4, 0, -1, 3, 5 };
    double b[] = { 2 + 2 - 3, 8 + 9, 15 }, c[] = { 2, 1 + 8, -1 + 6 + 15 };
    kel__solve_upper(b, r, 3, 3);
    kel__solve_transposed(c, r, 3);
    for (int i = 0; i < 3; i++) {
        ck_assert_double_eq(b[i], i + 1);
        ck_assert_double_eq(c[i], i + 1);
    }
    double part[] = { 4 * 2 + 3 * 3, 5 * 3 }; /* the lower right part, by its stride */
    kel__solve_upper(part, r + 4, 3, 2);
    ck_assert_double_eq(part[0], 2);
    ck_assert_double_eq(part[1], 3);
}
END_TEST

START_TEST(eigenvalues)
{
    double a[] = { 2, 1, 1, 2 }, values[2];
    kel_arena *memory = kel_arena_new();
    ck_assert_int_eq(kel__eigen(values, a, 2, memory, NULL), KEL_OK);
    kel_arena_free(memory);
    ck_assert_ulp(values[0], 1, 4);
    ck_assert_ulp(values[1], 3, 4);
    ck_assert_abs(a[0] + a[1], 0, 4 * KEL__EPS, "1"); /* (1, -1)/sqrt 2 */
    ck_assert_abs(a[2] - a[3], 0, 4 * KEL__EPS, "1");
    ck_assert_abs(fabs(a[2]), sqrt(0.5), 4 * KEL__EPS, "1");
}
END_TEST

static const struct { size_t rows, columns; } shapes[] = { { 1, 1 }, { 1, 4 }, { 3, 3 }, { 4, 7 } };

START_TEST(lower_factor)
{
    double a[28], kept[28], l[16];
    size_t m = shapes[_i].rows, n = shapes[_i].columns;
    fill(a, m * n);
    memcpy(kept, a, sizeof a);
    kel_arena *memory = kel_arena_new();
    ck_assert_int_eq(kel__lower_factor(l, a, m, n, memory, NULL), KEL_OK);
    for (size_t i = 0; i < m; i++)
        for (size_t j = 0; j < m; j++) {
            double want = 0, got = 0;
            for (size_t k = 0; k < n; k++)
                want += kept[k * m + i] * kept[k * m + j];
            for (size_t k = 0; k < m; k++)
                got += l[k * m + i] * l[k * m + j];
            ck_assert_abs(got, want, 16 * KEL__EPS, "1");
            if (i < j)
                ck_assert_double_eq(l[j * m + i], 0);
        }
    kel_arena_free(memory);
}
END_TEST

static TCase *
loops(void)
{
    TCase *c = tcase_create("loops");
    tcase_add_loop_test(c, conditions, 0, KEL_LENGTH(constrained));
    tcase_add_loop_test(c, rank, 0, KEL_LENGTH(ranks));
    tcase_add_loop_test(c, condition_number, 0, KEL_LENGTH(angles));
    tcase_add_loop_test(c, numbers_that_are_none, 0, KEL_LENGTH(bad));
    tcase_add_loop_test(c, lower_factor, 0, KEL_LENGTH(shapes));
    return c;
}

KEL_TCASE(single, a_piece_that_leans_on_its_neighbour, nothing_at_all, triangles, eigenvalues)
KEL_TEST_MAIN("reduce", loops, single)

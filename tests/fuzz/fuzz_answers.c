/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Properties of a record's answers at the temperatures where its rules change: ends of pieces, range and gaps,
   transitions, the reference, the doubles beside them, absolute zero, and far away.

   Where two ways lead to one number they may differ by 1e-12 of the largest term, S = sum |c_k| max(1, |T_k(x)|) over
   the way between the temperatures; a curve that reaches beyond 1e150 there is asked, but not compared. */
#include "fuzz_answers.h"

#include <float.h>
#include <math.h>

static const double share = 1e-12, largest_compared = 1e150;

enum { TEMPERATURES = 24 };

/* ---- the size of what is summed ---- */

static double
term_at(const kel_content *c, const kel_curve *curve, const kel_piece *p, double t)
{
    double x = p->from == p->to ? 0 : fabs((2 * t - p->from - p->to) / (p->to - p->from)), before = 1, now = x, sum = 0;
    (void)c;
    for (size_t k = 0; k < p->count; k++) {
        double size = k == 0 ? 1 : k == 1 ? x : 2 * x * now - before;
        if (k > 1) {
            before = now;
            now = size;
        }
        /* Inside a piece |T_k| <= 1; 1e-12 leaves the rounding of the recursion outside far behind. */
        sum += fabs(curve->coefficients[p->first + k]) * (x <= 1 ? 1 : fmax(1, fabs(size)));
    }
    return sum;
}

/* Largest S of the curve between lo and hi, and the steps that may be crossed. */
static void
terms(double *size, double *steps, const kel_content *c, const kel_curve *curve, double lo, double hi)
{
    *size = *steps = 0;
    for (size_t i = 0; i < c->piece_count; i++) {
        const kel_piece *p = &c->pieces[i];
        double from = i == 0 ? lo : fmax(lo, p->from), to = i + 1 == c->piece_count ? hi : fmin(hi, p->to);
        if (from <= to)
            *size = fmax(*size, fmax(term_at(c, curve, p, from), term_at(c, curve, p, to)));
    }
    for (size_t i = 0; i < c->transition_count; i++)
        *steps += curve->steps != NULL ? fabs(curve->steps[i]) : 0;
}

/* ---- single answers ---- */

static kel_status
gravest(unsigned flags)
{
    return flags & KEL_FLAG_EXTRAPOLATED ? KEL_W_EXTRAPOLATED
         : flags & KEL_FLAG_GAP          ? KEL_W_GAP
         : flags & KEL_FLAG_TRANSITION   ? KEL_W_TRANSITION
                                         : KEL_OK;
}

/* What holds of an answer whatever was asked. True if there is one. */
static bool
sound(kel_status status, const kel_answer *a, const kel_content *c, const kel_error *err, bool tame)
{
    bool unknown = (a->flags & KEL_FLAG_UNKNOWN_U) != 0;
    if (status < 0) {
        fuzz_error(status, err);
        FUZZ_REQUIRE(status == KEL_E_RANGE, "%s", err->message);
        FUZZ_REQUIRE(isnan(a->value) && isnan(a->u) && unknown, "%a, %a, %u", a->value, a->u, a->flags);
        return false;
    }
    FUZZ_REQUIRE(status == gravest(a->flags), "%d for flags %u", (int)status, a->flags);
    FUZZ_REQUIRE(unknown == (c->mode_count == 0), "flags %u, %zu modes", a->flags, c->mode_count);
    if (unknown) {
        FUZZ_REQUIRE(isnan(a->u) && isnan(a->u_fit) && isnan(a->u_shared) && isnan(a->u_lot), "%a", a->u);
    } else if (tame) {
        double squares = a->u_fit * a->u_fit + a->u_shared * a->u_shared + a->u_lot * a->u_lot;
        FUZZ_REQUIRE(a->u >= 0 && a->u_fit >= 0 && a->u_shared >= 0 && a->u_lot >= 0, "%a", a->u);
        FUZZ_REQUIRE(fabs(a->u * a->u - squares) <= 1e-12 * squares + DBL_MIN, "%a^2 is not %a", a->u, squares);
    }
    FUZZ_REQUIRE(!tame || isfinite(a->value), "%a", a->value);
    return true;
}

static void
ask(const kel_record *record, double from, double to, bool tame)
{
    const kel_content *c = kel_record_content(record);
    const double references[] = { NAN, c->reference_temperature, from, c->range.hi };
    for (int q = KEL_COEFFICIENT; q <= KEL_CHANGE; q++)
        for (int base = -1; base <= KEL_BASE_CURRENT; base++)
            for (size_t r = 0; r < sizeof references / sizeof references[0]; r++) {
                kel_query query = { (kel_quantity)q, from, to, r % 2 == 0 ? from : c->range.lo, references[r], base };
                kel_answer a;
                kel_error err = { 0 };
                kel_status status = kel_record_answer(&a, record, &query, &err);
                bool is_tame = tame && base < 0 && r == 0 && q != KEL_CHANGE;
                if (!sound(status, &a, c, &err, is_tame) || r != 0 || base >= 0)
                    continue;
                double covariance;
                if (c->mode_count > 0 && tame) {
                    status = kel_record_covariance(&covariance, record, &query, &query, &err);
                    FUZZ_REQUIRE(status == gravest(a.flags), "%d for flags %u", (int)status, a.flags);
                    FUZZ_REQUIRE(fabs(covariance - a.u * a.u) <= 1e-12 * a.u * a.u + DBL_MIN, "%a is not %a^2",
                                 covariance, a.u);
                }
            }
}

/* ---- two ways to one number ---- */

/* Scalar and array calls. */
static void
compare(const char *what, kel_status status, const kel_answer *a, double value, double u, unsigned char flags,
        double bound, double u_bound)
{
    if (status < 0) {
        FUZZ_REQUIRE(isnan(value), "%s: scalar %d, array %a", what, (int)status, value);
        return;
    }
    FUZZ_REQUIRE(flags == a->flags, "%s: flags %u, array %u", what, a->flags, flags);
    FUZZ_REQUIRE(!(bound < largest_compared) || fabs(value - a->value) <= bound, "%s: %a, array %a, bound %a", what,
                 a->value, value, bound);
    FUZZ_REQUIRE(isnan(u) == isnan(a->u) || !(u_bound < largest_compared), "%s: u = %a, array %a", what, a->u, u);
    FUZZ_REQUIRE(isnan(u) || !(u_bound < largest_compared) || fabs(u - a->u) <= u_bound + 1e-12 * a->u,
                 "%s: u = %a, array %a, bound %a", what, a->u, u, u_bound);
}

static void
ways(const kel_record *record, double from, double to)
{
    const kel_content *c = kel_record_content(record);
    double lo = fmin(from, fmin(to, c->reference_temperature)), hi = fmax(from, fmax(to, c->reference_temperature));
    double size, steps, mode_size = 0, mode_steps = 0;
    terms(&size, &steps, c, &c->mean, lo, hi);
    for (size_t k = 0; k < c->mode_count; k++) {
        double s, t;
        terms(&s, &t, c, &c->modes[k].curve, lo, hi);
        mode_size = hypot(mode_size, s);
        mode_steps = hypot(mode_steps, t);
    }
    /* Lengths and other bases go through exp and 1 + e, which multiply the bound. */
    const double grown = expm1(size * (hi - lo) + steps) + 1, wide = (size * (hi - lo) + steps) * grown * 4;
    const double spread = (mode_size * (hi - lo) + mode_steps) * grown * 4;
    const bool tame = wide < largest_compared && spread < largest_compared && size < largest_compared;
    const double point = share * size, stretch = share * wide, u_point = share * mode_size, u_stretch = share * spread;
    ask(record, from, to, tame);
    kel_answer a, b;
    kel_error err = { 0 };
    double value, u;
    unsigned char flags;
    kel_status status = kel_record_coefficient(&a, record, to, &err);
    kel_record_coefficient_n(&value, &u, &flags, record, &to, 1, NULL);
    compare("coefficient", status, &a, value, u, flags, point, u_point);
    status = kel_record_expansion(&a, record, to, &err);
    kel_record_expansion_n(&value, &u, &flags, record, &to, 1, NULL);
    compare("expansion", status, &a, value, u, flags, stretch, u_stretch + stretch * spread);
    status = kel_record_length_ratio(&a, record, from, to, &err);
    kel_record_length_ratio_n(&value, &u, &flags, record, &from, &to, 1, NULL);
    if (status < 0 || fabs(a.value) < 2) /* 1/(1 + e) may blow either error up */
        compare("length ratio", status, &a, value, u, flags, stretch + share, INFINITY);
    status = kel_record_mean(&a, record, from, to, &err);
    kel_record_mean_n(&value, &u, &flags, record, &from, &to, 1, NULL);
    compare("mean", status, &a, value, u, flags, from == to ? (double)INFINITY : stretch / fabs(to - from) + point, INFINITY);
    status = kel_record_integral(&a, record, from, to, &err);
    kel_record_integral_n(&value, &u, &flags, record, &from, &to, 1, NULL);
    compare("integral", status, &a, value, u, flags, stretch, u_stretch);
    kel_status back = kel_record_integral(&b, record, to, from, &err);
    FUZZ_REQUIRE(back == status, "%d and back %d", (int)status, (int)back);
    if (status >= 0 && tame) {
        FUZZ_REQUIRE(fabs(a.value + b.value) <= stretch, "%a and back %a, bound %a", a.value, b.value, stretch);
        FUZZ_REQUIRE(from != to || (a.value == 0 && (isnan(a.u) || a.u == 0)), "nothing is %a, u = %a", a.value, a.u);
    }
}

static void
in_itself(const kel_record *record)
{
    const kel_content *c = kel_record_content(record);
    kel_answer a;
    kel_error err = { 0 };
    kel_status status = kel_record_expansion(&a, record, c->reference_temperature, &err);
    FUZZ_REQUIRE(status >= 0, "%s", err.message);
    FUZZ_REQUIRE(a.value == 0 && (isnan(a.u) || a.u == 0), "e(Tref) = %a, u = %a", a.value, a.u);
    FUZZ_REQUIRE(kel_record_inside(record, c->range.lo) && kel_record_inside(record, c->range.hi), "ends of the range");
    FUZZ_REQUIRE(kel_record_outside(record, c->range.lo, c->range.hi) == 0, "the range leaves itself");
    for (size_t i = 0; i < c->piece_count; i++) {
        double powers[KEL_COEFFICIENTS_MAX], u[KEL_COEFFICIENTS_MAX];
        status = kel_record_powers(powers, u, record, i, 0.0, 1.0, &err);
        if (status < 0)
            fuzz_error(status, &err);
        FUZZ_REQUIRE(status == KEL_OK || status == KEL_E_RANGE, "piece %zu: %s", i, err.message);
    }
}

static size_t
temperatures(double *t, const kel_content *c)
{
    size_t n = 0;
    t[n++] = c->range.lo;
    t[n++] = c->range.hi;
    t[n++] = c->reference_temperature;
    t[n++] = 0.5 * c->range.lo + 0.5 * c->range.hi;
    t[n++] = nextafter(c->range.lo, 0);
    t[n++] = nextafter(c->range.hi, INFINITY);
    t[n++] = 0;
    t[n++] = 1e4;
    for (size_t i = 0; i < c->transition_count && n + 2 < TEMPERATURES; i++) {
        t[n++] = c->transitions[i].at;
        t[n++] = nextafter(c->transitions[i].at, INFINITY);
    }
    for (size_t i = 0; i < c->gap_count && n + 2 < TEMPERATURES - 4; i++) {
        t[n++] = c->gaps[i].lo;
        t[n++] = nextafter(c->gaps[i].hi, 0);
    }
    for (size_t i = 1; i < c->piece_count && n < TEMPERATURES - 1; i++)
        t[n++] = c->pieces[i].from;
    t[n++] = 1e300;
    return n;
}

void
fuzz_record(const kel_record *record, kel_text *text)
{
    kel_text first = KEL_TEXT_INIT, second = KEL_TEXT_INIT;
    kel_record *again = NULL;
    kel_error err = { 0 };
    FUZZ_REQUIRE(kel_record_format(&first, record, &err) == KEL_OK, "%s", err.message);
    kel_status status = kel_record_parse(&again, first.bytes, first.size, &err);
    FUZZ_REQUIRE(status == KEL_OK, "%s (line %zu, column %zu)\n%s", err.message, err.line, err.column, first.bytes);
    FUZZ_REQUIRE(kel_record_format(&second, again, &err) == KEL_OK, "%s", err.message);
    fuzz_same_text(&first, &second, "record");
    if (text != NULL)
        kel_text_add_bytes(text, first.bytes, first.size);
    kel_text_free(&first);
    kel_text_free(&second);
    double t[TEMPERATURES];
    size_t n = temperatures(t, kel_record_content(again));
    for (size_t i = 0; i < n; i++) {
        ways(again, t[i], t[(i + 1) % n]);
        ways(again, t[0], t[i]);
    }
    in_itself(again);
    kel_record_free(again);
}

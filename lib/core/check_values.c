/* SPDX-License-Identifier: Apache-2.0 */
/* Check values: alpha and e at a few temperatures, kept in the record and worked out again when it is read. The
   digest shows that no digit was changed; the check values show that whoever reads the file understands it as the
   writer did.

   Temperatures: the ends of the validity range, its middle and quarter points, and the reference temperature if it
   is inside.

   Tolerance: 1e-12 of the largest term. For alpha this is S = sum |c_k| of the piece; for e the integral of S from
   the reference, with the steps on the way, times the derivative 1 + e in the base `current length`. Outside the
   pieces (the reference may lie there) S counts |T_k(x)| at the far end, where it is largest. This leaves evaluation
   on another machine, with another order of sums, a hundred times its error bound of (2n + 4) eps at n = 20 and
   seventeen times at the largest degree. */
#include "curve.h"
#include "record_parts.h"

#include <math.h>
#include <string.h>

static const double tolerance = 1e-12;

enum { QUARTERS = 4 };

kel_status
kel__checks_make(kel_record *record, kel_error *err)
{
    kel_content *content = &record->content;
    const double lo = content->range.lo, hi = content->range.hi, reference = content->reference_temperature;
    kel_check *checks = kel_arena_take(record->memory, QUARTERS + 2, sizeof *checks);
    if (checks == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for check values");
    size_t n = 0;
    bool has_reference = !(lo <= reference && reference <= hi);
    for (int q = 0; q <= QUARTERS; q++) {
        double t = q == QUARTERS ? hi : lo + (hi - lo) * q / QUARTERS;
        /* A range of one temperature, or of a few neighbouring doubles, has fewer. */
        if (n > 0 && t <= checks[n - 1].at)
            continue;
        checks[n++].at = t;
        has_reference = has_reference || t == reference;
    }
    if (!has_reference)
        checks[n++].at = reference;
    for (size_t i = 0; i < n; i++) {
        kel_answer coefficient, expansion;
        kel_status status = kel_record_coefficient(&coefficient, record, checks[i].at, err);
        if (status >= KEL_OK)
            status = kel_record_expansion(&expansion, record, checks[i].at, err);
        if (status < KEL_OK || !isfinite(coefficient.value) || !isfinite(expansion.value)) {
            char at[KEL_NUMBER_SIZE];
            kel_number_format(at, checks[i].at);
            return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "the curve has no finite coefficient and expansion at %s K",
                                 at);
        }
        checks[i].coefficient = coefficient.value;
        checks[i].expansion = expansion.value;
    }
    content->checks = checks;
    content->check_count = n;
    return KEL_OK;
}

/* S of a piece at t: sum |c_k| max(1, |T_k(x)|). Beyond the piece |T_k| grows with the distance. */
static double
largest_term(const kel_content *content, const kel_piece *piece, double t)
{
    double row[KEL_COEFFICIENTS_MAX], sum = 0.0;
    kel__row_value(row, piece, t);
    for (size_t k = 0; k < piece->count; k++)
        sum += fabs(content->mean.coefficients[piece->first + k]) * fmax(1.0, fabs(row[k]));
    return sum;
}

/* Integral of S between two temperatures, and the steps between them. */
static double
largest_integral(const kel_content *content, double a, double b)
{
    const double lo = fmin(a, b), hi = fmax(a, b);
    double sum = 0.0;
    for (size_t i = 0; i < content->piece_count; i++) {
        const kel_piece *p = &content->pieces[i];
        /* The end pieces go on outside. */
        double from = i == 0 ? lo : fmax(lo, p->from), to = i + 1 == content->piece_count ? hi : fmin(hi, p->to);
        if (from < to)
            sum += (to - from) * fmax(largest_term(content, p, from), largest_term(content, p, to));
    }
    for (size_t i = 0; i < content->transition_count; i++)
        if (lo < content->transitions[i].at && content->transitions[i].at <= hi)
            sum += fabs(content->mean.steps[i]);
    return sum;
}

static kel_status
mismatch(const char *what, double at, double want, double got, const char *unit, kel_error *err)
{
    char t[KEL_NUMBER_SIZE], w[KEL_NUMBER_SIZE], g[KEL_NUMBER_SIZE];
    kel_number_format(t, at);
    kel_number_format(w, want);
    kel_number_format(g, got);
    return kel_error_set(err, KEL_E_DIGEST, 0, 0, "the check value of the %s at %s K is %s%s, but the curve gives %s%s",
                         what, t, w, unit, g, unit);
}

kel_status
kel__checks_compare(const kel_record *record, kel_error *err)
{
    const kel_content *content = &record->content;
    if (content->check_count == 0)
        return kel_error_set(err, KEL_E_DATA, 0, 0, "checks is empty");
    for (size_t i = 0; i < content->check_count; i++) {
        const kel_check *check = &content->checks[i];
        kel_answer coefficient, expansion;
        if (!kel_record_inside(record, check->at))
            return kel_error_set(err, KEL_E_DATA, 0, 0, "checks[%zu].temperature_K lies outside the validity range", i);
        kel_status status = kel_record_coefficient(&coefficient, record, check->at, err);
        if (status >= KEL_OK)
            status = kel_record_expansion(&expansion, record, check->at, err);
        if (status < KEL_OK)
            return status;
        const kel_piece *piece = &content->pieces[kel__piece_find(content, check->at)];
        double limit = tolerance * largest_term(content, piece, check->at);
        /* Negated, so that a NaN is a mismatch. */
        if (!(fabs(coefficient.value - check->coefficient) <= limit))
            return mismatch("coefficient", check->at, check->coefficient, coefficient.value, " 1/K", err);
        limit = tolerance * largest_integral(content, content->reference_temperature, check->at);
        if (content->base == KEL_BASE_CURRENT)
            limit *= 1.0 + fabs(expansion.value);
        if (!(fabs(expansion.value - check->expansion) <= limit))
            return mismatch("expansion", check->at, check->expansion, expansion.value, "", err);
    }
    return KEL_OK;
}

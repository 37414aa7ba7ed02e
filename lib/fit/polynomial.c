/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Published polynomials stand in powers of T, of degC or of a scaled variable, where their terms cancel: on 4 K to
   300 K those of a quartic by four digits and more. All work on them is therefore in twice the precision, from the
   decimal digits on, so that the Chebyshev coefficients that result are right to the last bit or so and published
   values come out in all their digits.

   With x = (T - C)/S, T = m + h y on an interval of midpoint m and half-width h:

       x = a + b y,  a = (m - C)/S,  b = h/S

   Horner's scheme is run in the Chebyshev basis of y: multiply by a + b y, add the next coefficient, where y T_0 = T_1
   and y T_j = (T_(j+1) + T_(j-1))/2. That does both changes of basis at once in n^2 operations. */
#include "polynomial.h"

#include <string.h>

#include "phrase.h"

enum { KEPT_DIGITS = 32, LARGEST_POWER = 290 };

static kel__twofold
power_of_ten(int n)
{
    kel__twofold p = kel__two(1), square = kel__two(10);
    for (; n > 0; n /= 2) {
        if (n % 2 == 1)
            p = kel__two_mul(p, square);
        square = kel__two_mul(square, square);
    }
    return p;
}

static kel__twofold
times_power_of_ten(kel__twofold x, int n)
{
    return n >= 0 ? kel__two_mul(x, power_of_ten(n)) : kel__two_div(x, power_of_ten(-n));
}

/* The digits of a number whose grammar was checked. Beyond 32 of them they no longer count; exponents beyond a
   double's easy range make no sense as a coefficient and give false. */
static bool
read_digits(kel__twofold *out, const char *p, size_t n)
{
    const char *end = p + n;
    bool negative = false, point = false;
    if (*p == '+' || *p == '-')
        negative = *p++ == '-';
    else if (n > 3 && memcmp(p, "\xE2\x88\x92", 3) == 0)
        negative = true, p += 3;
    kel__twofold x = kel__two(0);
    int exponent = 0, digits = 0;
    for (; p < end && *p != 'e' && *p != 'E'; p++) {
        if (*p == '.' || *p == ',') {
            point = true;
        } else if (digits == KEPT_DIGITS) {
            exponent += !point;
        } else {
            x = kel__two_add(kel__two_mul(x, kel__two(10)), kel__two(*p - '0'));
            digits += digits > 0 || *p != '0';
            exponent -= point;
        }
    }
    if (p < end) {
        p++;
        bool down = *p == '-' || (unsigned char)*p == 0xE2;
        p += (unsigned char)*p == 0xE2 ? 3 : *p == '-' || *p == '+' ? 1 : 0;
        int e = 0;
        for (; p < end; p++)
            if (e < 100000)
                e = 10 * e + (*p - '0');
        exponent += down ? -e : e;
    }
    if (exponent > LARGEST_POWER || exponent < -LARGEST_POWER)
        return false;
    x = times_power_of_ten(x, exponent);
    *out = negative ? kel__two_negative(x) : x;
    return true;
}

kel__twofold
kel__two_unit(const kel_unit *unit)
{
    kel__twofold ratio = kel__two_div(kel__two((double)unit->numerator), kel__two((double)unit->denominator));
    return times_power_of_ten(ratio, unit->exponent);
}

kel__twofold
kel__two_in_unit(kel__twofold x, const kel_unit *unit)
{
    kel__twofold offset = kel__two_div(kel__two((double)unit->offset_e2), kel__two(100));
    return kel__two_mul(kel__two_add(x, offset), kel__two_unit(unit));
}

kel_status
kel__two_read(kel__twofold *out, const kel_unit *unit, const char *text, size_t n, bool comma, size_t line,
              size_t column, kel_error *err)
{
    double rounded;
    *out = kel__two(0);
    kel_status status = kel__number_text(&rounded, unit, text, n, comma, line, column, err);
    if (status != KEL_OK)
        return status;
    if (!read_digits(out, text, n))
        *out = kel__two(rounded);
    else if (unit != NULL)
        *out = kel__two_in_unit(*out, unit);
    return KEL_OK;
}

kel__twofold
kel__poly_variable(const kel__variable *variable, double t)
{
    return kel__two_div(kel__two_sub(kel__two(t), variable->centre), variable->scale);
}

kel__twofold
kel__poly_value(const kel__twofold *c, size_t n, kel__twofold x)
{
    kel__twofold p = kel__two(0);
    while (n-- > 0)
        p = kel__two_add(kel__two_mul(p, x), c[n]);
    return p;
}

double
kel__poly_largest(const kel__twofold *c, size_t n, kel__twofold x)
{
    double power = 1, largest = 0;
    for (size_t k = 0; k < n; k++, power *= x.hi)
        largest = fmax(largest, fabs(c[k].hi * power));
    return largest;
}

size_t
kel__poly_derivative(kel__twofold *c, size_t n, const kel__variable *variable)
{
    for (size_t k = 1; k < n; k++)
        c[k - 1] = kel__two_div(kel__two_mul(c[k], kel__two((double)k)), variable->scale);
    if (n > 1)
        return n - 1;
    c[0] = kel__two(0);
    return 1;
}

void
kel__poly_chebyshev(double *out, const kel__twofold *c, size_t n, const kel__variable *variable, double from, double to,
                    kel__twofold *work)
{
    const kel__twofold half = kel__two(0.5);
    kel__twofold m = kel__two_mul(kel__two_sum(from, to), half), h = kel__two_mul(kel__two_sum(to, -from), half);
    kel__twofold a = kel__two_div(kel__two_sub(m, variable->centre), variable->scale);
    kel__twofold b = kel__two_div(h, variable->scale);
    kel__twofold *q = work, *next = work + n;
    for (size_t j = 0; j < n; j++)
        q[j] = kel__two(0);
    for (size_t k = n, size = 0; k-- > 0; size++) {
        /* next = (a + b y) q + c[k]; q holds `size` coefficients. */
        for (size_t j = 0; j < n; j++)
            next[j] = kel__two_mul(a, q[j]);
        for (size_t j = 0; j < size && j + 1 < n; j++) {
            kel__twofold t = kel__two_mul(b, q[j]);
            if (j == 0) {
                next[1] = kel__two_add(next[1], t);
                continue;
            }
            t = kel__two_mul(t, half);
            next[j + 1] = kel__two_add(next[j + 1], t);
            next[j - 1] = kel__two_add(next[j - 1], t);
        }
        next[0] = kel__two_add(next[0], c[k]);
        kel__twofold *swap = q;
        q = next;
        next = swap;
    }
    for (size_t j = 0; j < n; j++)
        out[j] = q[j].hi + q[j].lo;
}

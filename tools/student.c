/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The factor by which a standard uncertainty with nu degrees of freedom is multiplied for 95 % coverage: the 97.5 %
   point of Student's distribution. Its two tails beyond t hold I_x(nu/2, 1/2) with x = nu/(nu + t^2), the regularised
   incomplete beta function, here by its continued fraction evaluated with the modified Lentz algorithm (Lentz 1976;
   Thompson and Barnett 1986). nu need not be whole. Relative error below 1e-9, far beyond the three digits that are
   printed. */
#include "output.h"

/* The continued fraction of I_x(a, b); converges fast for x < (a + 1)/(a + b + 2). */
static double
fraction(double a, double b, double x)
{
    const double tiny = 1e-300;
    double c = 1, d = 1 - (a + b) * x / (a + 1);
    d = 1 / (fabs(d) < tiny ? tiny : d);
    double h = d;
    for (int m = 1; m <= 1000; m++) {
        double even = m * (b - m) * x / ((a + 2 * m - 1) * (a + 2 * m));
        double odd = -(a + m) * (a + b + m) * x / ((a + 2 * m) * (a + 2 * m + 1));
        for (int k = 0; k < 2; k++) {
            double term = k == 0 ? even : odd;
            d = 1 + term * d;
            d = 1 / (fabs(d) < tiny ? tiny : d);
            c = 1 + term / c;
            c = fabs(c) < tiny ? tiny : c;
            h *= d * c;
        }
        if (fabs(d * c - 1) < 1e-15)
            break;
    }
    return h;
}

/* Probability outside -t..t. */
static double
tails(double t, double nu)
{
    int sign;
    double a = nu / 2, b = 0.5, x = nu / (nu + t * t), y = t * t / (nu + t * t);
    double front = exp(lgamma_r(a + b, &sign) - lgamma_r(a, &sign) - lgamma_r(b, &sign) + a * log(x) + b * log(y));
    return x < (a + 1) / (a + b + 2) ? front * fraction(a, b, x) / a : 1 - front * fraction(b, a, y) / b;
}

double
student_factor(double nu)
{
    /* The factor lies between that of the normal distribution and, at nu = 0.1, some 1e11; halving the logarithm's
       range is quick enough and cannot fail. */
    double lo = log(1.9), hi = log(1e13);
    for (int i = 0; i < 100; i++) {
        double middle = (lo + hi) / 2;
        if (tails(exp(middle), nu) > 0.05)
            lo = middle;
        else
            hi = middle;
    }
    return exp((lo + hi) / 2);
}

/* SPDX-License-Identifier: Apache-2.0 */
/* Plain decimal text to double, correctly rounded, independent of locale. strtod is no help here: it takes hex, nan,
   inf, leading blanks and the locale's point, and needs a terminated string. */
#include "decimal.h"

#include <math.h>

/* Says what is wrong at byte `used` of something that starts like a number, or does not. */
static kel_status
refuse(const char *bytes, size_t n, size_t used, kel_error *err)
{
    char quote[KEL__QUOTE_SIZE];
    if (err == NULL)
        return KEL_E_SYNTAX;
    if (n == 0)
        return kel_error_set(err, KEL_E_SYNTAX, 0, 1, "a number is missing");
    kel__quote(quote, bytes, n);
    if (used > 0 && bytes[used] == ',')
        return kel_error_set(err, KEL_E_SYNTAX, 0, used + 1,
                             "'%s' is not a number: a comma at byte %zu where a decimal point belongs", quote,
                             used + 1);
    if (used > 0)
        return kel_error_set(err, KEL_E_SYNTAX, 0, used + 1, "'%s' is not a number: it ends before byte %zu", quote,
                             used + 1);
    return kel_error_set(err, KEL_E_SYNTAX, 0, 1, "'%s' is not a plain decimal number", quote);
}

kel_status
kel_number_read(double *out, const char *bytes, size_t n, kel_error *err)
{
    static const kel__factor one = { 0, 1, 1, 0 };
    kel__decimal d;
    *out = (double)NAN;
    size_t used = n == 0 ? 0 : kel__decimal_scan(&d, bytes, n);
    if (used != n || n == 0)
        return refuse(bytes, n, used, err);
    kel_status status = kel__decimal_round(out, &d, &one);
    if (status == KEL_OK)
        return KEL_OK;
    char quote[KEL__QUOTE_SIZE];
    *out = (double)NAN;
    return kel_error_set(err, status, 0, 1, "%s is beyond the range of a double, 1.8e308",
                         err == NULL ? "" : kel__quote(quote, bytes, n));
}

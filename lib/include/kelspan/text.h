/* SPDX-License-Identifier: Apache-2.0 */
/* A growing text buffer, numbers as text, and a small JSON writer with a fixed layout. */
#ifndef KELSPAN_TEXT_H
#define KELSPAN_TEXT_H

#include <stdbool.h>
#include <stdint.h>
#include <kelspan/status.h>

#ifdef __cplusplus
extern "C" {
#endif

/* A growing buffer. Start with KEL_TEXT_INIT. Once memory ran out `failed` is set, further calls do nothing, and
   bytes holds what came before; so one check at the end is enough. bytes is NUL-terminated once anything was added
   (NULL before). */
typedef struct kel_text {
    char *bytes;
    size_t size;      /* bytes in use, terminator not counted */
    size_t capacity;
    bool failed;
} kel_text;

#define KEL_TEXT_INIT { NULL, 0, 0, false }

KEL_API void kel_text_free(kel_text *text);   /* releases and returns to KEL_TEXT_INIT */
KEL_API void kel_text_clear(kel_text *text);  /* empties, keeps the memory */
KEL_API void kel_text_add(kel_text *text, const char *string);
KEL_API void kel_text_add_bytes(kel_text *text, const char *bytes, size_t n);
KEL_API void kel_text_printf(kel_text *text, const char *format, ...)
#if defined __GNUC__
    __attribute__((format(printf, 2, 3)))
#endif
    ;
/* Appends the shortest decimal that reads back as x ("nan", "inf", "-inf" for those). Independent of locale. */
KEL_API void kel_text_number(kel_text *text, double x);
/* Appends data with control bytes and invalid UTF-8 as \xNN, so that it is safe on a terminal and in one line. */
KEL_API void kel_text_quote(kel_text *text, const char *bytes, size_t n);

/* Shortest decimal digits that read back as x, into out (at least KEL_NUMBER_SIZE bytes), NUL-terminated; returns the
   length. Layout: plain notation for 1e-5 <= |x| < 1e17 (100, 0.00123), else d.ddde-7; "0", "-0", "nan", "inf", "-inf".
   */
#define KEL_NUMBER_SIZE 32
KEL_API size_t kel_number_format(char *out, double x);

/* x with `digits` significant digits (1 to 17) correctly rounded, trailing zeros kept, locale-free. Plain notation from
   1e-4 up to 10^digits, at least 1e6 ("12300" where only three digits count); "0" for both zeros. out: KEL_NUMBER_SIZE
   bytes. */
KEL_API size_t kel_number_format_digits(char *out, double x, int digits);
/* x with `decimals` digits behind the point (0 to 30), correctly rounded, locale-free. out: KEL_NUMBER_FIXED_SIZE
   bytes; |x| >= 1e22 falls back to 17 significant digits. What rounds to zero has no sign. */
#define KEL_NUMBER_FIXED_SIZE 64
KEL_API size_t kel_number_format_fixed(char *out, double x, int decimals);

/* Reads a plain decimal number that fills the n bytes exactly (sign; digits with at most one point; optional exponent).
   Correctly rounded. The Unicode minus U+2212 counts as "-". Refuses hex, nan, inf, blanks, decimal comma, and values
   beyond the range of a double (KEL_E_RANGE); err->column is the 1-based offending byte. Since 0.1. */
KEL_API kel_status kel_number_read(double *out, const char *bytes, size_t n, kel_error *err);

/* A JSON writer over a kel_text: two blanks of indent, "key": value, arrays of numbers on one line, everything else one
   member a line; NaN and infinities are written as null. Keys and strings are given as UTF-8; invalid bytes become
   U+FFFD. Layout is fixed: equal calls give equal bytes. */
typedef struct kel_json {
    kel_text *text;
    unsigned depth;
    uint64_t is_array; /* bit d: level d is an array */
    uint64_t is_inline; /* bit d: level d is written on one line */
    bool any;          /* the current level has a member already */
} kel_json;

KEL_API void kel_json_begin(kel_json *json, kel_text *text);         /* no output */
KEL_API void kel_json_object(kel_json *json, const char *key);       /* key is NULL at the top and inside arrays */
KEL_API void kel_json_array(kel_json *json, const char *key);
KEL_API void kel_json_inline_object(kel_json *json, const char *key); /* on one line, with all it contains */
KEL_API void kel_json_inline_array(kel_json *json, const char *key);
/* closes the innermost object or array; a newline after the outermost */
KEL_API void kel_json_end(kel_json *json);
KEL_API void kel_json_number(kel_json *json, const char *key, double x);
KEL_API void kel_json_count(kel_json *json, const char *key, uint64_t n);
KEL_API void kel_json_bool(kel_json *json, const char *key, bool b);
KEL_API void kel_json_null(kel_json *json, const char *key);
KEL_API void kel_json_string(kel_json *json, const char *key, const char *string); /* NULL string: null */
KEL_API void kel_json_numbers(kel_json *json, const char *key, const double *x, size_t n); /* array on one line */
KEL_API void kel_json_raw(kel_json *json, const char *key, const char *value);  /* value is JSON already */

#ifdef __cplusplus
}
#endif
#endif

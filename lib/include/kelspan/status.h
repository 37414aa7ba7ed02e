/* SPDX-License-Identifier: Apache-2.0 */
/* Status codes and error reports, common to libkelspan and libkelspan-fit. */
#ifndef KELSPAN_STATUS_H
#define KELSPAN_STATUS_H

#include <stddef.h>

#ifdef __cplusplus
extern "C" {
#endif

#define KEL_VERSION "0.1.0"

#if defined __GNUC__
#define KEL_API __attribute__((visibility("default")))
#else
#define KEL_API
#endif

/* The sign of a status is its class: 0 fine; > 0 an answer was delivered with a reservation, the larger the graver;
   < 0 nothing was delivered and outputs hold what the function's comment says (usually NaN or NULL). */
typedef enum kel_status {
    KEL_OK = 0,

    /* The answer's interval crosses a transition. The answer stands; whoever uses it should know. */
    KEL_W_TRANSITION = 1,
    /* The answer leans on a stretch of the validity range without observations. */
    KEL_W_GAP = 2,
    /* The answer uses the curve outside the validity range. */
    KEL_W_EXTRAPOLATED = 3,

    /* A caller's mistake: NULL where an object is needed, a NaN temperature, an unknown enumerator. */
    KEL_E_ARGUMENT = -1,
    /* Memory ran out. Objects that existed before the call are unchanged. */
    KEL_E_NOMEM = -2,
    /* Text that does not follow its grammar; line and column say where. */
    KEL_E_SYNTAX = -3,
    /* A unit that is missing, unknown, or of the wrong dimension; column is the offending byte. */
    KEL_E_UNIT = -4,
    /* A number outside what it can be (below 0 K, beyond the range of a double). */
    KEL_E_RANGE = -5,
    /* Data that contradict themselves, each other or physics. */
    KEL_E_DATA = -6,
    /* The rows do not determine the parameters asked for. */
    KEL_E_RANK = -7,
    /* An iteration did not converge. */
    KEL_E_CONVERGENCE = -8,
    /* Reading or writing failed; the message holds the system's reason. */
    KEL_E_IO = -9,
    /* A record's content does not match its digest or check values. */
    KEL_E_DIGEST = -10,
    /* A record written in a newer format. */
    KEL_E_VERSION = -11
} kel_status;

/* Per-answer flags of the array calls, and of kel_answer. KEL_FLAG_UNKNOWN_U does not raise the status. */
enum {
    KEL_FLAG_EXTRAPOLATED = 1,
    KEL_FLAG_GAP = 2,
    KEL_FLAG_TRANSITION = 4,
    KEL_FLAG_UNKNOWN_U = 8
};

/* Where and why a call failed. Supplied by the caller, who may pass NULL; a successful call leaves it alone.
   Its size is part of the ABI. line and column count from 1; 0 means that the error has no place in a text.
   column counts bytes. message is one line of UTF-8 without a full stop; bytes of the data that are not
   printable appear as \xNN. */
typedef struct kel_error {
    kel_status code;
    size_t line;
    size_t column;
    char message[492];
} kel_error;

/* Fills err (which may be NULL) and returns code, so that a failure is one statement. line and column 0: no place. The
   message is cut to fit at a character's boundary. For the libraries themselves and for programs that build on them.
   Numbers belong into it by kel_number_format, not by %g, which follows the locale. Since 0.1. */
KEL_API kel_status kel_error_set(kel_error *err, kel_status code, size_t line, size_t column, const char *format, ...)
#if defined __GNUC__
    __attribute__((format(printf, 5, 6)))
#endif
    ;

/* A short English name of the status ("extrapolated", "wrong unit", ...). Never NULL. Since 0.1. */
KEL_API const char *kel_status_text(kel_status status);

/* The version of the library that is running, KEL_VERSION of its build. Since 0.1. */
KEL_API const char *kel_version(void);

#ifdef __cplusplus
}
#endif
#endif

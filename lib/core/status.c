/* SPDX-License-Identifier: Apache-2.0 */
/* Error reports: filled in one place, cut to fit without breaking a character. */
#include "core.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

static const struct { kel_status status; const char *text; } names[] = {
    { KEL_OK, "fine" },
    { KEL_W_TRANSITION, "transition crossed" },
    { KEL_W_GAP, "in a gap of the data" },
    { KEL_W_EXTRAPOLATED, "extrapolated" },
    { KEL_E_ARGUMENT, "wrong argument" },
    { KEL_E_NOMEM, "out of memory" },
    { KEL_E_SYNTAX, "wrong syntax" },
    { KEL_E_UNIT, "wrong unit" },
    { KEL_E_RANGE, "number out of range" },
    { KEL_E_DATA, "contradictory data" },
    { KEL_E_RANK, "parameters not determined" },
    { KEL_E_CONVERGENCE, "no convergence" },
    { KEL_E_IO, "reading or writing failed" },
    { KEL_E_DIGEST, "content does not match its digest" },
    { KEL_E_VERSION, "written by a newer kelspan" },
};

const char *
kel_status_text(kel_status status)
{
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        if (names[i].status == status)
            return names[i].text;
    return "unknown status";
}

const char *
kel_version(void)
{
    return KEL_VERSION;
}

/* Drops a UTF-8 character that was cut at the end of the buffer. */
static void
mend_end(char *s)
{
    size_t n = strlen(s), i = n;
    while (i > 0 && n - i < 3 && ((unsigned char)s[i - 1] & 0xC0) == 0x80)
        i--;
    if (i == 0)
        return;
    unsigned char lead = (unsigned char)s[i - 1];
    size_t want = lead >= 0xF0 ? 4 : lead >= 0xE0 ? 3 : lead >= 0xC0 ? 2 : 1;
    if (n - i + 1 < want)
        s[i - 1] = '\0';
}

kel_status
kel_error_set(kel_error *err, kel_status code, size_t line, size_t column, const char *format, ...)
{
    if (err == NULL)
        return code;
    err->code = code;
    err->line = line;
    err->column = column;
    va_list arguments;
    va_start(arguments, format);
    int n = vsnprintf(err->message, sizeof err->message, format, arguments);
    va_end(arguments);
    if (n >= (int)sizeof err->message)
        mend_end(err->message);
    return code;
}

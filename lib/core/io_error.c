/* SPDX-License-Identifier: Apache-2.0 */
/* The system's reason in a message, in the same words whatever the locale, and safe in any thread. */
#include "io_error.h"

#include <locale.h>
#include <string.h>

/* Of a longer path the end is shown, so that the reason behind it is not cut off. */
enum { LONGEST_PATH = 160 };

kel_status
kel__io_error(kel_error *err, const char *action, const char *path, int reason)
{
    size_t n = strlen(path), skipped = n > LONGEST_PATH ? n - LONGEST_PATH : 0;
    /* Not within a character. */
    while (skipped != 0 && skipped < n && ((unsigned char)path[skipped] & 0xC0) == 0x80)
        skipped++;
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, path + skipped, n - skipped);
    locale_t c = newlocale(LC_ALL_MASK, "C", (locale_t)0);
    const char *text =
        c == (locale_t)0 ? "the system gave a reason that there is no memory to tell" : strerror_l(reason, c);
    /* Without memory for the path the reason still counts. */
    kel_error_set(err, KEL_E_IO, 0, 0, "cannot %s '%s%s': %s", action, skipped != 0 ? "..." : "",
                  quoted.failed || quoted.bytes == NULL ? "" : quoted.bytes, text);
    if (c != (locale_t)0)
        freelocale(c);
    kel_text_free(&quoted);
    return KEL_E_IO;
}

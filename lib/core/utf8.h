/* SPDX-License-Identifier: Apache-2.0 */
/* One character of UTF-8. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_UTF8_H
#define KELSPAN_UTF8_H

#include <stddef.h>
#include <stdint.h>

/* Bytes of the character that begins at `bytes`, of which n > 0 are there; its number goes to *point. 0 where the
   bytes are no UTF-8: a stray or missing continuation byte, a longer form than needed, a surrogate, a number above
   U+10FFFF. */
size_t kel__utf8_character(uint32_t *point, const char *bytes, size_t n);

#endif

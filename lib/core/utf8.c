/* SPDX-License-Identifier: Apache-2.0 */
/* UTF-8 as RFC 3629 (section 3) defines it. One decoder for all, so that what one part of the library writes as
   valid is never refused by another. */
#include "utf8.h"

size_t
kel__utf8_character(uint32_t *point, const char *bytes, size_t n)
{
    /* Of a sequence of `size` bytes: the bits that mark its first byte, and the least number that needs so many. */
    static const struct form { unsigned char mask, mark; size_t size; uint32_t least; } forms[] = {
        { 0x80, 0x00, 1, 0x0 }, { 0xE0, 0xC0, 2, 0x80 }, { 0xF0, 0xE0, 3, 0x800 }, { 0xF8, 0xF0, 4, 0x10000 },
    };
    const unsigned char *b = (const unsigned char *)bytes;
    for (size_t f = 0; f < sizeof forms / sizeof forms[0]; f++) {
        if ((b[0] & forms[f].mask) != forms[f].mark)
            continue;
        if (forms[f].size > n)
            return 0;
        uint32_t p = b[0] & (unsigned char)~forms[f].mask;
        for (size_t i = 1; i < forms[f].size; i++) {
            if ((b[i] & 0xC0) != 0x80)
                return 0;
            p = p << 6 | (b[i] & 0x3F);
        }
        if (p < forms[f].least || (p >= 0xD800 && p <= 0xDFFF) || p > 0x10FFFF)
            return 0;
        *point = p;
        return forms[f].size;
    }
    return 0;
}

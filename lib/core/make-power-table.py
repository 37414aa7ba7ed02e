#!/usr/bin/env python3
# SPDX-License-Identifier: Apache-2.0
"""Writes power_table.c: python3 lib/core/make-power-table.py > lib/core/power_table.c

Row k is g(k) = 10^k / 2^(floor(log2 10^k) - 127) rounded up to an integer: the leading 128 bits, exact for
0 <= k <= 55 (5^55 < 2^128).
Before it writes, it checks that the integer forms of the logarithms in shortest.c hold for all exponents that occur.
"""

FIRST, LAST = -292, 324


def floor_log2(n, d):
    """floor(log2(n/d)) for positive integers."""
    e = n.bit_length() - d.bit_length()
    return e if n << max(-e, 0) >= d << max(e, 0) else e - 1


def row(k):
    n, d = (10**k, 1) if k >= 0 else (1, 10**-k)
    s = 127 - floor_log2(n, d)
    n, d = (n << s, d) if s >= 0 else (n, d << -s)
    g = -(-n // d)
    assert 1 << 127 <= g < 1 << 128
    return g


def check():
    for k in range(-400, 401):
        n, d = (10**k, 1) if k >= 0 else (1, 10**-k)
        assert (k * 1741647) >> 19 == floor_log2(n, d)
    for q in range(-1074, 972):
        for regular, value in ((True, (q * 1262611) >> 22), (False, (q * 1262611 - 524031) >> 22)):
            n, d = (1 if regular else 3) << max(q, 0), (1 if regular else 4) << max(-q, 0)
            # 10^value <= n/d < 10^(value + 1)
            lo, hi = 10 ** max(value, 0) * d, 10 ** max(-value, 0) * n
            assert lo <= hi
            lo, hi = 10 ** max(value + 1, 0) * d, 10 ** max(-value - 1, 0) * n
            assert hi < lo
            assert FIRST <= -value <= LAST


def main():
    check()
    print("/* SPDX-License-Identifier: Apache-2.0 */")
    print("/* Powers of ten to 128 bits, written by make-power-table.py: do not edit. */")
    print('#include "power_table.h"')
    print()
    print("const uint64_t kel__power_table[KEL__POWER_LAST - KEL__POWER_FIRST + 1][2] = {")
    for k in range(FIRST, LAST + 1):
        g = row(k)
        print("    { 0x%016X, 0x%016X }, /* 1e%d */" % (g >> 64, g & (1 << 64) - 1, k))
    print("};")


main()

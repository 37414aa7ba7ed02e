/* SPDX-License-Identifier: Apache-2.0 */
/* Powers of ten to 128 bits. */
#ifndef KELSPAN_POWER_TABLE_H
#define KELSPAN_POWER_TABLE_H

#include <stdint.h>

enum { KEL__POWER_FIRST = -292, KEL__POWER_LAST = 324 };

/* Row k - KEL__POWER_FIRST holds the high and the low half of g(k): 10^k = g(k) 2^(floor(log2 10^k) - 127), rounded up,
   2^127 <= g < 2^128. Exact for 0 <= k <= 55. */
extern const uint64_t kel__power_table[KEL__POWER_LAST - KEL__POWER_FIRST + 1][2];

#endif

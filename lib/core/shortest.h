/* SPDX-License-Identifier: Apache-2.0 */
/* The shortest decimal that stands for a double. */
#ifndef KELSPAN_SHORTEST_H
#define KELSPAN_SHORTEST_H

#include <stdint.h>

/* digits 10^*exponent reads back as x and has as few digits as any such number (at most 17); of those it is the nearest
   to x. The last digit is not 0. x is finite and above 0. */
uint64_t kel__shortest(int *exponent, double x);

#endif

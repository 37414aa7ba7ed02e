/* SPDX-License-Identifier: Apache-2.0 */
/* The kernels in plain C, for processors without a compilation of their own. */
#include <math.h>
#include <stdbool.h>

#define LANES 1
#define KERNEL
typedef double vec;
typedef bool mask;

#define v_load(p) (*(p))
#define v_store(p, x) (*(p) = (x))
#define v_set(x) (x)
#define v_add(a, b) ((a) + (b))
#define v_sub(a, b) ((a) - (b))
#define v_mul(a, b) ((a) * (b))
#define v_div(a, b) ((a) / (b))
#define v_fma(a, b, c) ((a) * (b) + (c))
#define v_min(a, b) ((a) < (b) ? (a) : (b))
#define v_max(a, b) ((a) > (b) ? (a) : (b))
#define v_sqrt(a) sqrt(a)
#define v_less(a, b) ((a) < (b))
#define v_at_most(a, b) ((a) <= (b))
#define m_and(a, b) ((a) & (b))
#define m_or(a, b) ((a) | (b))
#define m_bits(a) ((a) ? 1u : 0u)
#define v_pick(m, x) ((m) ? (x) : 0.0)
#define v_signed(x, a, b) ((b) < (a) ? -(x) : (x))
#define put_bytes(p, word) (*(p) = (unsigned char)((word) & 255u))

#include "kernel_body.h"

static bool
runs(void)
{
    return true;
}

const kel__kernel_code kel__kernel_plain = { "plain C", runs, flags, values };

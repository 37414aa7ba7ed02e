/* SPDX-License-Identifier: Apache-2.0 */
/* The kernels with two doubles in a vector: SSE2, which every x86-64 processor has. */
#if defined __x86_64__ && defined __GNUC__

#include <immintrin.h>

#define LANES 2
#define KERNEL
typedef __m128d vec, mask;

#define v_load(p) _mm_loadu_pd(p)
#define v_store(p, x) _mm_storeu_pd(p, x)
#define v_set(x) _mm_set1_pd(x)
#define v_add(a, b) _mm_add_pd(a, b)
#define v_sub(a, b) _mm_sub_pd(a, b)
#define v_mul(a, b) _mm_mul_pd(a, b)
#define v_div(a, b) _mm_div_pd(a, b)
#define v_fma(a, b, c) _mm_add_pd(_mm_mul_pd(a, b), c)
#define v_min(a, b) _mm_min_pd(a, b)
#define v_max(a, b) _mm_max_pd(a, b)
#define v_sqrt(a) _mm_sqrt_pd(a)
#define v_less(a, b) _mm_cmplt_pd(a, b)
#define v_at_most(a, b) _mm_cmple_pd(a, b)
#define m_and(a, b) _mm_and_pd(a, b)
#define m_or(a, b) _mm_or_pd(a, b)
#define m_bits(a) (unsigned)_mm_movemask_pd(a)
#define v_pick(m, x) _mm_and_pd(m, x)
/* The sign of b - a: +0 where they are equal. */
#define v_signed(x, a, b) _mm_xor_pd(x, _mm_and_pd(_mm_sub_pd(b, a), _mm_set1_pd(-0.0)))
#define put_bytes(p, word) memcpy(p, &(word), LANES)

#include "kernel_body.h"

static bool
runs(void)
{
    return true;
}

const kel__kernel_code kel__kernel_sse2 = { "sse2", runs, flags, values };

#else

/* No translation unit is empty. */
typedef int kel__no_kernel_sse2;

#endif

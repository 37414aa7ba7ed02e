/* SPDX-License-Identifier: Apache-2.0 */
/* The kernels with four doubles in a vector and fused products: AVX2 and FMA, as x86-64 processors have them since
   2013. Only these functions are compiled for them, so that the library starts on any x86-64. */
#if defined __x86_64__ && defined __GNUC__

#include <immintrin.h>

#define LANES 4
#define KERNEL __attribute__((target("avx2,fma")))
typedef __m256d vec, mask;

#define v_load(p) _mm256_loadu_pd(p)
#define v_store(p, x) _mm256_storeu_pd(p, x)
#define v_set(x) _mm256_set1_pd(x)
#define v_add(a, b) _mm256_add_pd(a, b)
#define v_sub(a, b) _mm256_sub_pd(a, b)
#define v_mul(a, b) _mm256_mul_pd(a, b)
#define v_div(a, b) _mm256_div_pd(a, b)
#define v_fma(a, b, c) _mm256_fmadd_pd(a, b, c)
#define v_min(a, b) _mm256_min_pd(a, b)
#define v_max(a, b) _mm256_max_pd(a, b)
#define v_sqrt(a) _mm256_sqrt_pd(a)
#define v_less(a, b) _mm256_cmp_pd(a, b, _CMP_LT_OQ)
#define v_at_most(a, b) _mm256_cmp_pd(a, b, _CMP_LE_OQ)
#define m_and(a, b) _mm256_and_pd(a, b)
#define m_or(a, b) _mm256_or_pd(a, b)
#define m_bits(a) (unsigned)_mm256_movemask_pd(a)
#define v_pick(m, x) _mm256_and_pd(m, x)
/* The sign of b - a: +0 where they are equal. */
#define v_signed(x, a, b) _mm256_xor_pd(x, _mm256_and_pd(_mm256_sub_pd(b, a), _mm256_set1_pd(-0.0)))
#define put_bytes(p, word) memcpy(p, &(word), LANES)

#include "kernel_body.h"

static bool
runs(void)
{
    return __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
}

const kel__kernel_code kel__kernel_avx2 = { "avx2", runs, flags, values };

#else

/* No translation unit is empty. */
typedef int kel__no_kernel_avx2;

#endif

/* SPDX-License-Identifier: Apache-2.0 */
/* Integrals, means and values of many intervals at once: what the array calls use where it is accurate enough.
   kernel.c has the method and its error bound. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_KERNEL_H
#define KELSPAN_KERNEL_H

#include "core.h"

/* Elements are worked on in groups of this many, whatever the width of the processor's vectors. */
enum { KEL__KERNEL_GROUP = 16 };

/* Largest degree of a piece, and largest number of numbers a curve may have (coefficients of all pieces and steps). */
enum { KEL__KERNEL_COUNT = 13, KEL__KERNEL_NUMBERS = 96 };

/* Of an element that the kernels leave to the scalar way: no temperature, above KEL__KERNEL_LARGEST, or the mean over
   no interval. Beside the KEL_FLAG_... in a byte. */
enum { KEL__KERNEL_LEFT = 128 };
#define KEL__KERNEL_LARGEST 1e6 /* K */

typedef enum kel__task {
    KEL__TASK_INTEGRAL, /* from..to, with the steps crossed */
    KEL__TASK_MEAN,     /* that over to - from */
    KEL__TASK_VALUE     /* the curve at `to` */
} kel__task;

/* Temperatures are clamped to from..to, which are infinite for the ends of the curve. Of a curve's numbers
   numbers[first + j], j < count, are p_j/(j + 1), p_j the coefficient of (T - centre)^j. */
typedef struct kel__kernel_piece {
    double from, to, centre;
    size_t first, count;
} kel__kernel_piece;

typedef struct kel__kernel_code kel__kernel_code;

/* Curve 0 is the mean curve, the others are the modes; each has `stride` numbers, its steps last. */
typedef struct kel__kernel {
    const kel__kernel_code *code;
    const kel_content *content;
    const kel__kernel_piece *pieces;
    const double *numbers;
    size_t stride, curve_count;
} kel__kernel;

/* One compilation of the kernels. n is a multiple of KEL__KERNEL_GROUP. `from` and `to` are read before the outputs of
   the same group are written, so that an output may lie where an input lay. flags: the flags of each element,
   KEL__KERNEL_LEFT among them; returns all of them together. values: value[n], and u[n] if it is not NULL. An element
   to be left gets any number. */
struct kel__kernel_code {
    const char *name;
    bool (*runs)(void); /* on this processor */
    unsigned (*flags)(unsigned char *flags, const kel__kernel *kernel, kel__task task, const double *from,
                      const double *to, size_t n);
    void (*values)(double *value, double *u, const kel__kernel *kernel, kel__task task, const double *from,
                   const double *to, size_t n);
};

/* The compilations that there are, the fastest first; the last one, in plain C, runs anywhere. NULL ends the list. */
extern const kel__kernel_code kel__kernel_avx2, kel__kernel_sse2, kel__kernel_plain;
extern const kel__kernel_code *const kel__kernel_codes[];

/* *out = NULL, with KEL_OK, where the curve is none that the kernels answer accurately. content is to outlive it.
   KEL_E_NOMEM. */
kel_status kel__kernel_make(const kel__kernel **out, const kel_content *content, kel_arena *memory, kel_error *err);

#endif

/* SPDX-License-Identifier: Apache-2.0 */
/* What the files of libkelspan share among themselves. Not installed. */
#ifndef KELSPAN_CORE_H
#define KELSPAN_CORE_H

#include <kelspan.h>

#if defined __FAST_MATH__
#error "kelspan needs IEEE arithmetic: do not compile with -ffast-math"
#endif

/* The record owns one arena (`memory`) that everything content points to lives in. `kernel` is what the array calls use
   (kernel.h), NULL where they go the scalar way. */
struct kel_record {
    kel_content content;
    const struct kel__kernel *kernel;
    kel_arena *memory;
};

#endif

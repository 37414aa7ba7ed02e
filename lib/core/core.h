/* SPDX-License-Identifier: Apache-2.0 */
/* What the files of libkelspan share among themselves. Not installed. */
#ifndef KELSPAN_CORE_H
#define KELSPAN_CORE_H

#include <kelspan.h>

#if defined __FAST_MATH__
#error "kelspan needs IEEE arithmetic: do not compile with -ffast-math"
#endif

/* The record owns one arena (`memory`) that everything content points to lives in. */
struct kel_record {
    kel_content content;
    kel_arena *memory;
};

#endif

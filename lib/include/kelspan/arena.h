/* SPDX-License-Identifier: Apache-2.0 */
/* Memory that is released all at once: for objects made of many small arrays and strings. */
#ifndef KELSPAN_ARENA_H
#define KELSPAN_ARENA_H

#include <kelspan/status.h>

#ifdef __cplusplus
extern "C" {
#endif

typedef struct kel_arena kel_arena;

/* NULL if memory ran out. */
KEL_API kel_arena *kel_arena_new(void);
KEL_API void kel_arena_free(kel_arena *arena);

/* n * size bytes set to zero, aligned for any object; NULL if memory ran out or n * size overflows. A request of
   nothing gives a valid pointer. Since 0.1. */
KEL_API void *kel_arena_take(kel_arena *arena, size_t n, size_t size);

/* Copies; NULL if memory ran out, and for a NULL string. Since 0.1. */
KEL_API char *kel_arena_string(kel_arena *arena, const char *string);
KEL_API char *kel_arena_bytes(kel_arena *arena, const char *bytes, size_t n); /* NUL-terminated */
KEL_API void *kel_arena_copy(kel_arena *arena, const void *from, size_t n, size_t size);

#ifdef __cplusplus
}
#endif
#endif

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A heap that fails on demand, and counts. Link failing_malloc.c into the program: its malloc and its kin then serve
   the program and every library that it loads (jansson, LAPACKE, libcsv, the C library's strdup).

   It stands on the C library's own heap by the names that glibc keeps for that. Where there are none, under
   AddressSanitizer, and under a tool that puts its own heap in, nothing can be failed: allocation_fails() says so. */
#ifndef KEL_TEST_FAILING_MALLOC_H
#define KEL_TEST_FAILING_MALLOC_H

#include <stdbool.h>
#include <stddef.h>

/* Can allocations be failed here? */
bool allocation_fails(void);

/* From now on calls are counted, and the one with number n fails, from 1; `onwards`: all from that one on. 0: none. */
void allocation_arm(size_t n, bool onwards);

/* Everything works again. Returns the number of calls since it was armed. */
size_t allocation_disarm(void);

/* Blocks that are in use. */
long allocation_live(void);

#endif

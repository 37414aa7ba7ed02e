/* SPDX-License-Identifier: GPL-3.0-or-later */
/* System calls of a save that fail on demand, one by one, or end the process. Link failing_files.c into the program:
   its write, fsync, rename and their kin then serve the library that is linked into it. */
#ifndef KEL_TEST_FAILING_FILES_H
#define KEL_TEST_FAILING_FILES_H

#include <stdbool.h>
#include <stddef.h>

typedef enum file_fault {
    FILE_FAIL,          /* the call does nothing and reports `error` */
    FILE_INTERRUPT,     /* once, by EINTR; what would be done again then works */
    FILE_KILL_BEFORE,   /* the process ends by SIGKILL before the call, after it, or when half of a write is done */
    FILE_KILL_AFTER,
    FILE_KILL_WITHIN
} file_fault;

/* The n-th call from now on, from 1, has the fault; 0: none. Each write takes at most `chunk` bytes, so that a save has
   many of them; 0: no limit. */
void files_arm(size_t n, file_fault fault, int error, size_t chunk);

/* Everything works again. Returns the number of calls since it was armed. */
size_t files_disarm(void);

/* The name of the call that had the fault, NULL if none had. */
const char *files_failed(void);

#endif

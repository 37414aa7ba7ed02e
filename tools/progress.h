/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Progress of work that takes over a second, on a terminal only. */
#ifndef KELSPAN_PROGRESS_H
#define KELSPAN_PROGRESS_H

#include "job.h"

#include <time.h>

typedef struct progress {
    bool wanted, shown;
    const char *work;
    struct timespec start, last;
} progress;

void progress_begin(progress *p, const job *j, const char *work);
void progress_next(progress *p, const char *work);
/* Callbacks of the libraries; context is the progress. */
void progress_rows(void *context, size_t rows, size_t bytes);
void progress_share(void *context, double share);
/* Clears the line. */
void progress_end(progress *p);

#endif

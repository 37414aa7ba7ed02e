/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Progress of work that takes over a second: one line on stderr that is written over and cleared at the end. Only where
   stderr is a terminal, so that no log fills with it; not with --quiet or --json. */
#include "progress.h"

#include "messages.h"

#include <string.h>
#include <unistd.h>

static double
seconds(const struct timespec *from, const struct timespec *to)
{
    return (double)(to->tv_sec - from->tv_sec) + 1e-9 * (double)(to->tv_nsec - from->tv_nsec);
}

/* Costs a system call, so it is asked once. */
void
progress_begin(progress *p, const job *j, const char *work)
{
    *p = (progress){ .wanted = !j->quiet && !j->json && isatty(STDERR_FILENO) != 0, .work = work };
    if (p->wanted) {
        clock_gettime(CLOCK_MONOTONIC, &p->start);
        p->last = p->start;
    }
}

void
progress_next(progress *p, const char *work)
{
    p->work = work;
}

/* Is it time for another line: a second after the start, then four times a second. */
static bool
due(progress *p)
{
    struct timespec now;
    if (!p->wanted)
        return false;
    clock_gettime(CLOCK_MONOTONIC, &now);
    if (seconds(&p->start, &now) < 1 || seconds(&p->last, &now) < 0.25)
        return false;
    p->last = now;
    p->shown = true;
    return true;
}

static void
show(const kel_text *line)
{
    if (!line->failed)
        say_line(line->bytes, line->size);
}

void
progress_rows(void *context, size_t rows, size_t bytes)
{
    progress *p = context;
    if (!due(p))
        return;
    kel_text line = KEL_TEXT_INIT;
    kel_text_printf(&line, "\r%s: %zu rows", p->work, rows);
    if (bytes > 0)
        kel_text_printf(&line, ", %zu MiB", bytes >> 20);
    kel_text_add(&line, "\033[K");
    show(&line);
    kel_text_free(&line);
}

void
progress_share(void *context, double share)
{
    progress *p = context;
    if (!due(p))
        return;
    kel_text line = KEL_TEXT_INIT;
    kel_text_printf(&line, "\r%s: %d %%\033[K", p->work, (int)(100 * share));
    show(&line);
    kel_text_free(&line);
}

/* The line must be gone before a message is written. */
void
progress_end(progress *p)
{
    if (p->shown)
        say_line("\r\033[K", 4);
    p->shown = false;
}

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Integrals for a stream of intervals. */
#ifndef KELSPAN_STREAM_PAIRS_H
#define KELSPAN_STREAM_PAIRS_H

#include "files.h"

/* Reads CSV rows `from,to[,length]` of the file and writes a row with the integral for each on stdout. Gives the exit
   status. */
int stream_pairs(job *j, const subject *s, const char *name);

#endif

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What must hold of every record, wherever it came from. */
#ifndef KEL_FUZZ_ANSWERS_H
#define KEL_FUZZ_ANSWERS_H

#include "fuzz.h"

/* The record is written, parsed and written again to the same bytes, which are appended to *text unless that is NULL;
   then asked everything at its own temperatures and beside them. */
void fuzz_record(const kel_record *record, kel_text *text);

#endif

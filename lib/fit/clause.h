/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The two metadata values with a grammar of their own. Not installed. */
#ifndef KELSPAN_CLAUSE_H
#define KELSPAN_CLAUSE_H

#include "metadata.h"

/* `uncertainty:` (and `lot spread:`, where `shared` and `independent` have no place). entry->value must outlive the
   clause. */
kel_status kel__clause_parse(kel__clause *out, const kel__entry *entry, bool lot, bool comma, kel_error *err);

/* `transition:` T | T step | T step VALUE | T step VALUE [UNIT]. */
kel_status kel__transition_parse(kel_declared_transition *out, const kel__entry *entry, bool comma, kel_error *err);

#endif

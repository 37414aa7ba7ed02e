/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What fit, adopt, show and residuals say of a record, for people and for programs. */
#ifndef KELSPAN_REPORT_H
#define KELSPAN_REPORT_H

#include "output.h"

/* The members of a record that scripts rely on, from `form` to `variance`, into an open object. */
void json_summary(kel_json *json, const kel_content *c);
/* What the fit says beside its record. */
void json_fit_report(kel_json *json, const kel_content *c, const kel_fit_report *r);

/* Why an observation takes no part: the table's own reason, or the range asked for, whose ends may be NaN. NULL: it
   takes part. */
const char *why_left_out(const kel_observation *o, kel_interval asked);
/* One table as it was read, two or three lines. asked: as above. assumed: where the table states no reference
   temperature, 293.15 K serves. */
void text_table(kel_text *out, const kel_table *t, const units *in, kel_interval asked, bool assumed);
/* Form, numbers of the fit, validity range, transitions, reference, base, uncertainty. r may be NULL. */
void text_summary(kel_text *out, const kel_content *c, const kel_fit_report *r, const units *in);
/* The candidates among which the degree was chosen. */
void text_candidates(kel_text *out, const kel_content *c, const kel_fit_report *r, const units *in);
/* alpha with its U at the ends and in the middle of each piece. EXIT_FINE or EXIT_FAILED. */
int text_answers(const job *j, kel_text *out, const kel_record *record, const units *in);
/* Observations with residuals; only the fitted ones if `fitted`. */
void text_residuals(kel_text *out, const kel_content *c, const units *in, bool fitted);

/* "T" or "Ta to Tb" of an observation, in the unit. */
void add_row_temperatures(kel_text *out, const kel_unit *unit, const kel_fitted *row);
/* The unit in which values of a kind are shown to people: coefficients in that asked for, expansions in 1e-6. */
double show_value(const units *in, kel_kind kind, double si);
const char *show_unit(const units *in, kel_kind kind);

/* A label in the left margin of a report. */
void add_label(kel_text *out, const char *label);
/* `before` and the text, made safe; nothing for NULL. */
void add_quoted(kel_text *out, const char *before, const char *text);
void add_interval(kel_text *out, const kel_unit *unit, double lo, double hi);

#endif

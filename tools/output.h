/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers for people: units of the question, digits that the uncertainty supports, aligned tables. */
#ifndef KELSPAN_OUTPUT_H
#define KELSPAN_OUTPUT_H

#include "job.h"

/* The units in which people get their answer. */
typedef struct units {
    kel_unit temperature, coefficient, length;
    bool temperature_asked, coefficient_asked, length_asked; /* by an option: the question's own unit does not count */
} units;

/* The --...-unit options; without them K, 1e-6/K (1/K in CSV) and m. EXIT_FINE or EXIT_USAGE. */
int units_begin(const job *j, units *out);
/* Takes over the temperature unit of the question, and a coefficient unit that goes with it. */
void units_follow(units *u, const kel_unit *asked);
/* The unit for a change of a length: um or mil where it is small in the length's own unit. */
kel_unit change_unit(const units *u, double change);

/* "293.15 K". */
void add_temperature(kel_text *out, const kel_unit *unit, double kelvin);
/* A difference of temperatures in the unit's degrees: "73 K" for K and degC. */
void add_difference(kel_text *out, const kel_unit *unit, double kelvin);
/* "293.15", in the unit, at most `4` decimals without trailing zeros. */
void add_temperature_number(kel_text *out, const kel_unit *unit, double kelvin);

/* Decimals at which an uncertainty U shows two significant digits; for a U that is not known or 0 those at which the
   value shows six. Never so many that the value shows more than 12 digits. May be negative: 2 digits of 1234 are 12
   hundreds. */
int decimals_for(double value, double U);
/* x at so many decimals; "not known" for NaN. */
void add_rounded(kel_text *out, double x, int decimals);
/* x with so many significant digits, without trailing zeros; "not known" for NaN. */
void add_digits(kel_text *out, double x, int digits);
/* U at two significant digits, "not known" for NaN. */
void add_uncertainty(kel_text *out, double U, int decimals);

/* Appends the unit to a number: "16.2" + "1e-6/K" is "16.2e-6/K", "3.1" + "mm" is "3.1 mm", "1" adds nothing. */
void add_unit(kel_text *out, const char *name);

/* "16.21e-6/K   U = 0.12e-6/K (k = 2)": value and U = 2u are SI and shown in the unit. */
void add_measured(kel_text *out, const kel_unit *unit, double value, double u);

/* Standard uncertainty of a transition's step from the modes, NaN if not known. */
double step_u(const kel_content *c, size_t transition);
/* What U covers: "scatter of the fit, stated shared error, lot spread". */
void add_covers(kel_text *out, const kel_content *c);
/* Is the variance an estimate from so few degrees of freedom that k = 2 falls short of 95 %? */
bool student_applies(const kel_content *c);
/* The factor for 95 % (two-sided) at nu > 0 degrees of freedom. */
double student_factor(double nu);
/* A line about it, or nothing. */
void add_student(kel_text *out, const kel_content *c);

/* A table of text cells. Numbers are aligned at their decimal point, words at their left. A cell belongs to the
   current row. */
typedef struct columns columns;
columns *columns_new(const char *const *headings, size_t count); /* a heading may have two lines,
    parted by \n; NULL: no memory */
void columns_add(columns *c, const char *text);  /* NULL: an empty cell */
void columns_add_text(columns *c, kel_text *text);   /* takes the text over, and clears it */
/* Appends the rows so far and forgets them; the widths are kept. The headings come with the first rows. */
void columns_flush(columns *c, kel_text *out, const char *indent);
void columns_free(columns *c);

#endif

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Reservations: what an answer's user has to know, with its code, and what it does to the exit status. */
#ifndef KELSPAN_RESERVATIONS_H
#define KELSPAN_RESERVATIONS_H

#include "files.h"

/* Beside the library's KEL_FLAG_...: a wanted value that no temperature gives. */
enum { FLAG_UNREACHABLE = 16 };

/* Reads --accept into the job. EXIT_FINE or EXIT_USAGE. */
int reservations_begin(job *j);

/* The code of one flag. */
const char *reservation_code(unsigned flag);
/* All codes among the flags, in a fixed order with `between` between them. */
void add_codes(kel_text *out, unsigned flags, const char *between);

/* What an answer was about, for the words of its reservations: one temperature, or an interval. */
typedef struct concern {
    double points[2]; size_t count;
    double reference;          /* K; that of the answer, NaN: the record's */
    double at;                 /* K; where a length is known, NaN: none */
    const kel_unit *unit;      /* of temperatures in the words */
} concern;

/* The words of one flag. */
void add_reservation_text(kel_text *out, const subject *s, const concern *about, unsigned flag);

/* Keeps the reservations among the flags of one answer for stderr and the exit status. EXIT_FINE; EXIT_FAILED with
   the error said where --within-range refuses the answer. place: a line of an input, 0 if there is none; input: its
   name or NULL. */
int reserve(job *j, const subject *s, const concern *about, unsigned flags, const char *input, size_t place);

/* Adds the member `reservations` of one answer, or with flags = 0 an empty list. */
void json_reservations_of(kel_json *json, const subject *s, const concern *about, unsigned flags);
/* Adds all that were kept, as the member `reservations` of a result. */
void json_reservations(const job *j, kel_json *json);

/* Ends a run whose answer stands: says warnings and reservations, gives the exit status. */
int finish(const job *j);

#endif

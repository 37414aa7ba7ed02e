/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Invented contents of records for tests: one with something in every place, and a small one. */
#ifndef KEL_TEST_CONTENTS_H
#define KEL_TEST_CONTENTS_H

#include <math.h>
#include <string.h>

#include <kelspan.h>

#include "unit.h"

#define KEL_TEST_HEX "0123456789abcdef0123456789abcdef0123456789abcdef0123456789abcdef"

/* Three pieces with a transition at one join and one outside, two modes, two sources, all kinds of rows, unknown
   numbers, text that needs escapes. The arrays are the caller's to change, which is how a test breaks one rule at a
   time. */
typedef struct rich {
    kel_interval gaps[2];
    kel_piece pieces[3];
    kel_transition transitions[3];
    int continuity[2];
    double mean[7], mean_steps[3], first[7], first_steps[3], second[7], second_steps[3];
    kel_mode modes[2];
    const char *uncertainty[2], *notes[1];
    kel_source sources[2];
    kel_fit_column columns[2];
    kel_fitted rows[4];
    kel_content content;
} rich;

/* Fills r, whose content then points into it. */
static inline kel_content *
rich_content(rich *r)
{
    *r = (rich){
        .gaps = { { 90.0, 110.5 }, { 300.0, 350.0 } },
        .pieces = { { 4.2, 77.0, 0, 3 }, { 77.0, 200.0, 3, 1 }, { 200.0, 900.0, 4, 3 } },
        .transitions = { { 2.0, KEL_STEP_NONE }, { 200.0, KEL_STEP_FITTED }, { 950.0, KEL_STEP_STATED } },
        .continuity = { 2, -1 },
        .mean = { 4.05e-06, 3.9e-06, -1.0 / 3e6, 1.1e-05, 1.61803398874989e-05, 2.5e-06, 5e-324 },
        .mean_steps = { 0.0, -8.4e-06, 1e-3 },
        .first = { 1e-08, -2e-08, 0.0, 3e-08, 1e-09, -0.0, 4e-09 },
        .first_steps = { 0.0, 2e-07, 0.0 },
        .second = { 2e-08, 0.0, 0.0, 2e-07, 3.2e-07, 0.0, 0.0 },
        .second_steps = { 0.0, 0.0, 1e-05 },
        .uncertainty = { "2 %", "0.5 % + 1e-5 [1] k=2 from 77 K to 300 K" },
        .notes = { "rows 3 and 4 were printed in \"italics\"\tin the \\ source, \xE2\x88\x92 as minus; \x01\x7F" },
    };
    r->modes[0] = (kel_mode){ KEL_MODE_FIT, "scatter", { r->first, r->first_steps } };
    r->modes[1] = (kel_mode){ KEL_MODE_LOT, "lot spread 2 %", { r->second, r->second_steps } };
    r->sources[0] = (kel_source){ "nt-40.csv", KEL_TEST_HEX, "NT-40", "annealed", "rolling", "sheet", "bench log 7",
        "one dilatometer", "ITS-90",
                                  "heating", 293.15, KEL_BASE_REFERENCE, 12, 3, r->uncertainty, 2, r->notes, 1 };
    r->sources[1] = (kel_source){ .name = "stra\xC3\x9F" "e.csv", .reference_temperature = NAN, .base =
        KEL_BASE_CURRENT };
    r->columns[0] = (kel_fit_column){ 0, KEL_KIND_COEFFICIENT, "NT-40 annealed", 2, 1.25, 3e-08, 2e-08, 1e-08,
        KEL_VARIANCE_ESTIMATED };
    r->columns[1] = (kel_fit_column){ 1, KEL_KIND_MEAN, NULL, 1, NAN, NAN, NAN, NAN, KEL_VARIANCE_GIVEN };
    r->rows[0] = (kel_fitted){ 0, 0, 4, KEL_KIND_COEFFICIENT, 77.0, 77.0, 7.9e-06, 7.8e-06, 1e-07, 0.0, 2e-08, 0,
        NULL };
    r->rows[1] = (kel_fitted){ 0, 0, 5, KEL_KIND_COEFFICIENT, 200.0, 200.0, 1.1e-05, 1.1e-05, 0.0, -1e-09, NAN, -1,
        NULL };
    r->rows[2] = (kel_fitted){ 1, 1, 9, KEL_KIND_MEAN, 293.15, 200.0, 1.2e-05, 1.3e-05, -1e-06, 0.0, 1e-07, 1, NULL };
    r->rows[3] = (kel_fitted){ 0, 0, 6, KEL_KIND_EXPANSION, NAN, 5.0, NAN, NAN, NAN, NAN, NAN, 0, "status mark '*'" };
    r->content = (kel_content){
        .form = "piecewise", .base = KEL_BASE_CURRENT, .reference_temperature = 293.15, .reference_defaulted = true,
        .range = { 4.2, 899.5 }, .gaps = r->gaps, .gap_count = 2, .pieces = r->pieces, .piece_count = 3,
        .transitions = r->transitions, .transition_count = 3, .coefficient_count = 7, .continuity = r->continuity,
        .continuity_count = 2, .mean = { r->mean, r->mean_steps }, .modes = r->modes, .mode_count = 2,
        .variance = KEL_VARIANCE_MIXED, .scatter_known = true, .observations = 3, .parameters = 6,
        .degrees_of_freedom = -3.0, .residual_standard_deviation = NAN, .chi2 = 1.0 / 3.0, .sources = r->sources,
        .source_count = 2, .columns = r->columns, .column_count = 2, .rows = r->rows, .row_count = 4,
        .lot_spread = "2 %", .annotations =
            " {\"approved\": {\"by\": \"QA\", \"limit\": 1.50},\n  \"tags\": [\"}\", \"\\\"]\"]} ",
    };
    return &r->content;
}

/* A line from 100 K to 300 K with nothing behind it, like a coefficient pair from a data sheet. */
static inline kel_content
small_content(void)
{
    static const kel_piece pieces[] = { { 100.0, 300.0, 0, 2 } };
    static const double mean[] = { 1.5e-05, 2e-06 };
    return (kel_content){ .form = "adopted", .reference_temperature = 293.15, .range = { 100.0, 300.0 }, .pieces =
        pieces,
                          .piece_count = 1, .coefficient_count = 2, .mean = { mean, NULL }, .parameters = 2,
                          .degrees_of_freedom = NAN, .residual_standard_deviation = NAN, .chi2 = NAN };
}

static inline kel_record *
build_content(const kel_content *content)
{
    kel_record *record;
    kel_error err = { 0 };
    kel_status status = kel_record_build(&record, content, &err);
    ck_assert_msg(status == KEL_OK, "build: %s: %s", kel_status_text(status), err.message);
    return record;
}

/* The record's JSON text; to be freed. */
static inline kel_text
format_record(const kel_record *record)
{
    kel_text text = KEL_TEXT_INIT;
    kel_error err = { 0 };
    ck_assert_msg(kel_record_format(&text, record, &err) == KEL_OK, "format: %s", err.message);
    return text;
}

#endif

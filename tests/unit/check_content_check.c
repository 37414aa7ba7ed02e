/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Each rule of a record's content broken alone: refused, with the key in the message; and what is just allowed is
   allowed. */
#include "../support/contents.h"

#include "record_parts.h"

/* Breaks one rule of a content that keeps them all. */
typedef void breaker(rich *r);

#define BREAK(name, ...)                    \
    static void name(rich *r) { __VA_ARGS__; }

/* ---- curve ---- */
BREAK(no_form, r->content.form = NULL)
BREAK(other_form, r->content.form = "spline?")
BREAK(other_base, r->content.base = (kel_base)2)
BREAK(reference_nan, r->content.reference_temperature = NAN)
BREAK(reference_negative, r->content.reference_temperature = -1e-300)
BREAK(no_pieces, r->content.piece_count = 0)
BREAK(pieces_null, r->content.pieces = NULL)
BREAK(piece_gap, r->pieces[1].from = nextafter(77.0, 78.0))
BREAK(piece_overlap, r->pieces[1].from = nextafter(77.0, 76.0))
BREAK(piece_below_zero, r->pieces[0].from = -5e-324)
BREAK(piece_infinite, r->pieces[2].to = INFINITY)
BREAK(piece_nan, r->pieces[2].to = NAN)
BREAK(piece_reversed, r->pieces[2].to = 199.0)
BREAK(piece_no_width, r->pieces[2].to = 200.0)
BREAK(piece_no_coefficients, r->pieces[1].count = 0)
BREAK(piece_too_many, r->pieces[2].count = KEL_COEFFICIENTS_MAX + 1; r->content.coefficient_count =
      4 + KEL_COEFFICIENTS_MAX + 1)
BREAK(piece_first_off, r->pieces[1].first = 2)
BREAK(piece_first_huge, r->pieces[1].first = SIZE_MAX)
BREAK(piece_count_beyond, r->pieces[2].count = 4)
BREAK(coefficients_left_over, r->pieces[2].count = 2)
BREAK(continuity_short, r->content.continuity_count = 1)
BREAK(continuity_null, r->content.continuity = NULL)
BREAK(continuity_below, r->continuity[0] = -2)
BREAK(continuity_above, r->continuity[0] = 3)
BREAK(transition_unsorted, r->transitions[0].at = 960.0)
BREAK(transition_twice, r->transitions[0].at = 200.0)
BREAK(transition_inside_piece, r->transitions[1].at = 199.0)
BREAK(transition_nan, r->transitions[2].at = NAN)
BREAK(transition_below_zero, r->transitions[0].at = -1.0)
BREAK(transition_kind, r->transitions[0].step = (kel_step_kind)3)
BREAK(transitions_null, r->content.transitions = NULL)
BREAK(step_undeclared, r->mean_steps[0] = 1e-9)
BREAK(step_infinite, r->mean_steps[1] = -INFINITY)
BREAK(mode_step_undeclared, r->second_steps[0] = 1e-9)
BREAK(steps_null, r->content.mean.steps = NULL)
BREAK(mean_null, r->content.mean.coefficients = NULL)
BREAK(mean_nan, r->mean[6] = NAN)
BREAK(mode_infinite, r->second[3] = INFINITY)
BREAK(mode_kind, r->modes[1].kind = (kel_mode_kind)3)
BREAK(mode_label_null, r->modes[0].label = NULL)
BREAK(mode_label_empty, r->modes[0].label = "")
BREAK(mode_null, r->modes[1].curve.coefficients = NULL)
BREAK(modes_null, r->content.modes = NULL)
BREAK(range_nan, r->content.range.lo = NAN)
BREAK(range_reversed, r->content.range = ((kel_interval){ 100.0, 99.0 }); r->content.gap_count = 0)
BREAK(range_below_pieces, r->content.range.lo = nextafter(4.2, 4.0))
BREAK(range_above_pieces, r->content.range.hi = nextafter(900.0, 901.0))
BREAK(gap_outside, r->gaps[1].hi = 899.6)
BREAK(gap_empty, r->gaps[0].hi = 90.0)
BREAK(gap_nan, r->gaps[0].lo = NAN)
BREAK(gaps_overlap, r->gaps[1].lo = 110.0)
BREAK(gaps_null, r->content.gaps = NULL)

/* ---- data ---- */
BREAK(variance_kind, r->content.variance = (kel_variance)5)
BREAK(freedom_infinite, r->content.degrees_of_freedom = INFINITY)
BREAK(deviation_negative, r->content.residual_standard_deviation = -1e-9)
BREAK(chi2_negative, r->content.chi2 = -1e-9)
BREAK(sources_null, r->content.sources = NULL)
BREAK(source_name, r->sources[1].name = NULL)
BREAK(source_digest_short, r->sources[0].digest = &KEL_TEST_HEX[1])
BREAK(source_digest_case, r->sources[0].digest = "0123456789ABCDEF0123456789abcdef0123456789abcdef0123456789abcdef")
BREAK(source_reference, r->sources[0].reference_temperature = -1.0)
BREAK(source_base, r->sources[0].base = (kel_base)2)
BREAK(source_note, r->notes[0] = NULL)
BREAK(source_notes_null, r->sources[0].notes = NULL)
BREAK(source_uncertainty, r->uncertainty[1] = NULL)
BREAK(columns_null, r->content.columns = NULL)
BREAK(column_source, r->columns[1].source = 2)
BREAK(column_kind, r->columns[1].kind = (kel_kind)3)
BREAK(column_variance, r->columns[1].variance = (kel_variance)-1)
BREAK(column_freedom, r->columns[0].degrees_of_freedom = INFINITY)
BREAK(column_deviation, r->columns[0].residual_standard_deviation = -1.0)
BREAK(column_scatter, r->columns[0].scatter = -1.0)
BREAK(column_resolution, r->columns[0].resolution = INFINITY)
BREAK(column_observations, r->columns[0].observations = 3)
BREAK(rows_null, r->content.rows = NULL)
BREAK(row_source, r->rows[0].source = 2)
BREAK(row_column, r->rows[0].column = SIZE_MAX)
BREAK(row_foreign_column, r->rows[0].column = 1)
BREAK(row_kind, r->rows[0].kind = (kel_kind)3)
BREAK(row_from, r->rows[2].from = NAN)
BREAK(row_to, r->rows[2].to = -1.0)
BREAK(row_two_temperatures, r->rows[0].from = 76.0)
BREAK(row_observed, r->rows[0].observed = NAN)
BREAK(row_fitted, r->rows[0].fitted = INFINITY)
BREAK(row_residual, r->rows[0].residual = NAN)
BREAK(row_shared, r->rows[0].shared_term = NAN)
BREAK(row_u, r->rows[0].u = -1e-9)
BREAK(row_u_infinite, r->rows[3].u = INFINITY)
BREAK(row_side, r->rows[0].side = 2)
BREAK(row_left_out_infinite, r->rows[3].observed = INFINITY)
BREAK(row_one_fewer, r->rows[0].left_out = "by hand")
BREAK(observations_off, r->content.observations = 4)

#define ROW(name, key) { #name, name, key }
static const struct row { const char *label; breaker *apply; const char *key; } rows[] = {
    ROW(no_form, "form"), ROW(other_form, "form"), ROW(other_base, "base"), ROW(reference_nan,
        "reference_temperature_K"),
    ROW(reference_negative, "reference_temperature_K"), ROW(no_pieces, "pieces"), ROW(pieces_null, "pieces"),
    ROW(piece_gap, "pieces[1].from_K"), ROW(piece_overlap, "pieces[1].from_K"), ROW(piece_below_zero,
        "pieces[0].from_K"),
    ROW(piece_infinite, "pieces[2].to_K"), ROW(piece_nan, "pieces[2].to_K"), ROW(piece_reversed, "pieces[2].to_K"),
    ROW(piece_no_width, "pieces[2].to_K"), ROW(piece_no_coefficients, "pieces[1].chebyshev_per_K"),
    ROW(piece_too_many, "pieces[2].chebyshev_per_K"), ROW(piece_first_off, "pieces[1].chebyshev_per_K"),
    ROW(piece_first_huge, "pieces[1].chebyshev_per_K"), ROW(piece_count_beyond, "pieces[2].chebyshev_per_K"),
    ROW(coefficients_left_over, "pieces"), ROW(continuity_short, "continuity"), ROW(continuity_null, "continuity"),
    ROW(continuity_below, "continuity"), ROW(continuity_above, "continuity"), ROW(transition_unsorted,
        "transitions[1].at_K"),
    ROW(transition_twice, "transitions[1].at_K"), ROW(transition_inside_piece, "transitions[1].at_K"),
    ROW(transition_nan, "transitions[2].at_K"), ROW(transition_below_zero, "transitions[0].at_K"),
    ROW(transition_kind, "transitions[0].step"), ROW(transitions_null, "transitions"), ROW(step_undeclared,
        "length_step"),
    ROW(step_infinite, "length_step"), ROW(mode_step_undeclared, "modes[1].length_steps"), ROW(steps_null,
        "length_step"),
    ROW(mean_null, "chebyshev_per_K"), ROW(mean_nan, "chebyshev_per_K"), ROW(mode_infinite, "modes[1].chebyshev_per_K"),
    ROW(mode_kind, "modes[1].kind"), ROW(mode_label_null, "modes[0].label"), ROW(mode_label_empty, "modes[0].label"),
    ROW(mode_null, "modes[1].chebyshev_per_K"), ROW(modes_null, "modes"), ROW(range_nan, "range_K"),
    ROW(range_reversed, "range_K"), ROW(range_below_pieces, "range_K"), ROW(range_above_pieces, "range_K"),
    ROW(gap_outside, "gaps_K"), ROW(gap_empty, "gaps_K"), ROW(gap_nan, "gaps_K"), ROW(gaps_overlap, "gaps_K"),
    ROW(gaps_null, "gaps_K"), ROW(variance_kind, "variance"), ROW(freedom_infinite, "degrees_of_freedom"),
    ROW(deviation_negative, "residual_standard_deviation"), ROW(chi2_negative, "chi2"), ROW(sources_null, "sources"),
    ROW(source_name, "sources[1].name"), ROW(source_digest_short, "sources[0].digest"),
    ROW(source_digest_case, "sources[0].digest"), ROW(source_reference, "sources[0].reference_temperature_K"),
    ROW(source_base, "sources[0].base"), ROW(source_note, "sources[0].notes"), ROW(source_notes_null,
        "sources[0].notes"),
    ROW(source_uncertainty, "sources[0].uncertainty"), ROW(columns_null, "columns"), ROW(column_source,
        "columns[1].source"),
    ROW(column_kind, "columns[1].kind"), ROW(column_variance, "columns[1].variance"),
    ROW(column_freedom, "columns[0].degrees_of_freedom"), ROW(column_deviation,
                                                              "columns[0].residual_standard_deviation"),
    ROW(column_scatter, "columns[0].scatter"), ROW(column_resolution, "columns[0].resolution"),
    ROW(column_observations, "observations"), ROW(rows_null, "rows"), ROW(row_source, "rows[0].source"),
    ROW(row_column, "rows[0].column"), ROW(row_foreign_column, "rows[0].column"), ROW(row_kind, "rows[0].kind"),
    ROW(row_from, "rows[2].from_K"), ROW(row_to, "rows[2].to_K"), ROW(row_two_temperatures, "rows[0].from_K"),
    ROW(row_observed, "rows[0].observed"), ROW(row_fitted, "rows[0].fitted"), ROW(row_residual, "rows[0].residual"),
    ROW(row_shared, "rows[0].shared_term"), ROW(row_u, "rows[0].u"), ROW(row_u_infinite, "rows[3].u"),
    ROW(row_side, "rows[0].side"), ROW(row_left_out_infinite, "rows[3].observed"), ROW(row_one_fewer, "observations"),
    ROW(observations_off, "observations"),
};

START_TEST(refuses)
{
    const struct row *row = &rows[_i];
    rich r;
    kel_error err = { 0 };
    kel_content *content = rich_content(&r);
    row->apply(&r);
    kel_status status = kel__content_check(content, KEL_E_ARGUMENT, &err);
    ck_assert_msg(status == KEL_E_ARGUMENT && err.code == status, "%s: status %d", row->label, (int)status);
    size_t n = strlen(row->key);
    ck_assert_msg(strncmp(err.message, row->key, n) == 0 && err.message[n] == ' ', "%s: got '%s', expected it at %s",
                  row->label,
                  err.message, row->key);
}
END_TEST

/* Just inside each bound. */
BREAK(nothing, (void)r)
BREAK(reference_zero, r->content.reference_temperature = 0.0)
BREAK(from_zero, r->pieces[0].from = 0.0; r->transitions[0].at = 0.0)
BREAK(range_is_hull, r->content.range = ((kel_interval){ 4.2, 900.0 }))
BREAK(range_of_one, r->content.range = ((kel_interval){ 77.0, 77.0 }); r->content.gap_count = 0)
BREAK(gaps_touch, r->gaps[1].lo = 110.5; r->gaps[0].lo = 4.2; r->gaps[1].hi = 899.5)
BREAK(transition_at_hull, r->transitions[0].at = 4.2; r->transitions[2].at = 900.0)
BREAK(no_modes, r->content.modes = NULL; r->content.mode_count = 0)
BREAK(thinned, r->content.thinned = true; r->content.row_count = 1)
BREAK(digest_empty, r->sources[0].digest = "")
BREAK(leverage_rounding, r->columns[0].degrees_of_freedom = -4e-16)

#define GOOD(name) { #name, name, NULL }
static const struct row good[] = {
    GOOD(nothing), GOOD(reference_zero), GOOD(from_zero), GOOD(range_is_hull), GOOD(range_of_one), GOOD(gaps_touch),
    GOOD(transition_at_hull), GOOD(no_modes), GOOD(thinned), GOOD(digest_empty), GOOD(leverage_rounding),
};

START_TEST(accepts)
{
    rich r;
    kel_error err = { 0 };
    kel_content *content = rich_content(&r);
    good[_i].apply(&r);
    ck_assert_msg(kel__content_check(content, KEL_E_ARGUMENT, &err) == KEL_OK, "%s: %s", good[_i].label, err.message);
}
END_TEST

/* A table of one temperature: one piece of no width is a constant, and two coefficients there are none. */
START_TEST(one_point)
{
    const double mean[] = { 1.2e-05, 1e-06 };
    kel_piece piece = { 77.0, 77.0, 0, 1 };
    kel_content content = small_content();
    kel_error err;
    content.pieces = &piece;
    content.mean.coefficients = mean;
    content.coefficient_count = 1;
    content.range = (kel_interval){ 77.0, 77.0 };
    ck_assert_int_eq(kel__content_check(&content, KEL_E_DATA, &err), KEL_OK);
    piece.count = content.coefficient_count = 2;
    ck_assert_int_eq(kel__content_check(&content, KEL_E_DATA, &err), KEL_E_DATA);
    ck_assert_str_eq(err.message, "pieces[0].chebyshev_per_K must hold one coefficient on a piece of no width");
}
END_TEST

/* The code is the caller's; messages name value and limit. */
START_TEST(says_what_is_wrong)
{
    rich r;
    kel_error err;
    kel_content *content = rich_content(&r);
    r.pieces[1].from = 80.0;
    ck_assert_int_eq(kel__content_check(content, KEL_E_DATA, &err), KEL_E_DATA);
    ck_assert_str_eq(err.message, "pieces[1].from_K = 80 must equal the end of the piece before, 77");
    rich_content(&r);
    r.rows[2].source = 7;
    ck_assert_int_eq(kel__content_check(content, KEL_E_DATA, NULL), KEL_E_DATA);
    ck_assert_int_eq(kel__content_check(content, KEL_E_DATA, &err), KEL_E_DATA);
    ck_assert_str_eq(err.message, "rows[2].source = 7 points behind the 2 sources");
}
END_TEST

KEL_TCASE(single, one_point, says_what_is_wrong)

static TCase *
tables(void)
{
    TCase *c = tcase_create("rules");
    tcase_add_loop_test(c, refuses, 0, KEL_LENGTH(rows));
    tcase_add_loop_test(c, accepts, 0, KEL_LENGTH(good));
    return c;
}

KEL_TEST_MAIN("content_check", single, tables)

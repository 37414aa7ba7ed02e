/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Metadata: what is a key, what its value means, what is said twice, what the user overrules. Also over
   metadata_keys.c and metadata_finish.c. */
#include "unit.h"

#include <math.h>
#include <string.h>

#include "../../lib/fit/metadata.h"

enum { COLUMN = 3 };           /* of a comment's text behind "# " */

/* Settings (NULL-ended) and a text whose lines are comments without their marks. */
static kel_status
read_metadata(kel__metadata *out, kel_arena *arena, bool coefficients, const char *const *settings, const char *text,
              kel_error *err)
{
    kel__metadata_reader *reader;
    kel_status status = kel__metadata_new(&reader, arena, coefficients, err);
    for (size_t i = 0; settings != NULL && settings[i] != NULL && status == KEL_OK; i++)
        status = kel__metadata_set(reader, settings[i], err);
    for (size_t line = 1; *text != '\0' && status == KEL_OK; line++) {
        size_t n = strcspn(text, "\n");
        status = kel__metadata_line(reader, text, n, line, COLUMN, err);
        text += n + (text[n] == '\n');
    }
    if (status == KEL_OK)
        status = kel__metadata_finish(out, reader, err);
    kel__metadata_free(reader);    /* what was made must outlive the reader */
    return status;
}

static const char all[] =
    "Material:  NT-40 \n"
    "condition: annealed 2 h\n"
    "direction: axial\n"
    "PRODUCT   FORM: rod\n"
    "source: bench log, page 12: second run\n"
    "lineage: dilatometer B\n"
    "a sentence that ends so: it is a comment\n"
    "reference temperature: 20 \xC2\xB0" "C\n"
    "base: Current  Length\n"
    "scale: ipts-68\n"
    "uncertainty: 2 % from 4 K to 77 K\n"
    "uncertainty: 1 % from 77 K to 300 K\n"
    "uncertainty: 0.1 [1e-6/K] independent\n"
    "lot spread: 1 % k=2\n"
    "transition: 912 degC step\n"
    "transition: 770 degC\n"
    "contracts on heating: yes\n"
    "shift to reference: no\n"
    "branch: cooling\n"
    "decimal: point\n"
    "see http://example.invalid/x\n"
    "http://example.invalid/y\n"
    "note: one\n"
    "note: two\n"
    "operator: somebody\n"
    "furnace no 3: new\n"
    "12:30 started\n"
    "--- : ---\n"
    "direction:   \n";

START_TEST(everything)
{
    kel_arena *arena = kel_arena_new();
    kel__metadata m;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(read_metadata(&m, arena, false, NULL, all, &err) == KEL_OK, "%zu:%zu %s", err.line, err.column,
                  err.message);
    ck_assert_str_eq(m.material, "NT-40");
    ck_assert_str_eq(m.condition, "annealed 2 h");
    ck_assert_str_eq(m.direction, "axial");
    ck_assert_str_eq(m.product_form, "rod");
    ck_assert_str_eq(m.source, "bench log, page 12: second run");
    ck_assert_str_eq(m.lineage, "dilatometer B");
    ck_assert_ulp(m.reference_temperature, 293.15, 0);
    ck_assert_str_eq(m.reference_printed, "20 \xC2\xB0" "C");
    ck_assert(m.base == KEL_BASE_CURRENT && m.base_stated);
    ck_assert_str_eq(m.scale, "IPTS-68");
    ck_assert_str_eq(m.branch, "cooling");
    ck_assert(m.contracts_on_heating && !m.shift_to_reference && !m.decimal_comma);
    ck_assert_uint_eq(m.uncertainty_count, 3);
    ck_assert_ulp(m.uncertainty[1].relative, 0.01, 1);
    ck_assert_uint_eq(m.uncertainty[1].line, 12);
    ck_assert_uint_eq(m.uncertainty[1].column, COLUMN + 13);
    ck_assert(m.uncertainty[2].independent);
    ck_assert_uint_eq(m.lot_count, 1);
    ck_assert_str_eq(m.lot_text, "1 % k=2");
    ck_assert_uint_eq(m.transition_count, 2);
    ck_assert_ulp(m.transitions[1].at, 1043.15, 0);
    ck_assert_uint_eq(m.note_count, 4);
    ck_assert_str_eq(m.notes[1], "two");
    ck_assert_str_eq(m.notes[2], "operator: somebody");
    ck_assert_str_eq(m.notes[3], "furnace no 3: new");
    ck_assert_uint_eq(m.warning_count, 2);
    ck_assert_str_eq(m.warnings[0].code, "unknown-key");
    ck_assert_str_eq(m.warnings[0].text, "the key 'operator' is not known; its line is kept as a note");
    ck_assert_uint_eq(m.warnings[0].line, 25);
    ck_assert_uint_eq(m.warnings[0].count, 2);
    ck_assert_str_eq(m.warnings[1].code, "scale");
    ck_assert_uint_eq(m.entry_count, 23);
    ck_assert_str_eq(m.entries[3].key, "product form");
    ck_assert_str_eq(m.entries[3].value, "rod");
    ck_assert_uint_eq(m.entries[3].line, 4);
    ck_assert_str_eq(m.entries[22].key, "furnace no 3");
    kel_arena_free(arena);
}
END_TEST

START_TEST(nothing)
{
    kel_arena *arena = kel_arena_new();
    kel__metadata m;
    ck_assert_int_eq(read_metadata(&m, arena, false, NULL, "a comment\n\n:\n", NULL), KEL_OK);
    ck_assert(isnan(m.reference_temperature) && !m.base_stated && m.base == KEL_BASE_REFERENCE && m.material == NULL &&
              m.scale == NULL);
    ck_assert_uint_eq(m.entry_count + m.note_count + m.warning_count, 0);
    ck_assert_uint_eq(m.uncertainty_count + m.lot_count + m.transition_count, 0);
    ck_assert_ptr_null(m.lot_text);
    kel_arena_free(arena);
}
END_TEST

static const struct { const char *label, *text; size_t line, column; kel_status status; const char *message;
                      } refused[] = {
    { "two materials", "material: A\nnote: x\nmaterial: B", 3, 13, KEL_E_DATA,
      "`material` on line 3 contradicts the one on line 1" },
    { "two references", "reference temperature: 20 degC\nreference temperature: 293 K", 2, 26, KEL_E_DATA,
      "contradicts the one on line 1" },
    { "two bases", "base: reference length\nbase: current length", 2, 9, KEL_E_DATA, "contradicts the one on line 1" },
    { "two decimal marks", "decimal: comma\ndecimal: point", 2, 12, KEL_E_DATA, "contradicts the one on line 1" },
    { "two lot spreads", "lot spread: 1 %\nlot spread: 2 %", 2, 15, KEL_E_DATA,
      "`lot spread` is stated twice for some temperatures" },
    { "overlapping ranges", "uncertainty: 2 % from 4 K to 77 K\nuncertainty: 1 % from 76 K to 300 K", 2, 16,
      KEL_E_DATA, "here and on line 1" },
    { "two of one sort", "uncertainty: 2 %\nuncertainty: 0.1 [1e-6/K] shared", 2, 16, KEL_E_DATA, "A % + B [UNIT]" },
    { "one transition with two steps", "transition: 912 degC step 1e-6\ntransition: 1185.15 K step 2e-6", 2, 15,
      KEL_E_DATA, "the transition of line 1" },
    { "base", "base: length", 1, 9, KEL_E_SYNTAX, "`base` is reference length or current length, not 'length'" },
    { "base without value", "base:", 1, 8, KEL_E_SYNTAX, "`base` is reference length or current length, not ''" },
    { "scale", "scale: celsius", 1, 10, KEL_E_SYNTAX, "`scale` is ITS-90, IPTS-68 or IPTS-48, not 'celsius'" },
    { "branch", "branch: up", 1, 11, KEL_E_SYNTAX, "`branch` is heating or cooling, not 'up'" },
    { "contracts", "contracts on heating: true", 1, 25, KEL_E_SYNTAX, "`contracts on heating` is yes or no, not "
                                                                      "'true'" },
    { "shift", "shift to reference: 1", 1, 23, KEL_E_SYNTAX, "`shift to reference` is yes or no, not '1'" },
    { "decimal", "decimal: ,", 1, 12, KEL_E_SYNTAX, "`decimal` is point or comma, not ','" },
    { "control bytes quoted", "branch: \x1B[2J", 1, 11, KEL_E_SYNTAX, "not '\\x1B[2J'" },
    { "reference RT", "reference temperature: RT", 1, 26, KEL_E_SYNTAX, "room temperature is no number" },
    { "reference in words", "reference temperature: Room temperature", 1, 26, KEL_E_SYNTAX,
      "room temperature is no number" },
    { "reference without unit", "reference temperature: 293.15", 1, 26, KEL_E_UNIT,
      "the temperature 293.15 needs a unit" },
    { "reference empty", "reference temperature:", 1, 25, KEL_E_SYNTAX, "but the text ends" },
    { "reference below zero", "reference temperature: -1 K", 1, 26, KEL_E_RANGE, "" },
    { "reference in metres", "reference temperature: 20 mm", 1, 29, KEL_E_UNIT, "" },
    { "reference with a tail", "reference temperature: 20 degC (68 degF)", 1, 34, KEL_E_SYNTAX,
      "expected nothing behind the temperature, found" },
    { "decimal comma unasked", "reference temperature: 293,15 K", 1, 29, KEL_E_SYNTAX,
      "a decimal comma must be declared" },
    { "decimal point where comma was declared", "reference temperature: 293.15 K\ndecimal: comma", 1, 29,
      KEL_E_SYNTAX, "declares `decimal: comma`" },
    { "uncertainty", "uncertainty: small", 1, 16, KEL_E_SYNTAX, "found 'small'" },
    { "uncertainty empty", "uncertainty:", 1, 15, KEL_E_SYNTAX, "but the text ends" },
    { "lot with a sort", "lot spread: 1 % shared", 1, 19, KEL_E_SYNTAX, "neither shared nor independent" },
    { "transition", "transition: at 912 degC", 1, 15, KEL_E_SYNTAX, "found 'at'" },
};

START_TEST(refuses)
{
    kel_arena *arena = kel_arena_new();
    kel__metadata m;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = read_metadata(&m, arena, false, NULL, refused[_i].text, &err);
    ck_assert_msg(status == refused[_i].status && err.line == refused[_i].line && err.column == refused[_i].column &&
                  strstr(err.message, refused[_i].message) != NULL && strchr(err.message, '\n') == NULL,
                  "%s: got %d at %zu:%zu (%s)", refused[_i].label, status, err.line, err.column, err.message);
    kel_arena_free(arena);
}
END_TEST

/* Said twice alike, in another spelling or unit. */
START_TEST(repeats)
{
    kel_arena *arena = kel_arena_new();
    kel__metadata m;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(read_metadata(&m, arena, false, NULL,
        "reference temperature: 68 degF\nreference temperature: 293.15 K\nmaterial: NT-40\nmaterial:  nt-40\n"
        "transition: 912 degC\ntransition: 1185.15 K\nlot spread: 1 %\nlot spread: 1  %\n"
        "uncertainty: 1 % independent\nuncertainty: 2 % from 10 K to 20 K\nuncertainty: 3 % from 20 K to 30 K\n",
            &err) == KEL_OK,
        "%zu:%zu %s", err.line, err.column, err.message);
    ck_assert_ulp(m.reference_temperature, 293.15, 0);
    ck_assert_str_eq(m.material, "NT-40");
    ck_assert_uint_eq(m.transition_count, 1);
    ck_assert_uint_eq(m.lot_count, 1);
    ck_assert_uint_eq(m.uncertainty_count, 3);
    ck_assert_uint_eq(m.entry_count, 7);
    kel_arena_free(arena);
}
END_TEST

START_TEST(decimal_comma)
{
    kel_arena *arena = kel_arena_new();
    kel__metadata m;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(read_metadata(&m, arena, false, NULL, "reference temperature: 293,15 K\nuncertainty: 0,5 "
                                                        "%\ntransition: 911,5 degC step -8,4e-6\n"
                  "decimal: comma\n", &err) == KEL_OK, "%zu:%zu %s", err.line, err.column, err.message);
    ck_assert(m.decimal_comma);
    ck_assert_ulp(m.reference_temperature, 293.15, 0);
    ck_assert_ulp(m.uncertainty[0].relative, 0.005, 1);
    ck_assert_ulp(m.transitions[0].at, 1184.65, 0);
    ck_assert_ulp(m.transitions[0].length, -8.4e-6, 0);
    kel_arena_free(arena);
}
END_TEST

START_TEST(settings)
{
    static const char *const set[] = { "material: B", "reference temperature: 20 degC",
                                       "uncertainty: 1 % independent", "lot spread: 3 %",
                                       "transition: 912 degC step 1e-6", "decimal: comma", "note: set", NULL };
    kel_arena *arena = kel_arena_new();
    kel__metadata m;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_msg(read_metadata(&m, arena, false, set,
        "material: A\nreference temperature: 300 K\nuncertainty: 2,5 %\nlot spread: 1 %\nlot spread: 2 "
        "%\ntransition: 912 degC\ndecimal: point\n"
        "note: file\n", &err) == KEL_OK, "%zu:%zu %s", err.line, err.column, err.message);
    ck_assert_str_eq(m.material, "B");
    ck_assert_ulp(m.reference_temperature, 293.15, 0);
    ck_assert_uint_eq(m.uncertainty_count, 2);
    ck_assert_uint_eq(m.lot_count, 1);
    ck_assert_str_eq(m.lot_text, "3 %");
    ck_assert_uint_eq(m.transition_count, 1);
    ck_assert_ulp(m.transitions[0].length, 1e-6, 0);
    ck_assert(m.decimal_comma);
    ck_assert_uint_eq(m.note_count, 2);
    ck_assert_uint_eq(m.entry_count, 9);
    kel_arena_free(arena);
}
END_TEST

static const struct { const char *first, *second; kel_status status; const char *message; } bad_settings[] = {
    { "colour: blue", NULL, KEL_E_SYNTAX, "the setting 'colour: blue' is not `key: value`" },
    { "material", NULL, KEL_E_SYNTAX, "the setting 'material' is not `key: value`" },
    { "material:", NULL, KEL_E_SYNTAX, "the setting 'material:' is not `key: value`" },
    { "", NULL, KEL_E_SYNTAX, "the setting '' is not" },
    { "curve: coefficient [1e-6/K]", NULL, KEL_E_SYNTAX, "is not `key: value`" },
    { "material: A", "material: B", KEL_E_DATA, "two settings of `material` contradict each other" },
    { "base: none", NULL, KEL_E_SYNTAX, "`base` is" },
};

START_TEST(refuses_settings)
{
    const char *const set[] = { bad_settings[_i].first, bad_settings[_i].second, NULL };
    kel_arena *arena = kel_arena_new();
    kel__metadata m;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = read_metadata(&m, arena, false, set, "", &err);
    ck_assert_msg(status == bad_settings[_i].status && err.line == 0 && err.column == 0 &&
                  strstr(err.message, bad_settings[_i].message) != NULL,
                  "%s: got %d at %zu:%zu (%s)", set[0], status, err.line, err.column, err.message);
    kel_arena_free(arena);
}
END_TEST

/* In a coefficient file `scale` has two meanings, and four keys are its own; elsewhere those are unknown. */
START_TEST(coefficient_files)
{
    static const char text[] = "curve: expansion [1e-5]\nvariable: T [K]\ncenter: 293\nscale: 100\nscale: IPTS-68\n";
    kel_arena *arena = kel_arena_new();
    kel__metadata m;
    ck_assert_int_eq(read_metadata(&m, arena, true, NULL, text, NULL), KEL_OK);
    ck_assert_str_eq(m.curve->value, "expansion [1e-5]");
    ck_assert_uint_eq(m.curve->line, 1);
    ck_assert_str_eq(m.variable->value, "T [K]");
    ck_assert_str_eq(m.centre->value, "293");
    ck_assert_str_eq(m.centre->key, "centre");
    ck_assert_str_eq(m.variable_scale->value, "100");
    ck_assert_str_eq(m.scale, "IPTS-68");
    kel_error err;
    ck_assert_int_eq(read_metadata(&m, arena, false, NULL, "scale: 100\n", &err), KEL_E_SYNTAX);
    ck_assert_uint_eq(err.line, 1);
    ck_assert_int_eq(read_metadata(&m, arena, false, NULL, "curve: x\ncentre: y\n", NULL), KEL_OK);
    ck_assert_uint_eq(m.warnings[0].count, 2);
    ck_assert_ptr_null(m.curve);
    kel_arena_free(arena);
}
END_TEST

static const struct { const char *text; double want; size_t column; kel_status status; } temperatures[] = {
    { "293.15 K", 293.15, 0, KEL_OK }, { " 20 degC ", 293.15, 0, KEL_OK },
    { "68\xC2\xA0\xC2\xB0" "F", 293.15, 0, KEL_OK }, { "-459.67 degF", 0, 0, KEL_OK }, { "0K", 0, 0, KEL_OK },
    { "1e3 K", 1000, 0, KEL_OK }, { "+20degC", 293.15, 0, KEL_OK },
    { "-459.68 degF", NAN, 1, KEL_E_RANGE }, { "inf K", NAN, 1, KEL_E_SYNTAX }, { "nan K", NAN, 1, KEL_E_SYNTAX },
    { "", NAN, 1, KEL_E_SYNTAX },
    { "20", NAN, 1, KEL_E_UNIT }, { "20 K K", NAN, 6, KEL_E_SYNTAX }, { "20 kelp", NAN, 4, KEL_E_UNIT },
    { "2 0 K", NAN, 3, KEL_E_UNIT },
};

START_TEST(temperature)
{
    double t = -1;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = kel__temperature_text(&t, temperatures[_i].text, strlen(temperatures[_i].text), 4, 10, &err);
    ck_assert_msg(status == temperatures[_i].status, "'%s': %d %s", temperatures[_i].text, status, err.message);
    if (status == KEL_OK)
        ck_assert_ulp_for(temperatures[_i].text, t, temperatures[_i].want, 0);
    else
        ck_assert_msg(err.line == 4 && err.column == 9 + temperatures[_i].column, "'%s': at %zu (%s)",
                      temperatures[_i].text, err.column - 9,
                      err.message);
}
END_TEST

static TCase *
tables(void)
{
    TCase *tcase = tcase_create("tables");
    tcase_add_loop_test(tcase, refuses, 0, KEL_LENGTH(refused));
    tcase_add_loop_test(tcase, refuses_settings, 0, KEL_LENGTH(bad_settings));
    tcase_add_loop_test(tcase, temperature, 0, KEL_LENGTH(temperatures));
    return tcase;
}

KEL_TCASE(files, everything, nothing, repeats, decimal_comma, settings, coefficient_files)
KEL_TEST_MAIN("metadata", tables, files)

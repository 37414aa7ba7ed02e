/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Reading a record back: every number to the last bit, every byte again; and every kind of damage refused with its
   place. */
#include "../support/contents.h"

#include <jansson.h>
#include <locale.h>

#include "record_parts.h"

/* ---- there and back ---- */

static void
same_number(const char *what, double a, double b)
{
    ck_assert_msg(memcmp(&a, &b, sizeof a) == 0 || (isnan(a) && isnan(b)), "%s: %.17g became %.17g", what, a, b);
}

static void
same_string(const char *what, const char *a, const char *b)
{
    ck_assert_msg(a == b || (a != NULL && b != NULL && strcmp(a, b) == 0), "%s: '%s' became '%s'", what, a, b);
}

static void
same_strings(const char *what, const char *const *a, size_t n, const char *const *b, size_t m)
{
    ck_assert_uint_eq(n, m);
    for (size_t i = 0; i < n; i++)
        same_string(what, a[i], b[i]);
}

static void
same_curve(const kel_content *c, kel_curve a, kel_curve b)
{
    for (size_t j = 0; j < c->coefficient_count; j++)
        same_number("coefficient", a.coefficients[j], b.coefficients[j]);
    for (size_t i = 0; i < c->transition_count; i++)
        same_number("step", a.steps[i], b.steps[i]);
}

static void
same_curves(const kel_content *a, const kel_content *b)
{
    ck_assert_uint_eq(a->coefficient_count, b->coefficient_count);
    ck_assert_uint_eq(a->transition_count, b->transition_count);
    ck_assert_uint_eq(a->piece_count, b->piece_count);
    for (size_t i = 0; i < a->piece_count; i++) {
        same_number("from", a->pieces[i].from, b->pieces[i].from);
        same_number("to", a->pieces[i].to, b->pieces[i].to);
        ck_assert_uint_eq(a->pieces[i].first, b->pieces[i].first);
        ck_assert_uint_eq(a->pieces[i].count, b->pieces[i].count);
    }
    for (size_t i = 0; i < a->transition_count; i++) {
        same_number("at", a->transitions[i].at, b->transitions[i].at);
        ck_assert_int_eq((int)a->transitions[i].step, (int)b->transitions[i].step);
    }
    ck_assert_uint_eq(a->continuity_count, b->continuity_count);
    for (size_t i = 0; i < a->continuity_count; i++)
        ck_assert_int_eq(a->continuity[i], b->continuity[i]);
    same_curve(a, a->mean, b->mean);
    ck_assert_uint_eq(a->mode_count, b->mode_count);
    for (size_t k = 0; k < a->mode_count; k++) {
        ck_assert_int_eq((int)a->modes[k].kind, (int)b->modes[k].kind);
        same_string("label", a->modes[k].label, b->modes[k].label);
        same_curve(a, a->modes[k].curve, b->modes[k].curve);
    }
}

static void
same_source(const kel_source *a, const kel_source *b)
{
    const char *const of_a[] = { a->name, a->digest, a->material, a->condition, a->direction, a->product_form,
        a->source,
                                 a->lineage, a->scale, a->branch };
    const char *const of_b[] = { b->name, b->digest, b->material, b->condition, b->direction, b->product_form,
        b->source,
                                 b->lineage, b->scale, b->branch };
    same_strings("source", of_a, 10, of_b, 10);
    same_number("reference", a->reference_temperature, b->reference_temperature);
    ck_assert_int_eq((int)a->base, (int)b->base);
    ck_assert_uint_eq(a->rows, b->rows);
    ck_assert_uint_eq(a->left_out, b->left_out);
    same_strings("uncertainty", a->uncertainty, a->uncertainty_count, b->uncertainty, b->uncertainty_count);
    same_strings("notes", a->notes, a->note_count, b->notes, b->note_count);
}

static void
same_column(const kel_fit_column *a, const kel_fit_column *b)
{
    ck_assert_uint_eq(a->source, b->source);
    ck_assert_int_eq((int)a->kind, (int)b->kind);
    same_string("label", a->label, b->label);
    ck_assert_uint_eq(a->observations, b->observations);
    same_number("degrees of freedom", a->degrees_of_freedom, b->degrees_of_freedom);
    same_number("deviation", a->residual_standard_deviation, b->residual_standard_deviation);
    same_number("scatter", a->scatter, b->scatter);
    same_number("resolution", a->resolution, b->resolution);
    ck_assert_int_eq((int)a->variance, (int)b->variance);
}

static void
same_row(const kel_fitted *a, const kel_fitted *b)
{
    ck_assert_uint_eq(a->source, b->source);
    ck_assert_uint_eq(a->column, b->column);
    ck_assert_uint_eq(a->line, b->line);
    ck_assert_int_eq((int)a->kind, (int)b->kind);
    same_number("from", a->from, b->from);
    same_number("to", a->to, b->to);
    same_number("observed", a->observed, b->observed);
    same_number("fitted", a->fitted, b->fitted);
    same_number("residual", a->residual, b->residual);
    same_number("shared term", a->shared_term, b->shared_term);
    same_number("u", a->u, b->u);
    ck_assert_int_eq(a->side, b->side);
    same_string("left out", a->left_out, b->left_out);
}

static void
same_content(const kel_content *a, const kel_content *b)
{
    same_string("form", a->form, b->form);
    ck_assert_int_eq((int)a->base, (int)b->base);
    same_number("reference", a->reference_temperature, b->reference_temperature);
    ck_assert_int_eq(a->reference_defaulted, b->reference_defaulted);
    same_number("range", a->range.lo, b->range.lo);
    same_number("range", a->range.hi, b->range.hi);
    ck_assert_uint_eq(a->gap_count, b->gap_count);
    for (size_t i = 0; i < a->gap_count; i++) {
        same_number("gap", a->gaps[i].lo, b->gaps[i].lo);
        same_number("gap", a->gaps[i].hi, b->gaps[i].hi);
    }
    same_curves(a, b);
    ck_assert_int_eq((int)a->variance, (int)b->variance);
    ck_assert_int_eq(a->scatter_known, b->scatter_known);
    ck_assert_uint_eq(a->observations, b->observations);
    ck_assert_uint_eq(a->parameters, b->parameters);
    same_number("degrees of freedom", a->degrees_of_freedom, b->degrees_of_freedom);
    same_number("deviation", a->residual_standard_deviation, b->residual_standard_deviation);
    same_number("chi2", a->chi2, b->chi2);
    ck_assert_uint_eq(a->source_count, b->source_count);
    for (size_t i = 0; i < a->source_count; i++)
        same_source(&a->sources[i], &b->sources[i]);
    ck_assert_uint_eq(a->column_count, b->column_count);
    for (size_t i = 0; i < a->column_count; i++)
        same_column(&a->columns[i], &b->columns[i]);
    ck_assert_uint_eq(a->row_count, b->row_count);
    for (size_t i = 0; i < a->row_count; i++)
        same_row(&a->rows[i], &b->rows[i]);
    ck_assert_int_eq(a->thinned, b->thinned);
    ck_assert_uint_eq(a->check_count, b->check_count);
    for (size_t i = 0; i < a->check_count; i++) {
        same_number("check at", a->checks[i].at, b->checks[i].at);
        same_number("check coefficient", a->checks[i].coefficient, b->checks[i].coefficient);
        same_number("check expansion", a->checks[i].expansion, b->checks[i].expansion);
    }
    same_string("lot spread", a->lot_spread, b->lot_spread);
    same_string("annotations", a->annotations, b->annotations);
    same_string("digest", a->digest, b->digest);
}

static kel_record *
parse(const char *what, const char *bytes, size_t n)
{
    kel_record *record;
    kel_error err = { 0 };
    kel_status status = kel_record_parse(&record, bytes, n, &err);
    ck_assert_msg(status == KEL_OK, "%s: %s: %s (line %zu, column %zu)", what, kel_status_text(status), err.message,
                  err.line,
                  err.column);
    return record;
}

static void
there_and_back(const kel_content *content)
{
    kel_record *record = build_content(content);
    kel_text text = format_record(record);
    kel_record *again = parse("there and back", text.bytes, text.size);
    kel_text once_more = format_record(again);
    same_content(kel_record_content(record), kel_record_content(again));
    ck_assert_str_eq(text.bytes, once_more.bytes);
    kel_text_free(&text);
    kel_text_free(&once_more);
    kel_record_free(record);
    kel_record_free(again);
}

START_TEST(keeps_everything)
{
    rich r;
    there_and_back(rich_content(&r));
    kel_content content = small_content();
    there_and_back(&content);
}
END_TEST

/* jansson mends the decimal point by the locale. Where one with a comma is installed. */
START_TEST(keeps_everything_with_a_comma)
{
    static const char *const locales[] = { "de_DE.UTF-8", "fr_FR.UTF-8", "nl_NL.UTF-8" };
    rich r;
    for (int l = 0; l < KEL_LENGTH(locales); l++)
        if (setlocale(LC_ALL, locales[l]) != NULL)
            there_and_back(rich_content(&r));
}
END_TEST

/* Doubles of all sizes, from their bits: a generator by G. Marsaglia, J. Stat. Softw. 8 (2003) 14, seeds the bits. */
START_TEST(keeps_any_double)
{
    rich r;
    kel_content *content = rich_content(&r);
    uint64_t state = 88172645463325252u;
    for (int round = 0; round < 200; round++) {
        for (int j = 0; j < 7; j++) {
            do {
                state ^= state << 13;
                state ^= state >> 7;
                state ^= state << 17;
                memcpy(&r.first[j], &state, sizeof state);
            } while (!isfinite(r.first[j]));
        }
        there_and_back(content);
    }
}
END_TEST

/* ---- what may differ ---- */

/* The rich record's text and its tree. */
static kel_text
rich_text(void)
{
    rich r;
    kel_record *record = build_content(rich_content(&r));
    kel_text text = format_record(record);
    kel_record_free(record);
    return text;
}

static json_t *
rich_tree(void)
{
    kel_text text = rich_text();
    json_t *tree = json_loadb(text.bytes, text.size, JSON_DECODE_INT_AS_REAL, NULL);
    ck_assert_ptr_nonnull(tree);
    kel_text_free(&text);
    return tree;
}

/* Layout, order of keys, digits beyond need and integers for numbers do not matter, and all is as before when
   written again (the annotations have the layout of the text that they came from). */
START_TEST(layout_does_not_matter)
{
    static const size_t flags[] = { JSON_COMPACT, JSON_INDENT(7), JSON_SORT_KEYS, JSON_ENSURE_ASCII | JSON_INDENT(1) };
    kel_text text = rich_text();
    json_t *tree = rich_tree();
    json_object_del(tree, "annotations");
    const char *annotations = strstr(text.bytes, ",\n  \"annotations\"");
    for (int f = 0; f < KEL_LENGTH(flags); f++) {
        char *other = json_dumps(tree, flags[f]);
        kel_record *record = parse("layout", other, strlen(other));
        kel_text again = format_record(record);
        ck_assert_uint_eq(again.size, (size_t)(annotations - text.bytes) + 3);
        ck_assert_mem_eq(again.bytes, text.bytes, (size_t)(annotations - text.bytes));
        kel_text_free(&again);
        kel_record_free(record);
        free(other);
    }
    json_decref(tree);
    kel_text_free(&text);
}
END_TEST

/* The first `find` becomes `put`. To be freed. */
static char *
replaced(const char *text, const char *find, const char *put)
{
    const char *at = strstr(text, find);
    ck_assert_msg(at != NULL, "the text has no %s", find);
    size_t head = (size_t)(at - text), n = strlen(text) - strlen(find) + strlen(put);
    char *out = malloc(n + 1);
    memcpy(out, text, head);
    strcpy(out + head, put);
    strcat(out, at + strlen(find));
    return out;
}

static const struct same { const char *label, *find, *put; } sames[] = {
    { "zeros behind", "\"reference_temperature_K\": 293.15", "\"reference_temperature_K\": 293.15000" },
    { "exponent", "\"reference_temperature_K\": 293.15", "\"reference_temperature_K\": 29315e-2" },
    { "more digits than needed", "293.15", "293.1499999999999772626324556767940521240234375" },
    { "integer as real", "\"observations\": 3", "\"observations\": 3.0" },
    { "real as integer", "\"length_step\": 0.001}", "\"length_step\": 1e-3}" },
    { "escaped key", "\"form\"", "\"\\u0066orm\"" },
    { "escaped text", "\"NT-40\"", "\"NT\\u002d40\"" },
    { "escaped key of annotations", "\"annotations\"", "\"annot\\u0061tions\"" },
    { "final newline", "\"\\\"]\"]}\n}\n", "\"\\\"]\"]}\n}" },
    { "blanks at the end", "\"\\\"]\"]}\n}\n", "\"\\\"]\"]}\n} \t\r\n\n" },
};

START_TEST(means_the_same)
{
    kel_text text = rich_text();
    char *other = replaced(text.bytes, sames[_i].find, sames[_i].put);
    kel_record *record = parse(sames[_i].label, other, strlen(other));
    kel_text again = format_record(record);
    ck_assert_msg(strcmp(again.bytes, text.bytes) == 0, "%s: got %s", sames[_i].label, again.bytes);
    kel_text_free(&again);
    kel_text_free(&text);
    kel_record_free(record);
    free(other);
}
END_TEST

/* Annotations are the users': they may change at any time and stay to the byte. */
START_TEST(annotations_are_free)
{
    static const char mine[] =
        "{\"kelspan_record\": 9, \"digits\": [0.10, 1E2,\n\n 12345678901234567890], \"a\\u0062\": {\"x\": {}}}";
    kel_text text = rich_text();
    const char *begin = strstr(text.bytes, "{\"approved\"");
    char *old = strndup(begin, strlen(begin) - strlen("\n}\n"));
    char *other = replaced(text.bytes, old, mine);
    kel_record *record = parse("annotations", other, strlen(other));
    ck_assert_str_eq(kel_record_content(record)->annotations, mine);
    kel_text again = format_record(record);
    ck_assert_str_eq(again.bytes, other);
    kel_text_free(&again);
    kel_text_free(&text);
    kel_record_free(record);
    free(old);
    free(other);
}
END_TEST

/* ---- damage ---- */

static void
refused(const char *label, const char *bytes, size_t n, kel_status want, const char *message)
{
    kel_error err = { 0 };
    kel_record *record = (kel_record *)&err;
    kel_status status = kel_record_parse(&record, bytes, n, &err);
    ck_assert_msg(status == want, "%s: status %s, expected %s; %s", label, kel_status_text(status),
                  kel_status_text(want),
                  err.message);
    ck_assert_ptr_null(record);
    ck_assert_msg(err.code == status && strstr(err.message, message) != NULL, "%s: got '%s', expected '%s' in it",
                  label,
                  err.message, message);
    ck_assert_msg(strpbrk(err.message, "\r\n\x1B") == NULL && strchr(err.message, '\0')[-1] != '.', "%s: '%s'", label,
                  err.message);
    bool has_place = status == KEL_E_SYNTAX || status == KEL_E_RANGE;
    ck_assert_msg((err.line != 0 && err.column != 0) == has_place, "%s: place %zu:%zu", label, err.line, err.column);
}

static void
tree_refused(const char *label, const json_t *tree, const char *message)
{
    char *text = json_dumps(tree, JSON_INDENT(1));
    refused(label, text, strlen(text), KEL_E_DATA, message);
    free(text);
}

/* A change to one member of one object of a tree. */
typedef void change(const json_t *root, json_t *object, const char *key);

static void
take_away(const json_t *root, json_t *object, const char *key)
{
    char message[100];
    json_t *value = json_incref(json_object_get(object, key));
    json_object_del(object, key);
    bool top = strcmp(key, "kelspan_record") == 0, optional = strcmp(key, "annotations") == 0;
    snprintf(message, sizeof message, top ? "not a record: the key %s is missing" : "%s is missing", key);
    if (!optional)
        tree_refused(key, root, message);
    json_object_set_new(object, key, value);
}

static void
misspell(const json_t *root, json_t *object, const char *key)
{
    char other[100], message[120];
    json_t *value = json_incref(json_object_get(object, key));
    json_object_del(object, key);
    snprintf(other, sizeof other, "%sX", key);
    snprintf(message, sizeof message, strcmp(key, "kelspan_record") == 0 ? "not a record" : "%s is not a known key",
             other);
    json_object_set(object, other, value);
    tree_refused(key, root, message);
    json_object_del(object, other);
    json_object_set_new(object, key, value);
}

/* Every other type of JSON, where the key does not allow it; null is right for what may be unknown, and then the
   digest tells. */
static void
retype(const json_t *root, json_t *object, const char *key)
{
    json_t *value = json_incref(json_object_get(object, key));
    json_t *others[] = { json_object(), json_array(), json_string("?"), json_real(1.5), json_true(), json_null() };
    for (int i = 0; i < KEL_LENGTH(others); i++) {
        kel_error err;
        kel_record *record;
        bool same_type = json_typeof(others[i]) == json_typeof(value) || (json_is_boolean(others[i]) &&
            json_is_boolean(value)) ||
                         (json_is_number(others[i]) && json_is_number(value));
        json_object_set(object, key, others[i]);
        char *text = json_dumps(root, 0);
        kel_status status = kel_record_parse(&record, text, strlen(text), &err);
        bool may_be_null = json_is_null(others[i]) || json_is_null(value);
        ck_assert_msg(same_type || status == KEL_E_DATA || (may_be_null && status == KEL_E_DIGEST),
                      "%s of type %d: %s", key,
                      (int)json_typeof(others[i]), kel_status_text(status));
        /* Whether a row is left out decides what else it must hold. */
        bool named = status == KEL_E_DATA && (strstr(err.message, key) != NULL || (strcmp(key, "left_out") == 0 &&
            may_be_null));
        ck_assert_msg(same_type || status != KEL_E_DATA || named, "%s: '%s'", key, err.message);
        kel_record_free(record);
        free(text);
        json_decref(others[i]);
    }
    json_object_set_new(object, key, value);
}

/* Applies the change to every member of every object, those of annotations aside. */
static size_t
everywhere(change *apply, const json_t *root, json_t *value)
{
    size_t done = 0, index;
    json_t *element;
    if (json_is_array(value))
        json_array_foreach(value, index, element)
            done += everywhere(apply, root, element);
    if (!json_is_object(value))
        return done;
    /* The change disturbs the order of members, so keys come from a copy. */
    json_t *copy = json_copy(value);
    const char *key;
    json_object_foreach(copy, key, element) {
        apply(root, value, key);
        done++;
        if (strcmp(key, "annotations") != 0)
            done += everywhere(apply, root, element);
    }
    json_decref(copy);
    return done;
}

static void
damage_everywhere(change *apply)
{
    json_t *tree = rich_tree();
    char *text = json_dumps(tree, JSON_SORT_KEYS);
    /* 26 at the top, 3 of each piece, transition and check, 4 of each mode, 16, 9 and 13 of each source, column and
       row. */
    ck_assert_uint_eq(everywhere(apply, tree, tree), 26 + 3 * 3 + 3 * 3 + 6 * 3 + 2 * 4 + 2 * 16 + 2 * 9 + 4 * 13);
    char *after = json_dumps(tree, JSON_SORT_KEYS);
    ck_assert_str_eq(text, after);
    free(text);
    free(after);
    json_decref(tree);
}

START_TEST(missing_keys)
{
    damage_everywhere(take_away);
}
END_TEST

START_TEST(unknown_keys)
{
    damage_everywhere(misspell);
}
END_TEST

START_TEST(wrong_types)
{
    damage_everywhere(retype);
}
END_TEST

/* Each key of the text twice. */
START_TEST(duplicate_keys)
{
    kel_text text = rich_text();
    size_t keys = 0;
    for (const char *colon = text.bytes; (colon = strstr(colon, "\": ")) != NULL; colon++) {
        const char *quote = colon - 1;
        while (*quote != '"')
            quote--;
        kel_text other = KEL_TEXT_INIT;
        kel_text_add_bytes(&other, text.bytes, (size_t)(quote - text.bytes));
        kel_text_add_bytes(&other, quote, (size_t)(colon + 3 - quote));
        kel_text_add(&other, "0, ");
        kel_text_add(&other, quote);
        refused("duplicate", other.bytes, other.size, KEL_E_SYNTAX,
                "not valid JSON: the key that ends here occurs twice");
        kel_text_free(&other);
        keys++;
    }
    ck_assert_uint_gt(keys, 150);
    kel_text_free(&text);
}
END_TEST

START_TEST(cut_anywhere)
{
    kel_text text = rich_text();
    for (size_t n = 1; n + 1 < text.size; n++)
        refused("cut", text.bytes, n, KEL_E_SYNTAX, "not valid JSON: ");
    refused("nothing left", text.bytes, 0, KEL_E_SYNTAX, "not a record: it is empty");
    kel_record_free(parse("final newline", text.bytes, text.size - 1));
    kel_text_free(&text);
}
END_TEST

/* Every bit of a small record turned over, and every byte made a digit, a blank and a NUL: refused, or it means the
   same. */
START_TEST(changed_anywhere)
{
    static const unsigned char put[] = { '0', '9', ' ', '\0', '"', 0xFF };
    kel_content content = small_content();
    kel_record *record = build_content(&content);
    kel_text text = format_record(record);
    size_t harmless = 0;
    for (size_t i = 0; i < text.size; i++)
        for (int k = 0; k < 8 + KEL_LENGTH(put); k++) {
            const char before = text.bytes[i];
            text.bytes[i] = (char)(k < 8 ? (unsigned char)before ^ 1u << k : put[k - 8]);
            kel_record *other;
            kel_status status = kel_record_parse(&other, text.bytes, text.size, NULL);
            char after = text.bytes[i];
            text.bytes[i] = before;
            if (status == KEL_OK) {
                kel_text again = format_record(other);
                ck_assert_msg(strcmp(again.bytes, text.bytes) == 0, "byte %zu, 0x%02x for 0x%02x, went unnoticed: %s",
                              i,
                              (unsigned)(unsigned char)after, (unsigned)(unsigned char)before, again.bytes);
                kel_text_free(&again);
                harmless++;
            }
            kel_record_free(other);
        }
    /* A blank for a line end is one of them. */
    ck_assert_uint_gt(harmless, 30);
    kel_text_free(&text);
    kel_record_free(record);
}
END_TEST

static const struct fault { const char *label, *find,
    *put; kel_status status; const char *message; size_t line; } faults[] = {
    { "newer", "\"kelspan_record\": 1", "\"kelspan_record\": 2", KEL_E_VERSION,
      "written by a newer kelspan (record version 2, this one reads up to 1)", 0 },
    { "newer, with keys of its own", "\"kelspan_record\": 1", "\"kelspan_record\": 3, \"signature\": \"x\"",
      KEL_E_VERSION,
      "written by a newer kelspan (record version 3, this one reads up to 1)", 0 },
    { "version 0", "\"kelspan_record\": 1", "\"kelspan_record\": 0", KEL_E_DATA, "kelspan_record = 0 is no version",
      0 },
    { "version between", "\"kelspan_record\": 1", "\"kelspan_record\": 1.5", KEL_E_DATA,
      "kelspan_record is not a count", 0 },
    { "version below", "\"kelspan_record\": 1", "\"kelspan_record\": -1", KEL_E_DATA, "kelspan_record is not a count",
      0 },
    { "version as text", "\"kelspan_record\": 1", "\"kelspan_record\": \"1\"", KEL_E_DATA,
      "kelspan_record is not a number", 0 },
    { "beyond a double", "293.15", "1e400", KEL_E_RANGE, "a number is beyond the range of a double", 5 },
    { "far below zero", "-8.4e-6", "-1e400", KEL_E_RANGE, "a number is beyond the range of a double", 20 },
    { "not a number", "293.15", "NaN", KEL_E_SYNTAX, "not valid JSON: ", 5 },
    { "infinity", "293.15", "Infinity", KEL_E_SYNTAX, "not valid JSON: ", 5 },
    { "hexadecimal", "293.15", "0x125", KEL_E_SYNTAX, "not valid JSON: ", 5 },
    { "decimal comma", "293.15", "293,15", KEL_E_SYNTAX, "not valid JSON: ", 5 },
    { "plus", "293.15", "+293.15", KEL_E_SYNTAX, "not valid JSON: ", 5 },
    { "leading zero", "293.15", "0293.15", KEL_E_SYNTAX, "not valid JSON: ", 5 },
    { "bare point", "293.15", "293.", KEL_E_SYNTAX, "not valid JSON: ", 5 },
    { "comma at the end", "\"tags\": [", "\"tags\": [1,],\"more\": [", KEL_E_SYNTAX, "not valid JSON: ", 0 },
    { "escaped NUL", "\"NT-40\"", "\"NT\\u0000\"", KEL_E_SYNTAX, "\\u0000 is not allowed", 0 },
    { "lone surrogate", "\"NT-40\"", "\"\\ud800\"", KEL_E_SYNTAX, "not valid JSON: ", 0 },
    { "invalid UTF-8", "\"NT-40\"", "\"\xB0\"", KEL_E_SYNTAX, "not valid JSON: ", 0 },
    { "control byte", "\"NT-40\"", "\"\x1B[31m\"", KEL_E_SYNTAX, "not valid JSON: ", 0 },
    { "text behind", "]}\n}\n", "]}\n}\n{}", KEL_E_SYNTAX, "not valid JSON: wrong syntax near '{'", 0 },
    { "annotations no object",
      "\"annotations\": {\"approved\": {\"by\": \"QA\", \"limit\": 1.50},\n  \"tags\": [\"}\", \"\\\"]\"]}",
      "\"annotations\": [1]", KEL_E_DATA, "annotations is not an object", 0 },
    { "digit of a coefficient", "3.9e-6", "3.8e-6", KEL_E_DIGEST, "the content does not match its digest", 0 },
    { "last bit of a coefficient", "-3.3333333333333335e-7", "-3.333333333333334e-7", KEL_E_DIGEST,
      "does not match its digest", 0 },
    { "lost sign of zero", "[1e-9, -0, 4e-9]", "[1e-9, 0, 4e-9]", KEL_E_DIGEST, "does not match its digest", 0 },
    { "label", "\"NT-40\"", "\"NT-41\"", KEL_E_DIGEST, "does not match its digest", 0 },
    { "unknown made known", "\"chi2\": 0.3333333333333333", "\"chi2\": null", KEL_E_DIGEST,
      "does not match its digest", 0 },
    { "digest itself", "\"digest\": \"", "\"digest\": \"0", KEL_E_DATA,
      "sources[0].digest is not 64 hexadecimal digits", 0 },
    { "rule of the content", "\"to_K\": 77,", "\"to_K\": 78,", KEL_E_DATA,
      "pieces[1].from_K = 77 must equal the end of the piece before, 78", 0 },
    { "word", "\"fitted\", \"length_step\"", "\"guessed\", \"length_step\"", KEL_E_DATA,
      "transitions[1].step = 'guessed' is none of 'none', 'fitted', 'stated'", 0 },
    { "unknown form", "\"piecewise\"", "\"rational\"", KEL_E_DATA,
      "form is none of 'polynomial', 'piecewise', 'adopted'", 0 },
    { "range of one", "[4.2, 899.5]", "[4.2]", KEL_E_DATA, "range_K holds 1 numbers, but must hold 2", 0 },
    { "range of three", "[4.2, 899.5]", "[4.2, 5, 899.5]", KEL_E_DATA, "range_K holds 3 numbers, but must hold 2", 0 },
    { "null in a curve", "[0.000011]", "[null]", KEL_E_DATA, "pieces[1].chebyshev_per_K[0] is not a number", 0 },
    { "mode without a piece", "        [3e-8],\n", "", KEL_E_DATA,
      "modes[0].chebyshev_per_K has another number of pieces than the curve", 0 },
    { "mode of another degree", "[3e-8]", "[3e-8, 1]", KEL_E_DATA,
      "modes[0].chebyshev_per_K[1] holds 2 numbers, but must hold 1", 0 },
    { "mode without a step", "[0, 2e-7, 0]", "[0, 2e-7]", KEL_E_DATA,
      "modes[0].length_steps holds 2 numbers, but must hold 3", 0 },
    { "half a row", "\"rows\": 12", "\"rows\": 12.5", KEL_E_DATA, "sources[0].rows is not a count", 0 },
    { "more rows than can be counted", "\"rows\": 12", "\"rows\": 1e300", KEL_E_DATA, "sources[0].rows is not a count",
      0 },
    { "key with an escape sequence", "\"form\"", "\"\\u001b[31m\"", KEL_E_DATA, "\\x1B[31m is not a known key", 0 },
};

START_TEST(faults_have_names)
{
    const struct fault *f = &faults[_i];
    kel_text text = rich_text();
    char *other = replaced(text.bytes, f->find, f->put);
    refused(f->label, other, strlen(other), f->status, f->message);
    if (f->line != 0) {
        kel_error err;
        kel_record *record;
        kel_record_parse(&record, other, strlen(other), &err);
        ck_assert_msg(err.line == f->line, "%s: line %zu, expected %zu", f->label, err.line, f->line);
    }
    free(other);
    kel_text_free(&text);
}
END_TEST

START_TEST(no_records)
{
    static const char nul[] = "{\"kelspan_record\": 1,\n\0}";
    refused("list", "[]", 2, KEL_E_DATA, "not a record");
    refused("number", "293", 3, KEL_E_DATA, "not a record: its JSON text is not an object");
    refused("empty object", "{}", 2, KEL_E_DATA, "not a record: the key kelspan_record is missing");
    refused("other object", "{\"form\": 1}", 11, KEL_E_DATA, "not a record: the key kelspan_record is missing");
    refused("only a version", "{\"kelspan_record\": 1}", 21, KEL_E_DATA, "form is missing");
    refused("a table", "# material: NT-40\n", 18, KEL_E_SYNTAX, "not valid JSON: ");
    refused("second value", "{}, {}", 6, KEL_E_SYNTAX, "not valid JSON: something stands behind its end");
    refused("closing bracket", "{}]", 3, KEL_E_SYNTAX, "not valid JSON: something stands behind its end");
    refused("two closing brackets", "{}]]", 4, KEL_E_SYNTAX, "not valid JSON: something stands behind its end");
    refused("cut", "{\"kelspan_record\": [1", 21, KEL_E_SYNTAX, "not valid JSON: it ends too early");
    refused("cut in a string", "{\"kelspan_rec", 13, KEL_E_SYNTAX, "not valid JSON: it ends too early");
    refused("blanks", " \n", 2, KEL_E_SYNTAX, "not valid JSON: ");
    refused("NUL", nul, sizeof nul - 1, KEL_E_SYNTAX, "it holds a NUL byte");
    kel_error err;
    kel_record *record;
    kel_record_parse(&record, nul, sizeof nul - 1, &err);
    ck_assert_uint_eq(err.line, 2);
    ck_assert_uint_eq(err.column, 1);
    ck_assert_int_eq(kel_record_parse(&record, NULL, 3, &err), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_record_parse(NULL, "{}", 2, &err), KEL_E_ARGUMENT);
}
END_TEST

/* Columns count bytes, whatever characters stand before: here U+2212 of three bytes in a string. */
START_TEST(columns_count_bytes)
{
    kel_error err;
    kel_record *record;
    const char text[] = "{\n \"\xE2\x88\x92\": x}";
    ck_assert_int_eq(kel_record_parse(&record, text, sizeof text - 1, &err), KEL_E_SYNTAX);
    ck_assert_uint_eq(err.line, 2);
    ck_assert_uint_eq(err.column, 9);
}
END_TEST

START_TEST(too_deep_or_too_large)
{
    size_t n = KEL__RECORD_LARGEST;
    char *text = malloc(n + 1);
    memset(text, '[', n);
    refused("all brackets", text, n, KEL_E_SYNTAX, "it is nested too deeply");
    memset(text, ' ', n + 1);
    memcpy(text, "{}", 2);
    refused("as large as may be", text, n, KEL_E_DATA, "the key kelspan_record is missing");
    refused("one more", text, n + 1, KEL_E_DATA, "not a record: it is larger than 16 MiB");
    free(text);
}
END_TEST

/* ---- check values ---- */

static const struct check { const char *label; size_t i; double coefficient,
    expansion; kel_status status; const char *message; } checks[] = {
    { "as written", 0, 0.0, 0.0, KEL_OK, NULL },
    /* S = 1.7e-5 for alpha; over the 193.15 K from 293.15 K to 100 K its integral is 3.28e-3. */
    { "coefficient within 1e-12", 0, 1.6e-17, 0.0, KEL_OK, NULL },
    { "coefficient beyond 1e-12", 0, 1.8e-17, 0.0, KEL_E_DIGEST, "the check value of the coefficient at 100 K is " },
    { "expansion within 1e-12", 0, 0.0, -3.2e-15, KEL_OK, NULL },
    { "expansion beyond 1e-12", 0, 0.0, 3.4e-15, KEL_E_DIGEST, "the check value of the expansion at 100 K is " },
    { "not zero at the reference", 5, 0.0, 1e-20, KEL_E_DIGEST,
      "the check value of the expansion at 293.15 K is 1e-20, but the curve gives 0" },
};

/* The digest is right, so that only the check values can tell. */
START_TEST(check_values_are_compared)
{
    const struct check *k = &checks[_i];
    char hex[65];
    kel_error err;
    kel_content content = small_content();
    kel_record *record = build_content(&content);
    kel_check changed[6];
    memcpy(changed, record->content.checks, sizeof changed);
    changed[k->i].coefficient += k->coefficient;
    changed[k->i].expansion += k->expansion;
    record->content.checks = changed;
    ck_assert_int_eq(kel__record_digest(hex, NULL, &record->content, &err), KEL_OK);
    record->content.digest = hex;
    kel_text text = format_record(record);
    if (k->status == KEL_OK)
        kel_record_free(parse(k->label, text.bytes, text.size));
    else
        refused(k->label, text.bytes, text.size, k->status, k->message);
    kel_text_free(&text);
    kel_record_free(record);
}
END_TEST

/* None at all, or one that proves nothing: refused though the digest is right. */
START_TEST(check_values_must_be_there)
{
    char hex[65];
    kel_error err;
    kel_content content = small_content();
    kel_record *record = build_content(&content);
    kel_check changed[6];
    memcpy(changed, record->content.checks, sizeof changed);
    changed[2].at = 301.0;
    record->content.checks = changed;
    record->content.digest = hex;
    for (int none = 0; none <= 1; none++) {
        record->content.check_count = none ? 0 : 6;
        ck_assert_int_eq(kel__record_digest(hex, NULL, &record->content, &err), KEL_OK);
        kel_text text = format_record(record);
        refused(none ? "none" : "outside", text.bytes, text.size, KEL_E_DATA,
                none ? "checks is empty" : "checks[2].temperature_K lies outside the validity range");
        kel_text_free(&text);
    }
    kel_record_free(record);
}
END_TEST

KEL_TCASE(whole, keeps_everything, keeps_everything_with_a_comma, keeps_any_double, layout_does_not_matter,
          annotations_are_free)
KEL_TCASE(damage, missing_keys, unknown_keys, wrong_types, duplicate_keys, cut_anywhere, changed_anywhere, no_records,
          columns_count_bytes, too_deep_or_too_large, check_values_must_be_there)

static TCase *
tables(void)
{
    TCase *c = tcase_create("tables");
    tcase_add_loop_test(c, means_the_same, 0, KEL_LENGTH(sames));
    tcase_add_loop_test(c, faults_have_names, 0, KEL_LENGTH(faults));
    tcase_add_loop_test(c, check_values_are_compared, 0, KEL_LENGTH(checks));
    return c;
}

KEL_TEST_MAIN("record_parse", whole, damage, tables)

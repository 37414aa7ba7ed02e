/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Records. The bytes are the text of one. A changed text is refused for its digest, so two other ways lead behind that:

   01 first: the text behind it gets the digest that belongs to its content; and its content, taken as it stands, is
   built into a record, which makes check values and digest anew.
   02 first: the bytes behind it make a content: numbers, counts, words, of which most keep the rules. */
#include "fuzz_answers.h"

#include <math.h>

#include "record_parts.h"
#include "record_read.h"

const char *const fuzz_name = "record";
const char *const fuzz_data[] = { "tests/data/*-record*.json", NULL };

enum { LARGEST = 1 << 16 };

static void
parse(const char *text, size_t n)
{
    kel_record *record = NULL;
    kel_error err = { 0 };
    kel_status status = kel_record_parse(&record, text, n, &err);
    if (status < 0) {
        fuzz_error(status, &err);
        FUZZ_REQUIRE(record == NULL, "%s", err.message);
        bool has_place = status == KEL_E_SYNTAX || status == KEL_E_RANGE;
        FUZZ_REQUIRE(!has_place || (err.line > 0 && err.column > 0), "%s", err.message);
        return;
    }
    fuzz_record(record, NULL);
    kel_record_free(record);
}

static void
build(const kel_content *content)
{
    kel_record *record = NULL;
    kel_error err = { 0 };
    kel_status status = kel_record_build(&record, content, &err);
    if (status < 0) {
        fuzz_error(status, &err);
        FUZZ_REQUIRE(record == NULL, "%s", err.message);
        FUZZ_REQUIRE(status == KEL_E_ARGUMENT || status == KEL_E_RANGE, "%d: %s", (int)status, err.message);
        return;
    }
    fuzz_record(record, NULL);
    kel_record_free(record);
}

/* ---- 01: a text that is changed and signed again ---- */

/* Where 64 bytes of the outermost digest stand: it is the last one in our layout. NULL if there are none. */
static char *
find_digest(char *text)
{
    char *found = NULL;
    static const char key[] = "\"digest\"";
    for (char *p = strstr(text, key); p != NULL; p = strstr(p + 1, key))
        found = p;
    if (found == NULL)
        return NULL;
    found += strlen(key);
    found += strspn(found, " \t\r\n:");
    if (*found++ != '"')
        return NULL;
    return strcspn(found, "\"\\") == 64 ? found : NULL;
}

static void
sign_again(char *text, size_t n)
{
    kel__tree *tree = NULL;
    kel_error err = { 0 };
    if (kel__tree_parse(&tree, text, n, &err) != KEL_OK)
        return;
    kel_content content = { 0 };
    kel__reader reader = { kel_arena_new(), &err, KEL_OK };
    FUZZ_REQUIRE(reader.memory != NULL, "memory ran out");
    const kel__node root = kel__tree_root(tree);
    if (kel__is_object(&root))
        kel__content_read(&content, &reader, &root);
    if (kel__is_object(&root) && reader.status == KEL_OK) {
        build(&content);
        char hex[65], *digest = find_digest(text);
        if (digest != NULL && kel__content_check(&content, KEL_E_DATA, &err) == KEL_OK &&
            kel__record_digest(hex, NULL, &content, &err) == KEL_OK) {
            memcpy(digest, hex, 64);
            parse(text, n);
        }
    }
    kel__tree_free(tree);
    kel_arena_free(reader.memory);
}

/* ---- 02: a content from bytes ---- */

enum { MOST = 6, MOST_COEFFICIENTS = 8 };

static const char hex_digits[] = "0123456789abcdef0123456789abcdef0123456789abcdef0123456789abcdef";

static const char *const texts[] = {
    "NT-40", "", "polynomial", "piecewise", "adopted", "2 %", "1 % + 1e-6 [1] k=2", hex_digits, "\xE2\x88\x92", "\xFF",
    "a \"quoted\" \\ one\n", "\x01\x7F", "{}", "{\"a\": [1, 2.50, \"}\"]}", "{\"a\": 1, \"a\": 2}", "[",
};

static const char *
text_of(fuzz_bytes *b)
{
    unsigned k = fuzz_byte(b);
    return k % 4 == 3 ? NULL : texts[(k >> 2) % (sizeof texts / sizeof texts[0])];
}

static double
any_double(fuzz_bytes *b)
{
    uint64_t bits = 0;
    double x;
    for (int i = 0; i < 8; i++)
        bits = bits << 8 | fuzz_byte(b);
    memcpy(&x, &bits, sizeof x);
    return x;
}

/* A number near 1, mostly; any at times. */
static double
number(fuzz_bytes *b)
{
    static const double rare[] = { 0, -0.0, 1e-300, 5e-324, 1e300, 1.7976931348623157e308, 1, -1 };
    unsigned k = fuzz_byte(b);
    if (k == 255)
        return any_double(b);
    if (k == 254)
        return NAN;
    if (k >= 240)
        return rare[k % 8];
    return ((double)k - 120) / 16 + (double)fuzz_byte(b) / 65536;
}

static double
kelvin(fuzz_bytes *b)
{
    unsigned k = fuzz_byte(b);
    return k == 255 ? any_double(b) : 4 * (double)k + (double)fuzz_byte(b) / 64;
}

static size_t
count(fuzz_bytes *b, size_t most)
{
    return fuzz_byte(b) % (most + 1);
}

/* Everything that a content points to. */
typedef struct made {
    kel_piece pieces[MOST]; kel_transition transitions[MOST]; kel_interval gaps[MOST];
    int continuity[MOST];
    double numbers[MOST + 1][MOST * MOST_COEFFICIENTS], steps[MOST + 1][MOST];
    kel_mode modes[MOST];
    const char *strings[MOST];
    kel_source sources[MOST]; kel_fit_column columns[MOST]; kel_fitted rows[MOST];
} made;

static kel_curve
make_curve(fuzz_bytes *b, made *m, size_t place, const kel_content *c, double scale)
{
    for (size_t j = 0; j < c->coefficient_count; j++)
        m->numbers[place][j] = scale * number(b);
    for (size_t i = 0; i < c->transition_count; i++)
        m->steps[place][i] = m->transitions[i].step == KEL_STEP_NONE ? 0 : scale * number(b);
    return (kel_curve){ m->numbers[place], m->steps[place] };
}

/* Pieces adjoin, transitions go up and stand at the joins, mostly. */
static void
make_curves(fuzz_bytes *b, made *m, kel_content *c)
{
    double t = kelvin(b), scale = fuzz_byte(b) % 8 != 7 ? 1e-5 : 1;
    c->piece_count = 1 + count(b, MOST - 2);
    for (size_t i = 0; i < c->piece_count; i++) {
        kel_piece *p = &m->pieces[i];
        p->from = t;
        t = p->to = t + kelvin(b);
        p->first = c->coefficient_count;
        p->count = 1 + count(b, MOST_COEFFICIENTS - 1);
        c->coefficient_count += p->count;
        m->continuity[i] = (int)count(b, 3) - 1;
        unsigned k = fuzz_byte(b);
        if (c->transition_count < MOST && k % 4 != 0)
            m->transitions[c->transition_count++] = (kel_transition){ k % 16 == 15 ? kelvin(b) : t,
                                                                      (kel_step_kind)(k % 4 - 1) };
    }
    unsigned k = fuzz_byte(b);
    c->range = k % 8 == 7 ? (kel_interval){ kelvin(b), kelvin(b) } : (kel_interval){ m->pieces[0].from, t };
    c->continuity_count = c->piece_count - (k < 250);
    for (c->gap_count = 0; c->gap_count < k % 3; c->gap_count++)
        m->gaps[c->gap_count] = (kel_interval){ kelvin(b), kelvin(b) };
    c->mean = make_curve(b, m, 0, c, scale);
    c->mode_count = count(b, 3);
    for (size_t i = 0; i < c->mode_count; i++)
        m->modes[i] = (kel_mode){ (kel_mode_kind)count(b, 2), "scatter", make_curve(b, m, i + 1, c, scale / 64) };
}

static void
make_data(fuzz_bytes *b, made *m, kel_content *c)
{
    size_t texts_of_one = count(b, MOST);
    for (size_t i = 0; i < texts_of_one; i++)
        m->strings[i] = text_of(b);
    c->source_count = count(b, 2);
    for (size_t i = 0; i < c->source_count; i++)
        m->sources[i] = (kel_source){ text_of(b), text_of(b), text_of(b), text_of(b), text_of(b), text_of(b),
                                      text_of(b), text_of(b), text_of(b), text_of(b), kelvin(b), (kel_base)count(b, 1),
                                      count(b, 9), count(b, 9), m->strings, texts_of_one, m->strings, texts_of_one };
    c->column_count = count(b, 2);
    for (size_t i = 0; i < c->column_count; i++)
        m->columns[i] = (kel_fit_column){ count(b, 1), (kel_kind)count(b, 2), text_of(b), count(b, 3), number(b),
                                          number(b), number(b), number(b), (kel_variance)count(b, 4) };
    c->row_count = count(b, MOST);
    for (size_t i = 0; i < c->row_count; i++)
        m->rows[i] = (kel_fitted){ count(b, 1), count(b, 1), fuzz_byte(b), (kel_kind)count(b, 2), kelvin(b), kelvin(b),
                                   number(b), number(b), number(b), number(b), number(b), (int)count(b, 2) - 1,
                                   text_of(b) };
}

static void
make_content(fuzz_bytes *b)
{
    made m = { 0 };
    kel_content c = { 0 };
    c.form = texts[2 + fuzz_byte(b) % 3];
    c.base = (kel_base)count(b, 1);
    c.reference_temperature = kelvin(b);
    c.reference_defaulted = fuzz_byte(b) % 2 == 1;
    make_curves(b, &m, &c);
    c.variance = (kel_variance)count(b, 4);
    c.scatter_known = fuzz_byte(b) % 2 == 1;
    c.observations = count(b, 9);
    c.parameters = count(b, 9);
    c.degrees_of_freedom = number(b);
    c.residual_standard_deviation = number(b);
    c.chi2 = number(b);
    c.thinned = fuzz_byte(b) % 2 == 1;
    c.lot_spread = text_of(b);
    c.annotations = text_of(b);
    c.pieces = m.pieces;
    c.transitions = m.transitions;
    c.gaps = m.gaps;
    c.continuity = m.continuity;
    c.modes = m.modes;
    c.sources = m.sources;
    c.columns = m.columns;
    c.rows = m.rows;
    make_data(b, &m, &c);
    build(&c);
}

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    fuzz_bytes bytes = { data, size };
    if (size > LARGEST)
        return 0;
    if (size == 0 || data[0] > 2 || data[0] == 0) {
        parse((const char *)data, size);
    } else if (data[0] == 1) {
        char *text = malloc(size);
        FUZZ_REQUIRE(text != NULL, "memory ran out");
        memcpy(text, data + 1, size - 1);
        text[size - 1] = '\0';
        sign_again(text, size - 1);
        free(text);
    } else {
        fuzz_byte(&bytes);
        make_content(&bytes);
    }
    return 0;
}

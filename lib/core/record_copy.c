/* SPDX-License-Identifier: Apache-2.0 */
/* Deep copy of a record's content. Strings are mended to valid UTF-8 on the way, so that a record holds what its
   file will say, and a record that is read back equals the one that was written. */
#include "record_parts.h"
#include "utf8.h"

#include <string.h>

/* One failure is remembered; the copy is useless then, and complete otherwise. */
typedef struct copier {
    kel_arena *memory;
    bool failed;
} copier;

static void *
copy_array(copier *c, const void *from, size_t n, size_t size)
{
    void *p = kel_arena_copy(c->memory, from, n, size);
    if (p == NULL)
        c->failed = true;
    return p;
}

/* Each byte that is no UTF-8 becomes U+FFFD, three bytes. */
static const char *
copy_string(copier *c, const char *s)
{
    if (s == NULL)
        return NULL;
    size_t n = strlen(s), at = 0;
    char *out = kel_arena_take(c->memory, n + 1, 3);
    if (out == NULL) {
        c->failed = true;
        return NULL;
    }
    for (size_t i = 0; i < n;) {
        uint32_t point;
        size_t size = kel__utf8_character(&point, s + i, n - i);
        memcpy(out + at, size == 0 ? "\xEF\xBF\xBD" : s + i, size == 0 ? 3 : size);
        at += size == 0 ? 3 : size;
        i += size == 0 ? 1 : size;
    }
    return out;
}

static const char *const *
copy_strings(copier *c, const char *const *strings, size_t n)
{
    const char **out = kel_arena_take(c->memory, n, sizeof *out);
    if (out == NULL)
        c->failed = true;
    for (size_t i = 0; i < n && !c->failed; i++)
        out[i] = copy_string(c, strings[i]);
    return out;
}

static kel_curve
copy_curve(copier *c, const kel_content *content, kel_curve curve)
{
    return (kel_curve){ copy_array(c, curve.coefficients, content->coefficient_count, sizeof(double)),
                        copy_array(c, curve.steps, content->transition_count, sizeof(double)) };
}

static void
copy_modes(copier *c, kel_content *out, const kel_content *content)
{
    kel_mode *modes = copy_array(c, content->modes, content->mode_count, sizeof *modes);
    for (size_t k = 0; k < content->mode_count && !c->failed; k++) {
        modes[k].label = copy_string(c, modes[k].label);
        modes[k].curve = copy_curve(c, content, modes[k].curve);
    }
    out->modes = modes;
}

static void
copy_sources(copier *c, kel_content *out, const kel_content *content)
{
    kel_source *sources = copy_array(c, content->sources, content->source_count, sizeof *sources);
    for (size_t i = 0; i < content->source_count && !c->failed; i++) {
        kel_source *s = &sources[i];
        const char **const strings[] = { &s->name,         &s->digest, &s->material, &s->condition, &s->direction,
                                         &s->product_form, &s->source, &s->lineage,  &s->scale,     &s->branch };
        /* "" is how a table made of arrays says that it has none. */
        if (s->digest != NULL && s->digest[0] == '\0')
            s->digest = NULL;
        for (size_t k = 0; k < sizeof strings / sizeof strings[0]; k++)
            *strings[k] = copy_string(c, *strings[k]);
        s->uncertainty = copy_strings(c, s->uncertainty, s->uncertainty_count);
        s->notes = copy_strings(c, s->notes, s->note_count);
    }
    out->sources = sources;
}

static void
copy_columns(copier *c, kel_content *out, const kel_content *content)
{
    kel_fit_column *columns = copy_array(c, content->columns, content->column_count, sizeof *columns);
    for (size_t i = 0; i < content->column_count && !c->failed; i++)
        columns[i].label = copy_string(c, columns[i].label);
    out->columns = columns;
}

static void
copy_rows(copier *c, kel_content *out, const kel_content *content)
{
    kel_fitted *rows = copy_array(c, content->rows, content->row_count, sizeof *rows);
    for (size_t i = 0; i < content->row_count && !c->failed; i++)
        rows[i].left_out = copy_string(c, rows[i].left_out);
    out->rows = rows;
}

kel_status
kel__content_copy(kel_content *out, const kel_content *content, kel_arena *memory, kel_error *err)
{
    copier c = { memory, false };
    *out = *content;
    out->checks = NULL;
    out->check_count = 0;
    out->annotations = NULL;
    out->digest = NULL;
    out->form = copy_string(&c, content->form);
    out->lot_spread = copy_string(&c, content->lot_spread);
    out->gaps = copy_array(&c, content->gaps, content->gap_count, sizeof *content->gaps);
    out->pieces = copy_array(&c, content->pieces, content->piece_count, sizeof *content->pieces);
    out->transitions = copy_array(&c, content->transitions, content->transition_count, sizeof *content->transitions);
    out->continuity = copy_array(&c, content->continuity, content->continuity_count, sizeof *content->continuity);
    out->mean = copy_curve(&c, content, content->mean);
    copy_modes(&c, out, content);
    copy_sources(&c, out, content);
    copy_columns(&c, out, content);
    copy_rows(&c, out, content);
    return c.failed ? kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a record") : KEL_OK;
}

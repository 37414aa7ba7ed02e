/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A record's alpha as a coefficient file: powers of T in a unit of choice, ends of pieces and transitions in kelvin,
   so that they read back as the same doubles. Of the uncertainty, the file can carry what was stated for the whole
   curve; the scatter and the shared errors of a fit are several curves of their own and stay behind, which a note
   says. */
#include <string.h>

#include "clause.h"
#include "published.h"

static void
add_line(kel_text *out, const char *key, const char *value)
{
    kel_text_printf(out, "# %s: ", key);
    kel_text_quote(out, value, strlen(value));
    kel_text_add(out, "\n");
}

struct field { const char *key; size_t offset; bool word; };

#define OF(name, is_word) offsetof(kel_source, name), is_word

static const struct field fields[] = {
    { "material", OF(material, false) }, { "condition", OF(condition, false) }, { "direction", OF(direction, false) },
    { "product form", OF(product_form, false) }, { "source", OF(source, false) }, { "lineage", OF(lineage, false) },
    { "scale", OF(scale, true) }, { "branch", OF(branch, true) },
};

static const char *
text_of(const kel_source *source, const struct field *field)
{
    return *(const char *const *)((const char *)source + field->offset);
}

/* What the sources say, each text once. A word of a fixed list is written only if all say the same. */
static void
add_field(kel_text *out, const kel_content *content, const struct field *field)
{
    kel_text joined = KEL_TEXT_INIT;
    size_t texts = 0;
    for (size_t i = 0; i < content->source_count; i++) {
        const char *text = text_of(&content->sources[i], field);
        bool said = text == NULL;
        for (size_t j = 0; j < i && !said; j++) {
            const char *before = text_of(&content->sources[j], field);
            said = before != NULL && strcmp(before, text) == 0;
        }
        if (said)
            continue;
        kel_text_add(&joined, texts++ == 0 ? "" : "; ");
        kel_text_add(&joined, text);
    }
    if (joined.failed)
        out->failed = true;
    else if (texts == 1 || (texts > 1 && !field->word))
        add_line(out, field->key, joined.bytes);
    kel_text_free(&joined);
}

/* A clause as it was printed, with decimal points; false if a coefficient file cannot state it. The grammar has no
   other commas. */
static bool
add_clause(kel_text *out, const char *key, const char *printed, size_t n, bool lot)
{
    kel_text text = KEL_TEXT_INIT;
    kel_text_add_bytes(&text, printed, n);
    bool carried = false;
    if (!text.failed && n > 0) {
        for (char *p = text.bytes; *p != '\0'; p++)
            if (*p == ',')
                *p = '.';
        kel__clause clause;
        kel__entry entry = { key, text.bytes, 0, 0 };
        kel_status status = kel__clause_parse(&clause, &entry, lot, false, NULL);
        carried = status == KEL_OK && !clause.independent &&
                  (clause.absolute == 0 || clause.dimension == KEL_DIM_PER_KELVIN);
        /* A clause that was not read for lack of memory is not one that cannot be carried. */
        out->failed = out->failed || status == KEL_E_NOMEM;
        if (carried)
            add_line(out, key, text.bytes);
    }
    out->failed = out->failed || text.failed;
    kel_text_free(&text);
    return carried;
}

/* The lot spread is one text; several clauses in it stand between semicolons. */
static bool
add_lot(kel_text *out, const char *printed)
{
    bool carried = true;
    while (*printed != '\0') {
        printed += strspn(printed, " ");
        size_t n = strcspn(printed, ";");
        carried = add_clause(out, "lot spread", printed, n, true) && carried;
        printed += n + (printed[n] == ';');
    }
    return carried;
}

static void
add_uncertainty(kel_text *out, const kel_content *content)
{
    bool adopted = strcmp(content->form, "adopted") == 0 && content->source_count == 1, carried = true;
    for (size_t i = 0; i < content->mode_count; i++)
        if (content->modes[i].kind != KEL_MODE_LOT && !adopted)
            carried = false;
    if (adopted) {
        const kel_source *source = &content->sources[0];
        for (size_t i = 0; i < source->uncertainty_count; i++)
            carried = add_clause(out, "uncertainty", source->uncertainty[i], strlen(source->uncertainty[i]), false) &&
                carried;
    }
    if (content->lot_spread != NULL)
        carried = add_lot(out, content->lot_spread) && carried;
    if (!carried)
        add_line(out, "note", "the record knows an uncertainty (scatter of the fit, errors shared by rows) that this "
                              "file cannot carry");
}

static void
add_head(kel_text *out, const kel_content *content, const kel_unit *temperature, const kel_unit *value)
{
    for (size_t i = 0; i < sizeof fields / sizeof fields[0]; i++)
        add_field(out, content, &fields[i]);
    if (!content->reference_defaulted) {
        kel_text_add(out, "# reference temperature: ");
        kel_text_number(out, content->reference_temperature);
        kel_text_add(out, " K\n");
    }
    add_line(out, "base", kel_base_name(content->base));
    kel_text_printf(out, "# curve: coefficient [%s]\n# variable: T [%s]\n", value->name, temperature->name);
    add_uncertainty(out, content);
    for (size_t i = 0; i < content->transition_count; i++) {
        kel_text_add(out, "# transition: ");
        kel_text_number(out, content->transitions[i].at);
        kel_text_add(out, " K");
        if (content->transitions[i].step != KEL_STEP_NONE) {
            kel_text_add(out, " step ");
            kel_text_number(out, content->mean.steps[i]);
        }
        kel_text_add(out, "\n");
    }
    for (size_t i = 0; i < content->source_count; i++)
        for (size_t j = 0; j < content->sources[i].note_count; j++)
            add_line(out, "note", content->sources[i].notes[j]);
}

static kel_status
add_pieces(kel_text *out, const kel_record *record, const kel_unit *temperature, const kel_unit *value, kel_error *err)
{
    const kel_content *content = kel_record_content(record);
    double power[KEL__LARGEST_POWER + 1];
    size_t powers = 0;
    for (size_t i = 0; i < content->piece_count; i++)
        powers = content->pieces[i].count > powers ? content->pieces[i].count : powers;
    if (powers > KEL__LARGEST_POWER + 1)
        return kel_error_set(err, KEL_E_DATA, 0, 0, "a piece of %zu coefficients; a coefficient file has at most %d",
                             powers, KEL__LARGEST_POWER + 1);
    kel_text_add(out, "from [K],to [K]");
    for (size_t k = 0; k < powers; k++)
        kel_text_printf(out, ",power %zu", k);
    kel_text_add(out, "\n");
    /* The variable is zero at the unit's own zero and grows by one for each of its degrees. */
    double centre = kel__two_in_unit(kel__two(0), temperature).hi, scale = kel__two_unit(temperature).hi;
    for (size_t i = 0; i < content->piece_count; i++) {
        kel_status status = kel_record_powers(power, NULL, record, i, centre, scale, err);
        if (status != KEL_OK)
            return status;
        kel_text_number(out, content->pieces[i].from);
        kel_text_add(out, ",");
        kel_text_number(out, content->pieces[i].to);
        for (size_t k = 0; k < powers; k++) {
            kel_text_add(out, ",");
            if (k < content->pieces[i].count)
                kel_text_number(out, kel_unit_from_si(value, power[k]));
        }
        kel_text_add(out, "\n");
    }
    return KEL_OK;
}

kel_status
kel_coefficients_format(kel_text *out, const kel_record *record, const kel_unit *temperature, const kel_unit *value,
                        kel_error *err)
{
    if (out == NULL || record == NULL || temperature == NULL || value == NULL ||
        temperature->dimension != KEL_DIM_TEMPERATURE ||
        value->dimension != KEL_DIM_PER_KELVIN)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "coefficients are written from a record, in a unit of "
                                                        "temperature and one of coefficients");
    add_head(out, kel_record_content(record), temperature, value);
    kel_status status = add_pieces(out, record, temperature, value, err);
    if (status == KEL_OK && out->failed)
        status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the text of coefficients");
    return status;
}

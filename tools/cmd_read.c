/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan read TABLE...: what was understood of each table, or one table in the product's own layout. */
#include "commands.h"
#include "files.h"
#include "messages.h"
#include "report.h"
#include "reservations.h"

#include <string.h>
#include <unistd.h>

const option_group read_options = { "Output of tables", (const option_entry[]){
    { OPT_AS, 0, "as", "csv", false, "write the table in the product's own layout, units and digits as printed (one "
      "table)" },
    { OPT_OUTPUT, 'o', "output", "FILE", false, "write that into a file instead of stdout" },
    { 0, 0, NULL, NULL, false, NULL } } };

/* Only the columns that would be fitted; what stands beside them is checked against them by the library. */
static void
json_columns(kel_json *json, const kel_table *t)
{
    kel_json_array(json, "columns");
    for (size_t i = 0; i < t->column_count; i++) {
        const kel_column *c = &t->columns[i];
        kel_json_inline_object(json, NULL);
        kel_json_string(json, "kind", kel_kind_name(c->kind));
        kel_json_string(json, "label", c->label);
        kel_json_string(json, "unit", c->unit);
        kel_json_number(json, "resolution", c->resolution);
        kel_json_bool(json, "contraction", c->contraction);
        kel_json_end(json);
    }
    kel_json_end(json);
}

/* `left_out` counts rows, as the table does; the list has one entry for each value, since a row may lose one of its
   values and keep the others. */
static void
json_left_out(kel_json *json, const kel_table *t)
{
    kel_json_count(json, "left_out", t->rows_left_out);
    kel_json_array(json, "left_out_rows");
    for (size_t i = 0; i < t->observation_count; i++) {
        const kel_observation *o = &t->observations[i];
        if (o->left_out == NULL)
            continue;
        kel_json_inline_object(json, NULL);
        kel_json_count(json, "line", o->line);
        kel_json_string(json, "kind", kel_kind_name(o->kind));
        kel_json_string(json, "reason", o->left_out);
        kel_json_end(json);
    }
    kel_json_end(json);
}

/* A range that does not exist (no value is fitted) is null. */
static void
json_interval(kel_json *json, const char *key, kel_interval v)
{
    double ends[2] = { v.lo, v.hi };
    if (isnan(v.lo))
        kel_json_null(json, key);
    else
        kel_json_numbers(json, key, ends, 2);
}

/* One table as understood. */
static void
json_table(kel_json *json, const kel_table *t)
{
    kel_json_object(json, NULL);
    kel_json_string(json, "table", t->name);
    kel_json_string(json, "material", t->material);
    kel_json_string(json, "condition", t->condition);
    kel_json_string(json, "direction", t->direction);
    json_columns(json, t);
    kel_json_count(json, "rows", t->rows);
    json_left_out(json, t);
    kel_json_count(json, "empty_cells", t->empty_cells);
    kel_json_count(json, "marked_cells", t->marked_cells);
    kel_json_number(json, "reference_temperature_K", t->reference_temperature);
    kel_json_string(json, "base", kel_base_name(t->base));
    json_interval(json, "range_K", t->range);
    kel_json_inline_array(json, "gaps_K");
    for (size_t i = 0; i < t->gap_count; i++)
        json_interval(json, NULL, t->gaps[i]);
    kel_json_end(json);
    kel_json_inline_array(json, "transitions_K");
    for (size_t i = 0; i < t->transition_count; i++)
        kel_json_number(json, NULL, t->transitions[i].at);
    kel_json_end(json);
    size_t stated = 0;
    for (size_t i = 0; i < t->observation_count; i++)
        stated += t->observations[i].u_stated && t->observations[i].left_out == NULL;
    kel_json_object(json, "uncertainty");
    kel_json_count(json, "values_with_independent_u", stated);
    kel_json_inline_array(json, "stated");
    for (size_t i = 0; i < t->uncertainty_count; i++)
        kel_json_string(json, NULL, t->uncertainty[i]);
    kel_json_end(json);
    kel_json_inline_array(json, "shared");
    for (size_t i = 0; i < t->shared_count; i++)
        kel_json_string(json, NULL, t->shared[i].text);
    kel_json_end(json);
    kel_json_string(json, "lot_spread", t->lot_text);
    kel_json_end(json);
    kel_json_string(json, "sha256", t->digest);
    kel_json_array(json, "warnings");
    for (size_t i = 0; i < t->warning_count; i++) {
        kel_json_object(json, NULL);
        kel_json_string(json, "code", t->warnings[i].code);
        kel_json_string(json, "text", t->warnings[i].text);
        kel_json_end(json);
    }
    kel_json_end(json);
    kel_json_end(json);
}

/* Several tables are one result: its JSON is one object. */
static int
report(job *j, kel_table *const *tables, size_t n, const units *in)
{
    sink out;
    sink_begin(&out, STDOUT_FILENO);
    if (j->json) {
        kel_json json;
        kel_json_begin(&json, &out.pending);
        kel_json_object(&json, NULL);
        kel_json_array(&json, "tables");
        for (size_t i = 0; i < n; i++)
            json_table(&json, tables[i]);
        kel_json_end(&json);
        json_reservations(j, &json);
        json_warnings(j, &json);
        kel_json_end(&json);
    } else {
        for (size_t i = 0; i < n; i++) {
            kel_text_add(&out.pending, i > 0 ? "\n" : "");
            text_table(&out.pending, tables[i], in, (kel_interval){ NAN, NAN }, true);
        }
    }
    return sink_end(j, &out);
}

/* Into a file by way of the library, which replaces it only when the bytes are complete. */
static int
write_table(const job *j, const kel_table *table)
{
    const char *path = option_value(j, OPT_OUTPUT);
    kel_error err = { 0 };
    sink out;
    sink_begin(&out, STDOUT_FILENO);
    kel_status status = kel_table_format(&out.pending, table, &err);
    if (status < 0) {
        kel_text_free(&out.pending);
        return fail(j, table->name, &err);
    }
    if (path == NULL || output_is_stdout(path))
        return sink_end(j, &out);
    status = kel_file_save(path, out.pending.bytes, out.pending.size, &err);
    kel_text_free(&out.pending);
    return status < 0 ? fail_save(j, path, &err) : EXIT_FINE;
}

/* All wrong usages are found before a table is read. */
int
run_read(job *j)
{
    const char *as = option_value(j, OPT_AS);
    if (j->operand_count == 0)
        return usage(j, "read needs a table");
    if (as != NULL && strcmp(as, "csv") != 0)
        return usage(j, "--as csv is the one layout, not %s", as);
    if (as != NULL && j->operand_count > 1)
        return usage(j, "--as csv takes one table, not %zu", j->operand_count);
    if (as != NULL && j->json)
        return usage(j, "--as csv and --json exclude each other");
    if (as == NULL && option_given(j, OPT_OUTPUT))
        return usage(j, "-o needs --as csv");
    kel_table_options o;
    units in;
    int status = table_options(j, &o);
    if (status == EXIT_FINE)
        status = units_begin(j, &in);
    if (status == EXIT_FINE)
        status = output_is_no_input(j, option_value(j, OPT_OUTPUT), j->operands, j->operand_count);
    if (status != EXIT_FINE)
        return status;
    kel_table **tables = kel_arena_take(j->memory, j->operand_count, sizeof *tables);
    if (tables == NULL)
        return fail_memory(j);
    for (size_t i = 0; i < j->operand_count && status == EXIT_FINE; i++)
        status = table_open(j, &tables[i], j->operands[i], &o);
    if (status == EXIT_FINE)
        status = as != NULL ? write_table(j, tables[0]) : report(j, tables, j->operand_count, &in);
    for (size_t i = 0; i < j->operand_count; i++)
        kel_table_free(tables[i]);
    return status == EXIT_FINE ? finish(j) : status;
}

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan fit TABLE...: reads, fits, saves the record, reports. */
#include "commands.h"
#include "fit_settings.h"
#include "files.h"
#include "messages.h"
#include "progress.h"
#include "report.h"
#include "reservations.h"

#include <unistd.h>

const option_group fit_options = { "Fit", (const option_entry[]){
    { OPT_OUTPUT, 'o', "output", "RECORD", false, "save the record; - puts it on stdout and the report on stderr" },
    { OPT_FORM, 0, "form", "FORM", false, "polynomial, or piecewise (which --joins implies)" },
    { OPT_DEGREE, 0, "degree", "N|N,N,..|auto", false,
      "degree of alpha(T), one for each piece or one for all; auto (default) chooses the lowest that leaves no "
      "structure" },
    { OPT_JOINS, 0, "joins", "T,T..", false, "where pieces meet, beside the declared transitions" },
    { OPT_CONTINUITY, 0, "continuity", "C|C,C,..", false,
      "of alpha at the joins: value (default), slope, curvature, or none" },
    { OPT_REFERENCE, 0, "reference", "T", false, "reference temperature of the record, default the first table's" },
    { OPT_BASE, 0, "base", "reference|current", false, "length to which alpha refers, default the first table's" },
    { OPT_RANGE, 0, "range", "LO:HI", false, "take only rows whose printed temperatures lie inside" },
    { OPT_CANDIDATES, 0, "candidates", NULL, false, "show the degrees that were compared" },
    { 0, 0, NULL, NULL, false, NULL } } };

enum { MOST_RESIDUALS = 25 };

typedef struct work {
    kel_table **tables; size_t count;
    kel_record *record;
    kel_fit_report *report;
    fit_settings settings;
    units in;
} work;

/* One set of reading options serves all tables; those that name a file (--leave-out) find theirs by its name. */
static int
read_tables(job *j, work *w)
{
    kel_table_options o;
    int status = table_options(j, &o);
    w->count = j->operand_count;
    w->tables = kel_arena_take(j->memory, w->count, sizeof *w->tables);
    if (w->tables == NULL)
        return fail_memory(j);
    w->settings.options.gap = o.gap;
    for (size_t i = 0; i < w->count && status == EXIT_FINE; i++)
        status = table_open(j, &w->tables[i], j->operands[i], &o);
    return status;
}

/* An error belongs to the one table there is, or to all of them: then no file is named, the message says which. */
static int
fit(job *j, work *w)
{
    kel_error err = { 0 };
    progress p;
    progress_begin(&p, j, "fitting");
    w->settings.options.progress = progress_share;
    w->settings.options.progress_context = &p;
    kel_status done = kel_fit(&w->record, &w->report, (const kel_table *const *)w->tables, w->count,
                              &w->settings.options, &err);
    progress_end(&p);
    const char *name = w->count == 1 ? j->operands[0] : NULL;
    if (done < 0)
        return err.code == KEL_E_ARGUMENT ? usage(j, "%s", err.message) : fail(j, name, &err);
    return warn_all(j, name, w->report->warnings, w->report->warning_count);
}

/* First what was read, then what was made of it: a fit is judged by its input as much as by its residuals. */
static int
text_report(const job *j, const work *w, kel_text *out)
{
    const kel_content *c = kel_record_content(w->record);
    for (size_t i = 0; i < w->count; i++) {
        text_table(out, w->tables[i], &w->in, w->settings.options.range, c->reference_defaulted);
        kel_text_add(out, "\n");
    }
    kel_text_add(out, "Fit\n");
    text_summary(out, c, w->report, &w->in);
    int status = text_answers(j, out, w->record, &w->in);
    if (option_given(j, OPT_CANDIDATES) && w->report->candidate_count > 0)
        text_candidates(out, c, w->report, &w->in);
    else if (option_given(j, OPT_CANDIDATES))
        kel_text_add(out, "\nCandidates\n  none were compared: the degree was given\n");
    if (c->observations <= MOST_RESIDUALS && !c->thinned) {
        kel_text_add(out, "\nResiduals (u: standard uncertainty)\n");
        text_residuals(out, c, &w->in, true);
    }
    const char *path = option_value(j, OPT_OUTPUT);
    kel_text_add(out, "\n");
    if (path == NULL)
        kel_text_add(out, "Nothing was saved: -o RECORD saves the fit.\n");
    else if (!j->report_on_stderr) {
        kel_text_add(out, "The record is saved in ");
        add_file_name(out, path);
        kel_text_add(out, ".\n");
    }
    return status;
}

/* Every value that takes no part, with the reason. */
static void
json_left_out(kel_json *json, const work *w)
{
    kel_json_array(json, "left_out_rows");
    for (size_t i = 0; i < w->count; i++)
        for (size_t k = 0; k < w->tables[i]->observation_count; k++) {
            const kel_observation *o = &w->tables[i]->observations[k];
            const char *reason = why_left_out(o, w->settings.options.range);
            if (reason == NULL)
                continue;
            kel_json_inline_object(json, NULL);
            kel_json_string(json, "table", w->tables[i]->name);
            kel_json_count(json, "line", o->line);
            kel_json_string(json, "kind", kel_kind_name(o->kind));
            kel_json_string(json, "reason", reason);
            kel_json_end(json);
        }
    kel_json_end(json);
}

/* Everything of the record that scripts rely on, then what only the fit itself knows. */
static void
json_report(const job *j, const work *w, kel_text *out)
{
    const kel_content *c = kel_record_content(w->record);
    kel_json json;
    kel_json_begin(&json, out);
    kel_json_object(&json, NULL);
    kel_json_string(&json, "record", option_value(j, OPT_OUTPUT));
    json_summary(&json, c);
    json_fit_report(&json, c, w->report);
    json_left_out(&json, w);
    json_reservations(j, &json);
    json_warnings(j, &json);
    kel_json_end(&json);
}

/* The record first: if it cannot be saved nothing may stand on stdout. */
static int
deliver(job *j, const work *w)
{
    kel_error err = { 0 };
    const char *path = option_value(j, OPT_OUTPUT);
    sink out, report;
    sink_begin(&out, STDOUT_FILENO);
    sink_begin(&report, j->report_on_stderr ? STDERR_FILENO : STDOUT_FILENO);
    int status = EXIT_FINE;
    if (j->json)
        json_report(j, w, &report.pending);
    else
        status = text_report(j, w, &report.pending);
    if (status == EXIT_FINE && report.pending.failed)
        status = fail_memory(j);
    if (status == EXIT_FINE && j->report_on_stderr) {
        if (kel_record_format(&out.pending, w->record, &err) < 0)
            status = fail(j, NULL, &err);
        else
            status = sink_end(j, &out);
    } else if (status == EXIT_FINE && path != NULL && kel_record_save(w->record, path, &err) < 0) {
        status = fail_save(j, path, &err);
    }
    if (status == EXIT_FINE && (!j->report_on_stderr || !j->quiet))
        status = sink_end(j, &report);
    kel_text_free(&out.pending);
    kel_text_free(&report.pending);
    return status;
}

/* Settings first: wrong usage is found before a large table is read. */
int
run_fit(job *j)
{
    const char *path = option_value(j, OPT_OUTPUT);
    if (j->operand_count == 0)
        return usage(j, "fit needs a table");
    j->report_on_stderr = path != NULL && output_is_stdout(path);
    if (j->report_on_stderr && j->json)
        return usage(j, "-o - puts the record on stdout: no --json");
    work w = { 0 };
    int status = fit_settings_read(j, &w.settings);
    if (status == EXIT_FINE)
        status = units_begin(j, &w.in);
    if (status == EXIT_FINE)
        status = output_is_no_input(j, path, j->operands, j->operand_count);
    if (status == EXIT_FINE)
        status = read_tables(j, &w);
    if (status == EXIT_FINE)
        status = fit(j, &w);
    if (status == EXIT_FINE)
        status = deliver(j, &w);
    kel_fit_report_free(w.report);
    kel_record_free(w.record);
    for (size_t i = 0; w.tables != NULL && i < w.count; i++)
        kel_table_free(w.tables[i]);
    return status == EXIT_FINE ? finish(j) : status;
}

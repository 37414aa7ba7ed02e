/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a command answers from: a record, or a table, which is fitted with the defaults. */
#include "files.h"
#include "messages.h"
#include "options.h"
#include "progress.h"

#include <string.h>

enum { LARGEST_RECORD = 16 << 20 };

/* A file is open only while it is read. */
int
table_open(job *j, kel_table **out, const char *name, const kel_table_options *options)
{
    file *f;
    *out = NULL;
    int status = file_open(j, &f, name);
    if (status != EXIT_FINE)
        return status;
    if (file_is_record(f)) {
        file_close(f);
        return fail_text(j, name, "is a record, not a table: value, integrate, tabulate, show and residuals answer "
                                  "from it");
    }
    kel_error err = { 0 };
    progress p;
    progress_begin(&p, j, "reading");
    kel_table_options o = *options;
    o.progress = progress_rows;
    o.progress_context = &p;
    kel_status read = kel_table_read(out, file_input(f), name, &o, &err);
    progress_end(&p);
    file_close(f);
    if (read < 0)
        return fail_or_usage(j, name, &err);
    return warn_all(j, name, (*out)->warnings, (*out)->warning_count);
}

/* Reads and fits the table behind f, which is closed by the caller. */
static int
fit_table(job *j, subject *out, file *f)
{
    kel_table_options o;
    int status = table_options(j, &o);
    if (status != EXIT_FINE)
        return status;
    kel_table *table = NULL;
    kel_fit_report *report = NULL;
    kel_error err = { 0 };
    progress p;
    progress_begin(&p, j, "reading");
    o.progress = progress_rows;
    o.progress_context = &p;
    kel_status done = kel_table_read(&table, file_input(f), out->name, &o, &err);
    if (done >= 0) {
        kel_fit_options options = KEL_FIT_OPTIONS_INIT;
        options.gap = o.gap;
        options.progress = progress_share;
        options.progress_context = &p;
        progress_next(&p, "fitting");
        done = kel_fit(&out->record, &report, (const kel_table *const *)&table, 1, &options, &err);
    }
    progress_end(&p);
    status = done < 0 ? fail_or_usage(j, out->name, &err) : warn_all(j, out->name, table->warnings, table->warning_count);
    if (status == EXIT_FINE)
        status = warn_all(j, out->name, report->warnings, report->warning_count);
    kel_fit_report_free(report);
    kel_table_free(table);
    return status;
}

/* Says what the defaults made of it, so that nobody takes the answer for that of an approved record. */
static int
say_fitted(job *j, const subject *s)
{
    const kel_content *c = s->content;
    kel_text text = KEL_TEXT_INIT;
    kel_text_printf(&text, "this is a table: fitted with the defaults, a %s", c->form);
    for (size_t i = 0; i < c->piece_count; i++)
        kel_text_printf(&text, "%s%zu", i == 0 ? " of degree " : ", ", c->pieces[i].count - 1);
    kel_text_printf(&text, " from %zu observations", c->observations);
    int status = text.failed ? fail_memory(j) : warn(j, "fitted-table", s->name, 0, 1, text.bytes);
    kel_text_free(&text);
    return status;
}

/* The first byte decides. On failure nothing is left to close. */
int
subject_open(job *j, subject *out, const char *name)
{
    *out = (subject){ .name = name };
    file *f;
    int status = file_open(j, &f, name);
    if (status != EXIT_FINE)
        return status;
    out->fitted = !file_is_record(f);
    if (out->fitted) {
        status = fit_table(j, out, f);
    } else {
        kel_text bytes = KEL_TEXT_INIT;
        kel_error err = { 0 };
        status = file_read_all(j, &bytes, f, name, LARGEST_RECORD);
        if (status == EXIT_FINE && kel_record_parse(&out->record, bytes.bytes, bytes.size, &err) < 0)
            status = fail(j, name, &err);
        kel_text_free(&bytes);
    }
    file_close(f);
    if (status == EXIT_FINE) {
        out->content = kel_record_content(out->record);
        if (out->fitted)
            status = say_fitted(j, out);
    }
    if (status != EXIT_FINE)
        subject_close(out);
    return status;
}

void
subject_close(subject *s)
{
    kel_record_free(s->record);
    s->record = NULL;
    s->content = NULL;
}

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* kelspan adopt COEFFICIENTS.csv: a record from published coefficients. */
#include "commands.h"
#include "files.h"
#include "messages.h"
#include "report.h"
#include "reservations.h"

#include <unistd.h>

const option_group adopt_options = { "Record", (const option_entry[]){
    { OPT_OUTPUT, 'o', "output", "RECORD", false, "save the record; - puts it on stdout and the report on stderr" },
    { OPT_SET, 0, "set", "'KEY: VALUE'", true, "metadata that the file lacks, for example 'reference temperature: "
      "293 K'" },
    { 0, 0, NULL, NULL, false, NULL } } };

/* Reads the file into a record. A record given here is a mix-up of two commands; the reader of coefficients would
   only say that its first line is no header, so it is refused by name. */
static int
adopt(job *j, kel_record **record)
{
    const char *name = j->operands[0];
    file *f;
    size_t n;
    const char *const *settings = option_values(j, OPT_SET, &n);
    if (settings == NULL)
        return fail_memory(j);
    int status = file_open(j, &f, name);
    if (status != EXIT_FINE)
        return status;
    kel_adopt_report *report = NULL;
    kel_error err = { 0 };
    if (file_is_record(f))
        status = fail_text(j, name, "a record already; adopt reads published coefficients (CSV)");
    else if (kel_coefficients_read(record, &report, file_input(f), name, settings, n, &err) < 0)
        status = fail_or_usage(j, name, &err);
    else
        status = warn_all(j, name, report->warnings, report->warning_count);
    kel_adopt_report_free(report);
    file_close(f);
    return status;
}

/* The report for people, the same as that of a fit but for what belongs to observations. */
static int
report_text(const job *j, const kel_record *record, const units *in, kel_text *out)
{
    const kel_content *c = kel_record_content(record);
    const char *path = option_value(j, OPT_OUTPUT);
    add_file_name(out, j->operands[0]);
    kel_text_add(out, "\n");
    text_summary(out, c, NULL, in);
    int status = text_answers(j, out, record, in);
    kel_text_add(out, "\n");
    if (path == NULL)
        kel_text_add(out, "Nothing was saved: -o RECORD saves it.\n");
    else if (!j->report_on_stderr) {
        kel_text_add(out, "The record is saved in ");
        add_file_name(out, path);
        kel_text_add(out, ".\n");
    }
    return status;
}

/* The record is saved before the report is written: if that fails nothing may stand on stdout. With `-o -` the record
   itself is what stdout carries, and the report moves to stderr. */
static int
deliver(job *j, const kel_record *record, const units *in)
{
    const char *path = option_value(j, OPT_OUTPUT);
    kel_error err = { 0 };
    sink out, report;
    sink_begin(&out, STDOUT_FILENO);
    sink_begin(&report, j->report_on_stderr ? STDERR_FILENO : STDOUT_FILENO);
    int status = EXIT_FINE;
    if (j->json) {
        kel_json json;
        kel_json_begin(&json, &report.pending);
        kel_json_object(&json, NULL);
        kel_json_string(&json, "record", path);
        json_summary(&json, kel_record_content(record));
        json_reservations(j, &json);
        json_warnings(j, &json);
        kel_json_end(&json);
    } else {
        status = report_text(j, record, in, &report.pending);
    }
    if (status == EXIT_FINE && report.pending.failed)
        status = fail_memory(j);
    if (status == EXIT_FINE && j->report_on_stderr)
        status = kel_record_format(&out.pending, record, &err) < 0 ? fail(j, NULL, &err) : sink_end(j, &out);
    else if (status == EXIT_FINE && path != NULL && kel_record_save(record, path, &err) < 0)
        status = fail_save(j, path, &err);
    if (status == EXIT_FINE && (!j->report_on_stderr || !j->quiet))
        status = sink_end(j, &report);
    kel_text_free(&out.pending);
    kel_text_free(&report.pending);
    return status;
}

/* Options are judged before any file is touched. */
int
run_adopt(job *j)
{
    const char *path = option_value(j, OPT_OUTPUT);
    if (j->operand_count != 1)
        return usage(j, "adopt takes one file of coefficients, not %zu", j->operand_count);
    j->report_on_stderr = path != NULL && output_is_stdout(path);
    if (j->report_on_stderr && j->json)
        return usage(j, "-o - puts the record on stdout: no --json");
    units in;
    kel_record *record = NULL;
    int status = units_begin(j, &in);
    if (status == EXIT_FINE)
        status = output_is_no_input(j, path, j->operands, j->operand_count);
    if (status == EXIT_FINE)
        status = adopt(j, &record);
    if (status == EXIT_FINE)
        status = deliver(j, record, &in);
    kel_record_free(record);
    return status == EXIT_FINE ? finish(j) : status;
}

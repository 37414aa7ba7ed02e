/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Published coefficients (kelspan-coefficients(5)): read into a record, written from one. */
#ifndef KELSPAN_COEFFICIENTS_H
#define KELSPAN_COEFFICIENTS_H

#include <kelspan/table.h>

#ifdef __cplusplus
extern "C" {
#endif

typedef struct kel_adopt_report {
    const kel_warning *warnings; size_t warning_count;  /* shifts and steps that were made, ... */
} kel_adopt_report;

/* Reads a coefficient file into a record of form "adopted". settings: 'key: value' metadata that add to or fill in the
   file's. Errors with line and column. Since 0.1. */
KEL_API kel_status kel_coefficients_read(kel_record **out, kel_adopt_report **report, kel_input input, const char *name,
                                         const char *const *settings, size_t setting_count, kel_error *err);
KEL_API void kel_adopt_report_free(kel_adopt_report *report);

/* Writes the record's alpha as powers of T (unit of temperature K, degC or degF; value unit any coefficient unit), so
   that kel_coefficients_read reads it back: metadata, curve, variable, transitions, `uncertainty:` as far as that can
   carry it (omitted otherwise, and a note says so), one row a piece, shortest digits. Steps of transitions are written
   as `transition: T step VALUE`. Since 0.1. */
KEL_API kel_status kel_coefficients_format(kel_text *out, const kel_record *record, const kel_unit *temperature,
                                           const kel_unit *value, kel_error *err);

#ifdef __cplusplus
}
#endif
#endif

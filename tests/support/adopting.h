/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Records adopted from coefficient files in memory and in tests/data, and answers from them. */
#ifndef KEL_TEST_ADOPTING_H
#define KEL_TEST_ADOPTING_H

#include "unit.h"

#include <kelspan-fit.h>
#include <string.h>

static inline kel_status
read_text(kel_record **record, kel_adopt_report **report, const char *text, const char *const *settings, size_t n,
          kel_error *err)
{
    kel_memory memory = { text, strlen(text), 0 };
    return kel_coefficients_read(record, report, kel_input_memory(&memory), "there/alloy.csv", settings, n, err);
}

static inline long
read_file(void *context, char *buffer, size_t size)
{
    return (long)fread(buffer, 1, size, context);
}

static inline kel_status
read_fixture(kel_record **record, kel_adopt_report **report, const char *name, kel_error *err)
{
    char relative[256];
    snprintf(relative, sizeof relative, "tests/data/%s.csv", name);
    FILE *f = fopen(kel_test_file(relative), "rb");
    ck_assert_msg(f != NULL, "%s is missing", relative);
    kel_status status = kel_coefficients_read(record, report, (kel_input){ read_file, f }, relative, NULL, 0, err);
    fclose(f);
    return status;
}

static inline kel_record *
good(const char *text, kel_adopt_report **report)
{
    kel_record *record;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = read_text(&record, report, text, NULL, 0, &err);
    ck_assert_msg(status == KEL_OK, "%zu:%zu %s", err.line, err.column, err.message);
    return record;
}

static inline kel_record *
good_fixture(const char *name, kel_adopt_report **report)
{
    kel_record *record;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = read_fixture(&record, report, name, &err);
    ck_assert_msg(status == KEL_OK, "%s: %zu:%zu %s", name, err.line, err.column, err.message);
    return record;
}

static inline kel_answer
coefficient(const kel_record *record, double t)
{
    kel_answer a;
    ck_assert_int_ge(kel_record_coefficient(&a, record, t, NULL), KEL_OK);
    return a;
}

static inline kel_answer
integral(const kel_record *record, double from, double to)
{
    kel_answer a;
    ck_assert_int_ge(kel_record_integral(&a, record, from, to, NULL), KEL_OK);
    return a;
}

/* A coefficient curve in 1e-6/K over T in kelvin; header and pieces follow. */
#define HEAD "# curve: coefficient [1e-6/K]\n# variable: T [K]\n"

#endif

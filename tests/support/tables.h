/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables for tests: read from a text or from a file of tests/data, by one call. */
#ifndef KEL_TEST_TABLES_H
#define KEL_TEST_TABLES_H

#include <kelspan-fit.h>
#include <string.h>

#include "unit.h"

static inline kel_status
kel_test_read_bytes(kel_table **out, const char *bytes, size_t n, const char *name, const kel_table_options *options,
                    kel_error *err)
{
    kel_memory memory = { bytes, n, 0 };
    return kel_table_read(out, kel_input_memory(&memory), name, options, err);
}

static inline kel_status
kel_test_read_text(kel_table **out, const char *text, const kel_table_options *options, kel_error *err)
{
    return kel_test_read_bytes(out, text, strlen(text), "test.csv", options, err);
}

/* A table that must be fine. */
static inline kel_table *
kel_test_table(const char *text, const kel_table_options *options)
{
    kel_table *t;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = kel_test_read_text(&t, text, options, &err);
    ck_assert_msg(status == KEL_OK, "%zu:%zu: %s\n%s", err.line, err.column, err.message, text);
    return t;
}

/* The bytes of a file of the source tree, for the caller to free. */
static inline char *
kel_test_bytes(size_t *n, const char *relative)
{
    const char *path = kel_test_file(relative);
    FILE *f = fopen(path, "rb");
    ck_assert_msg(f != NULL, "cannot open %s", path);
    ck_assert_int_eq(fseek(f, 0, SEEK_END), 0);
    long size = ftell(f);
    rewind(f);
    char *bytes = malloc((size_t)size + 1);
    ck_assert_ptr_nonnull(bytes);
    *n = fread(bytes, 1, (size_t)size, f);
    ck_assert_uint_eq(*n, (size_t)size);
    bytes[*n] = '\0';
    fclose(f);
    return bytes;
}

static inline kel_status
kel_test_read_file(kel_table **out, const char *name, const kel_table_options *options, kel_error *err)
{
    char relative[256];
    size_t n;
    snprintf(relative, sizeof relative, "tests/data/%s", name);
    char *bytes = kel_test_bytes(&n, relative);
    kel_status status = kel_test_read_bytes(out, bytes, n, name, options, err);
    free(bytes);
    return status;
}

/* The warning with that code, or NULL. */
static inline const kel_warning *
kel_test_warning(const kel_table *t, const char *code)
{
    for (size_t i = 0; i < t->warning_count; i++)
        if (strcmp(t->warnings[i].code, code) == 0)
            return &t->warnings[i];
    return NULL;
}

#endif

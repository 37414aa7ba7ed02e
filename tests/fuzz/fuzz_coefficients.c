/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Coefficient files: read into a record, which is asked and written as a coefficient file, and that is read again.

   The bytes are the file; if the first one is 01, settings come before it as words that end with 02, the last one with
   a line end. */
#include "fuzz_answers.h"

#include <math.h>

#include <kelspan-fit.h>

const char *const fuzz_name = "coefficients";
const char *const fuzz_data[] = { "tests/data/*-coefficients-*.csv", "datasets/latch.csv", NULL };

enum { MOST_SETTINGS = 8, LARGEST = 1 << 16 };

static kel_status
read_bytes(kel_record **out, kel_adopt_report **report, const void *bytes, size_t n, const char *const *settings,
           size_t count, kel_error *err)
{
    kel_memory memory = { bytes, n, 0 };
    return kel_coefficients_read(out, report, kel_input_memory(&memory), "coefficients.csv", settings, count, err);
}

/* Written in a unit of temperature and read again it is the same curve, as far as powers can say it: their rounding is
   multiplied by the cancellation between them, which is what the format costs and no error. */
static void
write_again(const kel_record *record, const char *temperature, const char *value)
{
    kel_unit t, v;
    kel_text first = KEL_TEXT_INIT;
    kel_record *again = NULL;
    kel_error err = { 0 };
    FUZZ_REQUIRE(kel_unit_parse(&t, KEL_DIM_TEMPERATURE, temperature, strlen(temperature), &err) == KEL_OK, "%s",
                 err.message);
    FUZZ_REQUIRE(kel_unit_parse(&v, KEL_DIM_PER_KELVIN, value, strlen(value), &err) == KEL_OK, "%s", err.message);
    kel_status status = kel_coefficients_format(&first, record, &t, &v, &err);
    if (status < 0) {
        fuzz_error(status, &err);
        kel_text_free(&first);
        return;
    }
    status = read_bytes(&again, NULL, first.bytes, first.size, NULL, 0, &err);
    if (status < 0) {
        fuzz_error(status, &err);
        FUZZ_REQUIRE(status == KEL_E_RANGE || status == KEL_E_DATA, "line %zu, column %zu: %s\n%s", err.line,
                     err.column, err.message, first.bytes);
    } else {
        const kel_content *a = kel_record_content(record), *b = kel_record_content(again);
        FUZZ_REQUIRE(a->base == b->base && a->reference_temperature == b->reference_temperature, "%s", first.bytes);
        FUZZ_REQUIRE(a->range.lo == b->range.lo && a->range.hi == b->range.hi, "%s", first.bytes);
        FUZZ_REQUIRE(a->piece_count == b->piece_count && a->transition_count == b->transition_count, "%s", first.bytes);
        fuzz_record(again, NULL);
    }
    kel_record_free(again);
    kel_text_free(&first);
}

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    fuzz_bytes bytes = { data, size };
    char *line = NULL, *words[MOST_SETTINGS];
    const char *settings[MOST_SETTINGS];
    size_t n = 0;
    if (size > LARGEST)
        return 0;
    if (size > 0 && data[0] == 1) {
        fuzz_byte(&bytes);
        line = fuzz_string(&bytes, '\n');
        fuzz_bytes rest = { (const uint8_t *)line, strlen(line) };
        for (; rest.left > 0 && n < MOST_SETTINGS; n++)
            settings[n] = words[n] = fuzz_string(&rest, 2);
    }
    kel_record *record = NULL;
    kel_adopt_report *report = NULL;
    kel_error err = { 0 };
    kel_status status = read_bytes(&record, &report, bytes.at, bytes.left, settings, n, &err);
    if (status < 0) {
        fuzz_error(status, &err);
        FUZZ_REQUIRE(record == NULL && report == NULL, "%s", err.message);
    } else {
        fuzz_record(record, NULL);
        write_again(record, "K", "1e-6/K");
        write_again(record, "degF", "ppm/degF");
    }
    kel_record_free(record);
    kel_adopt_report_free(report);
    free(line);
    for (size_t i = 0; i < n; i++)
        free(words[i]);
    return 0;
}

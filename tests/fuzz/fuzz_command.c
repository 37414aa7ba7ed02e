/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The command line. The bytes are its words, parted by line ends; NUL ends them, and what follows is on stdin.

   Options are read for the command that the first word names, or the one that the first byte picks, with the values
   that belong to tables, fits and units. Where the operands are stdin or those of the list below, and no file is to be
   written, the command is run too.

   What the tool writes is caught: the linker hands every write(2) of this program to the one below (-Wl,--wrap=write).
   One line of an error for wrong usage and failure, nothing on stdout then, no byte that a terminal would obey. */
#include "fuzz.h"

#include <errno.h>
#include <gsl/gsl_errno.h>
#include <sys/mman.h>
#include <unistd.h>

#include "answers.h"
#include "commands.h"
#include "fit_settings.h"
#include "messages.h"

const char *const fuzz_name = "command";
const char *const fuzz_data[] = { NULL };

enum { MOST_WORDS = 24, LARGEST = 1 << 14, MOST_BYTES = 1 << 20 };

static bool catching;
static kel_text said, answered;

ssize_t __real_write(int fd, const void *bytes, size_t n);
ssize_t __wrap_write(int fd, const void *bytes, size_t n);

/* As on a disk that fills up, so that an answer without end has one. */
ssize_t
__wrap_write(int fd, const void *bytes, size_t n)
{
    if (!catching || (fd != STDOUT_FILENO && fd != STDERR_FILENO))
        return __real_write(fd, bytes, n);
    kel_text *to = fd == STDERR_FILENO ? &said : &answered;
    if (to->size + n > MOST_BYTES) {
        errno = ENOSPC;
        return -1;
    }
    kel_text_add_bytes(to, bytes, n);
    return (ssize_t)n;
}

/* Lines of printable UTF-8. Their number. */
static size_t
check_lines(const kel_text *text, const char *of)
{
    size_t lines = 0;
    if (text->size == 0)
        return 0;
    FUZZ_REQUIRE(text->bytes[text->size - 1] == '\n', "%s is '%s'", of, text->bytes);
    for (const char *p = text->bytes, *end; *p != '\0'; p = end + 1, lines++) {
        end = strchr(p, '\n');
        kel_text quoted = KEL_TEXT_INIT;
        FUZZ_REQUIRE(end != NULL, "%s holds a NUL", of);
        kel_text_quote(&quoted, p, (size_t)(end - p));
        FUZZ_REQUIRE(quoted.size == (size_t)(end - p), "%s is '%s'", of, quoted.bytes);
        kel_text_free(&quoted);
    }
    return lines;
}

/* What a run may leave behind, by its status. */
static void
check_output(int status, const job *j, bool stream)
{
    size_t lines = check_lines(&said, "stderr");
    const char *error = said.bytes == NULL ? "" : said.bytes;
    FUZZ_REQUIRE(status >= EXIT_FINE && status <= EXIT_RESERVED, "%d", status);
    if (!j->csv)
        check_lines(&answered, "stdout");
    bool full = strstr(error, "cannot write to stdout") != NULL;
    if (status == EXIT_FAILED || status == EXIT_USAGE) {
        FUZZ_REQUIRE(lines == 1, "status %d, said '%s'", status, error);
        FUZZ_REQUIRE(answered.size == 0 || full || stream, "status %d after '%s'", status, answered.bytes);
        FUZZ_REQUIRE(strncmp(error, j->json ? "{\"error\": " : "kelspan: ", 9) == 0, "said '%s'", error);
    } else {
        FUZZ_REQUIRE(answered.size > 0, "status %d and no answer", status);
        bool text = !j->json || option_given(j, OPT_HELP) || j->command->run == run_help; /* help is text */
        FUZZ_REQUIRE(text || (lines == 0 && answered.bytes[0] == '{'), "said '%s'", error);
        FUZZ_REQUIRE(!j->quiet || status == EXIT_RESERVED || strstr(error, "warning: ") == NULL, "said '%s'", error);
    }
}

/* Everything that a command line can hold, whatever the command makes of it. */
static int
read_values(job *j)
{
    kel_table_options table;
    fit_settings settings;
    units in;
    int status = reservations_begin(j), base = -1;
    if (status == EXIT_FINE)
        status = units_begin(j, &in);
    if (status == EXIT_FINE)
        status = table_options(j, &table);
    if (status == EXIT_FINE)
        status = fit_settings_read(j, &settings);
    if (status == EXIT_FINE)
        status = option_base(j, OPT_BASE, &base);
    static const struct { int id; kel_dimension dimension; } quantities[] = {
        { OPT_FROM, KEL_DIM_TEMPERATURE }, { OPT_TO, KEL_DIM_TEMPERATURE }, { OPT_STEP, KEL_DIM_DIFFERENCE },
        { OPT_LENGTH, KEL_DIM_LENGTH }, { OPT_LENGTH_AT, KEL_DIM_TEMPERATURE },
    };
    for (size_t i = 0; i < sizeof quantities / sizeof quantities[0] && status == EXIT_FINE; i++) {
        double x;
        status = option_quantity(j, quantities[i].id, quantities[i].dimension, &x, NULL);
    }
    return status;
}

/* A word that stands for a file of the tests, put in its place; or stdin. */
static bool
known_file(const char **operand, char path[4096])
{
    if (*operand != NULL && strcmp(*operand, "-") == 0)
        return true;
    static const struct { const char *word, *file; } files[] = {
        { "REC", "tests/data/good-record.json" }, { "TABLE", "tests/data/good-uncertainty.csv" },
        { "STEP", "tests/data/good-transition.csv" }, { "CURVE", "tests/data/good-coefficients-two-pieces.csv" },
        { "BAD", "tests/data/bad-ragged-short.csv" }, { "PAIRS", "tests/fuzz/pairs.csv" },
    };
    for (size_t i = 0; i < sizeof files / sizeof files[0]; i++)
        if (*operand != NULL && strcmp(*operand, files[i].word) == 0) {
            snprintf(path, 4096, "%s/%s", fuzz_source(), files[i].file);
            *operand = path;
            return true;
        }
    return false;
}

/* May the command be run? It must read nothing but our files and write none. */
static bool
may_run(job *j, char paths[][4096])
{
    bool temperatures = strcmp(j->command->name, "value") == 0, help = strcmp(j->command->name, "help") == 0;
    if (option_given(j, OPT_OUTPUT) && strcmp(option_value(j, OPT_OUTPUT), "-") != 0)
        return false;
    for (size_t i = 0; i < j->option_count; i++)
        if (j->options[i].id == OPT_PAIRS && !known_file(&j->options[i].value, paths[MOST_WORDS]))
            return false;
    for (size_t i = 0; i < j->operand_count && !help; i++)
        if (!known_file(&j->operands[i], paths[i]) && !(temperatures && i > 0))
            return false;
    return true;
}

/* Puts the bytes on stdin, as a file that begins anew. */
static void
fill_stdin(const fuzz_bytes *bytes)
{
    static int standard = -1;
    if (standard < 0) {
        standard = memfd_create("stdin", 0);
        FUZZ_REQUIRE(standard >= 0 && dup2(standard, STDIN_FILENO) == STDIN_FILENO, "no file for stdin: %s", strerror(errno));
    }
    bool good = ftruncate(standard, 0) == 0 && lseek(standard, 0, SEEK_SET) == 0 &&
        (bytes->left == 0 || __real_write(standard, bytes->at, bytes->left) == (ssize_t)bytes->left) &&
        lseek(standard, 0, SEEK_SET) == 0;
    FUZZ_REQUIRE(good, "stdin cannot be filled: %s", strerror(errno));
}

static void
run(const command *c, int argc, char **argv)
{
    static char paths[MOST_WORDS + 1][4096];
    job j = { .command = c, .memory = kel_arena_new() };
    FUZZ_REQUIRE(j.memory != NULL, "memory ran out");
    int status = options_read(&j, argc, argv);
    if (status == EXIT_FINE && option_given(&j, OPT_HELP)) {
        status = help_of(&j, c);
        check_output(status, &j, false);
    } else if (status == EXIT_FINE) {
        status = read_values(&j);
        bool good = status == EXIT_FINE;
        if (!good)
            check_output(status, &j, false);
        kel_text_clear(&said);
        kel_text_clear(&answered);
        j.accepted = 0;
        if (may_run(&j, paths)) {
            status = reservations_begin(&j);
            if (status == EXIT_FINE)
                status = c->run(&j);
            check_output(status, &j, option_given(&j, OPT_PAIRS));
        }
    } else {
        check_output(status, &j, false);
    }
    kel_arena_free(j.memory);
}

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    fuzz_bytes bytes = { data, size };
    char *words[MOST_WORDS + 1], *given[MOST_WORDS + 1]; /* getopt changes the order of what it is given */
    int n = 0;
    if (size == 0 || size > LARGEST)
        return 0;
    char *text = fuzz_string(&bytes, '\0');
    fill_stdin(&bytes);
    fuzz_bytes rest = { (const uint8_t *)text, strlen(text) };
    while (rest.left > 0 && n < MOST_WORDS) {
        given[n] = words[n] = fuzz_string(&rest, '\n');
        n++;
    }
    words[n] = NULL;
    gsl_set_error_handler_off();
    catching = true;
    if (n > 0) {
        const command *c = command_find(words[0]);
        size_t count = 0;
        while (commands[count].name != NULL)
            count++;
        run(c != NULL ? c : &commands[data[0] % count], n, words);
    }
    catching = false;
    kel_text_free(&said);
    kel_text_free(&answered);
    while (n > 0)
        free(given[--n]);
    free(text);
    return 0;
}

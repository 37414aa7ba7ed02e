/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rows: cells and their places, delimiters, comments, digest; what is refused, and where. */
#include "unit.h"

#include <errno.h>
#include <kelspan-fit.h>
#include <string.h>

enum { LIMIT = 1 << 20 };

/* Delivers a text in pieces of `step` bytes, as a pipe may. */
typedef struct drip { const char *text; size_t size, at, step; } drip;

static long
read_drip(void *context, char *buffer, size_t size)
{
    drip *d = context;
    size_t n = d->size - d->at;
    n = n < d->step ? n : d->step;
    n = n < size ? n : size;
    memcpy(buffer, d->text + d->at, n);
    d->at += n;
    return (long)n;
}

/* All rows as text: "2:[1]temperature [K]|[17]16.7" with columns in brackets, "#" before a comment; or "! line:column
   message". */
static void
render(char *out, size_t size, kel_input input, kel_delimiter delimiter)
{
    kel_rows *rows;
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_int_eq(kel_rows_new(&rows, input, delimiter, &err), KEL_OK);
    const kel_row *row;
    kel_status status;
    size_t n = 0;
    out[0] = '\0';
    while ((status = kel_rows_next(&row, rows, &err)) == KEL_OK && row != NULL) {
        n += (size_t)snprintf(out + n, size - n, "%s%zu:%s", n == 0 ? "" : "\n", row->line, row->comment ? "#" : "");
        for (size_t i = 0; i < row->count; i++)
            n += (size_t)snprintf(out + n, size - n, "%s[%zu]%.*s", i == 0 ? "" : "|", row->cells[i].column,
                                  (int)row->cells[i].size,
                                  row->cells[i].bytes);
    }
    if (status != KEL_OK) {
        n += (size_t)snprintf(out + n, size - n, "%s! %zu:%zu %s", n == 0 ? "" : "\n", err.line, err.column,
                              err.message);
        /* An error stays. */
        kel_error again = { KEL_OK, 0, 0, "" };
        ck_assert_int_eq(kel_rows_next(&row, rows, &again), status);
        ck_assert_str_eq(again.message, err.message);
        ck_assert_int_eq(err.code, status);
    }
    ck_assert_ptr_null(row);
    ck_assert(n < size);
    kel_rows_free(rows);
}

static const struct { const char *label, *text; kel_delimiter delimiter; const char *want; } tables[] = {
    { "nothing", "", KEL_DELIMITER_DETECT, "" },
    { "blank lines only", "\n  \n\t\r\n\xC2\xA0\n", KEL_DELIMITER_DETECT, "" },
    { "plain", "a,b\n1,2\n", KEL_DELIMITER_DETECT, "1:[1]a|[3]b\n2:[1]1|[3]2" },
    { "no end of the last line", "a,b\n1,2", KEL_DELIMITER_DETECT, "1:[1]a|[3]b\n2:[1]1|[3]2" },
    { "CRLF, also cut short", "a,b\r\n1,2\r", KEL_DELIMITER_DETECT, "1:[1]a|[3]b\n2:[1]1|[3]2" },
    { "byte order mark is no column", "\xEF\xBB\xBF" "a,b\n", KEL_DELIMITER_DETECT, "1:[1]a|[3]b" },
    { "only a byte order mark", "\xEF\xBB\xBF", KEL_DELIMITER_DETECT, "" },
    { "half a mark is text", "\xEF\xBB", KEL_DELIMITER_DETECT, "1:[1]\xEF\xBB" },
    { "blanks trimmed", "  a , b\t,\xC2\xA0" "c\xE2\x80\xAF\n", KEL_DELIMITER_DETECT, "1:[3]a|[7]b|[12]c" },
    { "empty cells", ",,\n1,,\n", KEL_DELIMITER_DETECT, "1:[1]|[2]|[3]\n2:[1]1|[3]|[4]" },
    { "comments", "# key: value \n  #second\n#\na,b\n", KEL_DELIMITER_DETECT,
      "1:#[3]key: value\n2:#[4]second\n3:#[2]\n4:[1]a|[3]b" },
    { "a comment may hold quotes and does not decide the delimiter", "# \"a;b;c;d\na,b\n", KEL_DELIMITER_DETECT,
      "1:#[3]\"a;b;c;d\n2:[1]a|[3]b" },
    { "semicolons win", "a;b;c,d\n1,5;2;3\n", KEL_DELIMITER_DETECT, "1:[1]a|[3]b|[5]c,d\n2:[1]1,5|[5]2|[7]3" },
    { "tabs", "a b\tc\n1\t\t2\n", KEL_DELIMITER_DETECT, "1:[1]a b|[5]c\n2:[1]1|[3]|[4]2" },
    { "in a draw, comma before semicolon before tab", "a;b,c\td\n", KEL_DELIMITER_DETECT, "1:[1]a;b|[5]c\td" },
    { "delimiters inside quotes do not count", "\"a;b;c\",d\n", KEL_DELIMITER_DETECT, "1:[2]a;b;c|[9]d" },
    { "one cell", "alone\n", KEL_DELIMITER_DETECT, "1:[1]alone" },
    { "quoted", "\"a,b\",\"c \"\"d\"\"\" , \"\"\n", KEL_DELIMITER_DETECT, "1:[2]a,b|[8]c \"d\"|[20]" },
    { "quoted blanks trimmed", "\"  x \",y\n", KEL_DELIMITER_DETECT, "1:[4]x|[8]y" },
    { "told delimiter", "a;b,c\n", KEL_DELIMITER_COMMA, "1:[1]a;b|[5]c" },
    { "told tab, blank inside a cell", " a b\tc\n", KEL_DELIMITER_TAB, "1:[2]a b|[6]c" },
    { "blanks", "  T    alpha\n 293.15 \t 16.7  \n", KEL_DELIMITER_BLANKS, "1:[3]T|[8]alpha\n2:[2]293.15|[11]16.7" },
    { "blanks of documents", "20\xC2\xA0" "1.1\xE2\x80\x89" "2.2\xE2\x80\xAF" "3.3\n", KEL_DELIMITER_BLANKS,
      "1:[1]20|[5]1.1|[11]2.2|[17]3.3" },
    { "quotes between blanks", "\"mean \"\"x\"\"\"  b\n", KEL_DELIMITER_BLANKS, "1:[2]mean \"x\"|[15]b" },
    { "commas are text between blanks", "1,5 2\n", KEL_DELIMITER_BLANKS, "1:[1]1,5|[5]2" },
    { "quote left open", "a,b\n1,\"2\n3,4\n", KEL_DELIMITER_DETECT, "1:[1]a|[3]b\n! 2:3 the quote is not closed on "
                                                                    "its line" },
    { "quote left open behind blanks", "a,b\n1, \"2,3\n", KEL_DELIMITER_DETECT,
      "1:[1]a|[3]b\n! 2:4 the quote is not closed on its line" },
    { "last of doubled quotes opens", "\"a\"\"\n", KEL_DELIMITER_DETECT, "! 1:1 the quote is not closed on its line" },
    { "quote inside a cell", "a,b\n1,2\"3\n", KEL_DELIMITER_DETECT, "1:[1]a|[3]b\n! 2:4 a quote inside a cell that "
                                                                    "does not start with one" },
    { "text behind a quote", "\"a\" b,c\n", KEL_DELIMITER_DETECT, "! 1:5 text behind the closing quote of a cell (a "
                                                                  "quote inside a quoted cell is written twice)" },
    { "quote left open between blanks", "a \"b c\n", KEL_DELIMITER_BLANKS,
      "! 1:3 the quote is not closed on its line" },
    { "quote inside a word", "a b\"c d\n", KEL_DELIMITER_BLANKS, "! 1:4 a quote inside a cell that does not start "
                                                                 "with one" },
    { "text behind a quote between blanks", "\"a\"b\n", KEL_DELIMITER_BLANKS,
      "! 1:4 text behind the closing quote of a cell (a quote inside a quoted cell is written twice)" },
    { "carriage return inside a line", "a,b\n1,2\r3,4\r\n", KEL_DELIMITER_DETECT,
      "1:[1]a|[3]b\n! 2:4 a carriage return inside the line: lines end with LF or CRLF" },
};

START_TEST(cells)
{
    char got[1024];
    /* Whole, and byte by byte. */
    kel_memory memory = { tables[_i].text, strlen(tables[_i].text), 0 };
    render(got, sizeof got, kel_input_memory(&memory), tables[_i].delimiter);
    ck_assert_msg(strcmp(got, tables[_i].want) == 0, "%s: got\n%s\nwant\n%s", tables[_i].label, got, tables[_i].want);
    drip d = { tables[_i].text, strlen(tables[_i].text), 0, 1 };
    render(got, sizeof got, (kel_input){ read_drip, &d }, tables[_i].delimiter);
    ck_assert_msg(strcmp(got, tables[_i].want) == 0, "%s, dripping: got\n%s\nwant\n%s", tables[_i].label, got,
                  tables[_i].want);
}
END_TEST

START_TEST(nul_byte)
{
    static const char text[] = "a,b\n1,\0002\n";
    kel_memory memory = { text, sizeof text - 1, 0 };
    char got[256];
    render(got, sizeof got, kel_input_memory(&memory), KEL_DELIMITER_DETECT);
    ck_assert_str_eq(got, "1:[1]a|[3]b\n! 2:3 a NUL byte in the text: the file is binary or not in UTF-8");
}
END_TEST

/* A line of n bytes between two short ones. */
static kel_status
long_line(size_t n, const char *end, kel_error *err)
{
    size_t ends = strlen(end), size = 4 + n + ends + 4;
    char *text = malloc(size);
    ck_assert_ptr_nonnull(text);
    memcpy(text, "1,2\n", 4);
    memset(text + 4, 'x', n);
    memcpy(text + 4 + n, end, ends);
    memcpy(text + 4 + n + ends, "3,4\n", 4);
    kel_memory memory = { text, size, 0 };
    kel_rows *rows;
    const kel_row *row;
    ck_assert_int_eq(kel_rows_new(&rows, kel_input_memory(&memory), KEL_DELIMITER_DETECT, NULL), KEL_OK);
    ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_OK);
    kel_status status = kel_rows_next(&row, rows, err);
    if (status == KEL_OK) {
        ck_assert_uint_eq(row->cells[0].size, n);
        ck_assert_int_eq(kel_rows_next(&row, rows, err), KEL_OK);
        ck_assert_uint_eq(row->line, 3);
        ck_assert_uint_eq(row->count, 2);
    }
    kel_rows_free(rows);
    free(text);
    return status;
}

START_TEST(length_limit)
{
    kel_error err = { KEL_OK, 0, 0, "" };
    ck_assert_int_eq(long_line(LIMIT - 1, "\n", &err), KEL_OK);
    ck_assert_int_eq(long_line(LIMIT, "\n", &err), KEL_OK);
    ck_assert_int_eq(long_line(LIMIT, "\r\n", &err), KEL_OK);
    ck_assert_int_eq(long_line(LIMIT + 1, "\n", &err), KEL_E_SYNTAX);
    ck_assert_uint_eq(err.line, 2);
    ck_assert_uint_eq(err.column, LIMIT + 1);
    ck_assert_str_eq(err.message, "the line is longer than 1048576 bytes");
    ck_assert_int_eq(long_line(LIMIT + 1, "\r\n", &err), KEL_E_SYNTAX);
}
END_TEST

static long
read_endless(void *context, char *buffer, size_t size)
{
    size_t *total = context;
    memset(buffer, '7', size);
    *total += size;
    return (long)size;
}

START_TEST(endless_line)
{
    size_t total = 0;
    kel_rows *rows;
    const kel_row *row;
    kel_error err;
    ck_assert_int_eq(kel_rows_new(&rows, (kel_input){ read_endless, &total }, KEL_DELIMITER_DETECT, NULL), KEL_OK);
    ck_assert_int_eq(kel_rows_next(&row, rows, &err), KEL_E_SYNTAX);
    ck_assert_uint_eq(err.line, 1);
    ck_assert_uint_le(total, LIMIT + 64);
    kel_rows_free(rows);
}
END_TEST

typedef struct broken { const char *text; int interruptions; int reason; } broken;

static long
read_broken(void *context, char *buffer, size_t size)
{
    broken *b = context;
    if (b->interruptions > 0) {
        b->interruptions--;
        errno = EINTR;
        return -1;
    }
    if (b->text != NULL) {
        size_t n = strlen(b->text);
        ck_assert(n <= size);
        memcpy(buffer, b->text, n);
        b->text = NULL;
        return (long)n;
    }
    errno = b->reason;
    return b->reason == 0 ? (long)size + 1 : -1;
}

START_TEST(read_errors)
{
    char got[256];
    broken b = { "a,b\n1,", 2, EISDIR };
    render(got, sizeof got, (kel_input){ read_broken, &b }, KEL_DELIMITER_DETECT);
    ck_assert_str_eq(got, "1:[1]a|[3]b\n! 0:0 reading failed behind line 1: Is a directory");
    b = (broken){ "a,b\n", 0, 0 };  /* claims more than there was room for */
    kel_rows *rows;
    const kel_row *row;
    ck_assert_int_eq(kel_rows_new(&rows, (kel_input){ read_broken, &b }, KEL_DELIMITER_DETECT, NULL), KEL_OK);
    ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_OK);
    ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_E_ARGUMENT);
    kel_rows_free(rows);
}
END_TEST

/* The example of FIPS 180-2, B.1: "abc". The byte order mark and line ends count too. */
START_TEST(digest)
{
    kel_memory memory = { "abc", 3, 0 };
    kel_rows *rows;
    const kel_row *row;
    ck_assert_int_eq(kel_rows_new(&rows, kel_input_memory(&memory), KEL_DELIMITER_DETECT, NULL), KEL_OK);
    ck_assert_int_eq(kel_rows_delimiter(rows), KEL_DELIMITER_DETECT);
    ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_OK);
    ck_assert_int_eq(kel_rows_delimiter(rows), KEL_DELIMITER_COMMA);
    ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_OK);
    ck_assert_ptr_null(row);
    static const char want[] = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";
    ck_assert_str_eq(kel_rows_digest(rows), want);
    ck_assert_str_eq(kel_rows_digest(rows), want);
    kel_rows_free(rows);
}
END_TEST

START_TEST(arguments)
{
    kel_memory memory = { NULL, 0, 0 };
    kel_rows *rows = (kel_rows *)&memory;
    ck_assert_int_eq(kel_rows_new(NULL, kel_input_memory(&memory), KEL_DELIMITER_DETECT, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_rows_new(&rows, (kel_input){ NULL, NULL }, KEL_DELIMITER_DETECT, NULL), KEL_E_ARGUMENT);
    ck_assert_ptr_null(rows);
    ck_assert_int_eq(kel_rows_new(&rows, kel_input_memory(&memory), (kel_delimiter)99, NULL), KEL_E_ARGUMENT);
    ck_assert_int_eq(kel_rows_new(&rows, kel_input_memory(&memory), KEL_DELIMITER_DETECT, NULL), KEL_OK);
    const kel_row *row;
    ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_OK);
    ck_assert_ptr_null(row);
    kel_rows_free(rows);
    kel_rows_free(NULL);
}
END_TEST

/* Many cells, and rows far beyond one buffer: each is what was written. */
START_TEST(many)
{
    enum { ROWS = 30000, WIDE = 200 };
    size_t size = 0, capacity = ROWS * 16 + WIDE * 4;
    char *text = malloc(capacity);
    ck_assert_ptr_nonnull(text);
    for (int i = 0; i < WIDE; i++)
        size += (size_t)snprintf(text + size, capacity - size, "%d%c", i, i == WIDE - 1 ? '\n' : ',');
    for (int i = 0; i < ROWS; i++)
        size += (size_t)snprintf(text + size, capacity - size, "%d,%d\n", i, 2 * i);
    drip d = { text, size, 0, 4097 };
    kel_rows *rows;
    const kel_row *row;
    ck_assert_int_eq(kel_rows_new(&rows, (kel_input){ read_drip, &d }, KEL_DELIMITER_DETECT, NULL), KEL_OK);
    ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_OK);
    ck_assert_uint_eq(row->count, WIDE);
    for (int i = 0; i < ROWS; i++) {
        char want[2][16];
        ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_OK);
        ck_assert_uint_eq(row->count, 2);
        ck_assert_uint_eq(row->line, (size_t)i + 2);
        for (int k = 0; k < 2; k++) {
            int n = snprintf(want[k], sizeof want[k], "%d", (k + 1) * i);
            ck_assert_uint_eq(row->cells[k].size, (size_t)n);
            ck_assert_int_eq(memcmp(row->cells[k].bytes, want[k], (size_t)n), 0);
        }
    }
    ck_assert_int_eq(kel_rows_next(&row, rows, NULL), KEL_OK);
    ck_assert_ptr_null(row);
    kel_rows_free(rows);
    free(text);
}
END_TEST

static TCase *
loops(void)
{
    TCase *tcase = tcase_create("cells");
    tcase_add_loop_test(tcase, cells, 0, KEL_LENGTH(tables));
    return tcase;
}

KEL_TCASE(edges, nul_byte, length_limit, endless_line, read_errors, digest, arguments, many)
KEL_TEST_MAIN("rows", loops, edges)

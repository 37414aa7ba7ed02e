/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a fuzz target is made of. A target is a file fuzz_NAME.c that defines the two below; it is linked with libFuzzer
   (`make fuzz`) or with replay.c (`make check`). A target checks properties, not only that nothing crashes: a property
   that does not hold ends the process, which is a finding to both. */
#ifndef KEL_FUZZ_H
#define KEL_FUZZ_H

#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <kelspan.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size);

/* The target's name, which is that of its folder below tests/fuzz/corpus, and the files of tests/data that are of its
   kind: patterns, ended by NULL. */
extern const char *const fuzz_name;
extern const char *const fuzz_data[];

/* The rest of the arguments says what was found, in printf's way. */
#define FUZZ_REQUIRE(property, ...)                                                       \
    do {                                                                                  \
        if (!(property)) {                                                                \
            fprintf(stderr, "%s:%d: does not hold: %s: ", __FILE__, __LINE__, #property); \
            fprintf(stderr, __VA_ARGS__);                                                 \
            fputc('\n', stderr);                                                          \
            abort();                                                                      \
        }                                                                                 \
    } while (0)

/* Bytes of the input, used up from the front; beyond their end there are zeros. */
typedef struct fuzz_bytes { const uint8_t *at; size_t left; } fuzz_bytes;

static inline unsigned
fuzz_byte(fuzz_bytes *b)
{
    if (b->left == 0)
        return 0;
    b->left--;
    return *b->at++;
}

/* Up to the byte `end`, which is passed over, or to the end of the input; as a string, to be freed. Beyond its first
   NUL nobody reads it. */
static inline char *
fuzz_string(fuzz_bytes *b, uint8_t end)
{
    const uint8_t *found = b->left == 0 ? NULL : memchr(b->at, end, b->left);
    size_t n = found == NULL ? b->left : (size_t)(found - b->at);
    char *s = malloc(n + 1);
    FUZZ_REQUIRE(s != NULL, "memory ran out");
    if (n != 0)
        memcpy(s, b->at, n);
    s[n] = '\0';
    b->at += n + (found != NULL);
    b->left -= n + (found != NULL);
    return s;
}

/* The manners of an error: its own code, one line without bytes that a terminal would obey, no full stop. */
static inline void
fuzz_error(kel_status status, const kel_error *err)
{
    FUZZ_REQUIRE(err->code == status, "returned %d, err->code is %d", (int)status, (int)err->code);
    FUZZ_REQUIRE(kel_status_text(status)[0] != '\0', "status %d", (int)status);
    size_t n = strlen(err->message);
    FUZZ_REQUIRE(n > 0, "status %d without a message", (int)status);
    FUZZ_REQUIRE(err->message[n - 1] != '.' || (n > 2 && err->message[n - 2] == '.'), "%s", err->message);
    kel_text quoted = KEL_TEXT_INIT;
    kel_text_quote(&quoted, err->message, n);
    FUZZ_REQUIRE(!quoted.failed && strcmp(quoted.bytes, err->message) == 0, "%s", quoted.bytes);
    kel_text_free(&quoted);
}

static inline void
fuzz_same_text(const kel_text *a, const kel_text *b, const char *what)
{
    size_t n = a->size < b->size ? a->size : b->size, i = 0;
    while (i < n && a->bytes[i] == b->bytes[i])
        i++;
    FUZZ_REQUIRE(a->size == b->size && i == n, "%s: %zu and %zu bytes, they part at %zu\n--- first\n%s\n--- second\n%s",
                 what, a->size, b->size, i, a->bytes, b->bytes);
}

/* The folder that holds tests/. */
static inline const char *
fuzz_source(void)
{
    const char *folder = getenv("KEL_SOURCE_DIR");
    return folder == NULL || folder[0] == '\0' ? "." : folder;
}

/* The same bits, so that -0 is not 0 and a NaN equals itself. */
static inline bool
fuzz_same_number(double a, double b)
{
    return memcmp(&a, &b, sizeof a) == 0;
}

#endif

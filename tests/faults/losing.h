/* SPDX-License-Identifier: GPL-3.0-or-later */
/* An operation repeated with each of its allocations failed in turn.

   First it is run undisturbed, twice: what it gives is kept as text, and its calls are counted. Then, for every n,
   it is run once with the n-th call failed and once with all from the n-th on. Each time it must either fail with
   KEL_E_NOMEM and a message and give NULL, or, for no more calls than the operation says it can spare, give the same
   text as undisturbed; and afterwards as many blocks are in use as before. */
#ifndef KEL_TEST_LOSING_H
#define KEL_TEST_LOSING_H

#include <string.h>

#include <kelspan.h>

#include "../support/unit.h"
#include "failing_malloc.h"

typedef struct operation {
    const char *label;
    const void *input;
    /* Calls the library. Gives what it put out, NULL if nothing. */
    void *(*run)(kel_status *status, const void *input, kel_error *err);
    /* What `run` gave, as text; NULL where there is nothing to tell. */
    void (*describe)(kel_text *text, void *output);
    void (*release)(void *output);
    size_t spare;            /* so many calls may be failed in turn without harm to the result */
    kel_status expected;     /* undisturbed; an error of its own may come instead of KEL_E_NOMEM */
} operation;

static inline void
finish_operation(const operation *op, void *output)
{
    if (output != NULL && op->release != NULL)
        op->release(output);
}

static inline void
describe_operation(kel_text *text, const operation *op, void *output)
{
    if (output != NULL && op->describe != NULL)
        op->describe(text, output);
    KEL_REQUIRE(!text->failed, "%s: no memory in the test itself", op->label);
}

/* Was the result the undisturbed one? */
static inline bool
lose_one(const operation *op, size_t n, bool onwards, const kel_text *undisturbed)
{
    const char *how = onwards ? "from call" : "call";
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_status status = KEL_OK;
    long before = allocation_live();
    allocation_arm(n, onwards);
    void *output = op->run(&status, op->input, &err);
    allocation_disarm();
    bool survived = status == op->expected;
    if (survived) {
        kel_text text = KEL_TEXT_INIT;
        describe_operation(&text, op, output);
        KEL_REQUIRE(text.size == undisturbed->size && (text.size == 0 || memcmp(text.bytes, undisturbed->bytes,
            text.size) == 0), "%s, %s %zu: a different result\n%s", op->label, how, n, text.bytes);
        kel_text_free(&text);
    } else {
        KEL_REQUIRE(status == KEL_E_NOMEM, "%s, %s %zu: %s: %s", op->label, how, n, kel_status_text(status),
                    err.message);
        KEL_REQUIRE(output == NULL, "%s, %s %zu: an output beside the error", op->label, how, n);
    }
    if (status < 0)
        KEL_REQUIRE(err.code == status && err.message[0] != '\0', "%s, %s %zu: no message", op->label, how, n);
    finish_operation(op, output);
    KEL_REQUIRE(allocation_live() == before, "%s, %s %zu: %ld blocks left", op->label, how, n,
                allocation_live() - before);
    return survived;
}

/* The number of calls that were failed. */
static inline size_t
lose_each(const operation *op)
{
    kel_text undisturbed = KEL_TEXT_INIT;
    size_t calls = 0, survived = 0;
    /* Twice, for what libraries keep from their first call is neither lost nor a leak. */
    for (int i = 0; i < 2; i++) {
        kel_error err = { KEL_OK, 0, 0, "" };
        kel_status status = KEL_OK;
        kel_text_clear(&undisturbed);
        allocation_arm(0, false);
        void *output = op->run(&status, op->input, &err);
        calls = allocation_disarm();
        KEL_REQUIRE(status == op->expected, "%s: %s: %s (line %zu)", op->label, kel_status_text(status), err.message,
                    err.line);
        describe_operation(&undisturbed, op, output);
        finish_operation(op, output);
    }
    KEL_REQUIRE(calls > 0, "%s: no allocation to fail", op->label);
    for (size_t n = 1; n <= calls; n++) {
        survived += lose_one(op, n, false, &undisturbed);
        lose_one(op, n, true, &undisturbed);
    }
    KEL_REQUIRE(op->expected < 0 || survived <= op->spare, "%s: the loss of %zu of %zu calls was not noticed",
                op->label, survived, calls);
    kel_text_free(&undisturbed);
    return calls;
}

/* main for such programs: status 77 is automake's for a test that was skipped. */
#define LOSING_MAIN(name, ...)                                                            \
    int main(void)                                                                        \
    {                                                                                     \
        if (!allocation_fails()) {                                                        \
            puts("skipped: allocations cannot be failed here (another heap is in the way)"); \
            return 77;                                                                    \
        }                                                                                 \
        kel_tcase_function *const cases[] = { __VA_ARGS__ };                              \
        return kel_test_run(name, cases, sizeof cases / sizeof cases[0]);                 \
    }

#endif

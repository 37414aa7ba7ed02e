/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Eight threads and one record: every answer, scalar and array, bit for bit what one thread gets; and in each thread
   records of its own parsed and written meanwhile. threads.sh builds it with libkelspan's sources under the thread
   sanitizer, which ends it where two threads touch the same memory without an order.

   threads RECORD.json; prints one line and ends with 0, or says what differs. */
#include <math.h>
#include <pthread.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <kelspan.h>

enum { THREADS = 8, N = 1000, ROUNDS = 4, QUANTITIES = KEL_CHANGE + 1 };

/* All that a thread works out. Compared as bytes: padding is zero, for it is cleared before. */
typedef struct results {
    double value[5][N], u[5][N];
    unsigned char flags[5][N];
    kel_answer answer[QUANTITIES][N];
    double covariance[N], outside[N];
    bool inside[N], in_gap[N];
    size_t text_size;
    char text[1 << 16];
    char message[492];
} results;

typedef struct job {
    const kel_record *record;
    const char *bytes;
    size_t size;
    results *out;
    bool failed;
} job;

static void
fill_temperatures(const kel_record *record, double *from, double *to)
{
    const kel_content *c = kel_record_content(record);
    double lo = c->range.lo, width = c->range.hi - lo;
    for (int i = 0; i < N; i++) {
        from[i] = lo + width * ((i * 37 % N) - 50) / (N - 100.0);
        to[i] = lo + width * ((i * 61 % N) - 20) / (N - 100.0);
        from[i] = from[i] < 0 ? 0 : from[i];
        to[i] = to[i] < 0 ? 0 : to[i];
    }
}

static bool
evaluate(results *out, const kel_record *record, const char *bytes, size_t size)
{
    static const double below_zero[] = { -1.0 };
    double from[N], to[N], nothing[1];
    kel_error err = { KEL_OK, 0, 0, "" };
    fill_temperatures(record, from, to);
    kel_status worst[] = {
        kel_record_coefficient_n(out->value[0], out->u[0], out->flags[0], record, to, N, &err),
        kel_record_mean_n(out->value[1], out->u[1], out->flags[1], record, from, to, N, &err),
        kel_record_expansion_n(out->value[2], out->u[2], out->flags[2], record, to, N, &err),
        kel_record_integral_n(out->value[3], out->u[3], out->flags[3], record, from, to, N, &err),
        kel_record_length_ratio_n(out->value[4], out->u[4], out->flags[4], record, from, to, N, &err),
    };
    for (size_t i = 0; i < sizeof worst / sizeof worst[0]; i++)
        if (worst[i] < 0)
            return false;
    for (int i = 0; i < N; i++) {
        kel_query other = { KEL_EXPANSION, 0, from[i], 0, NAN, -1 };
        for (int q = 0; q < QUANTITIES; q++) {
            kel_query query = { (kel_quantity)q, from[i], to[i], from[i], i % 3 == 0 ? 250.0 : (double)NAN,
                                i % 2 == 0 ? -1 : KEL_BASE_CURRENT };
            kel_record_answer(&out->answer[q][i], record, &query, &err);
            if (q == KEL_INTEGRAL)
                kel_record_covariance(&out->covariance[i], record, &query, &other, &err);
        }
        out->outside[i] = kel_record_outside(record, from[i], to[i]);
        out->inside[i] = kel_record_inside(record, to[i]);
        out->in_gap[i] = kel_record_in_gap(record, to[i]);
    }
    /* Errors too: their words must not pass through something shared. */
    kel_record_coefficient_n(nothing, NULL, NULL, record, below_zero, 1, &err);
    memcpy(out->message, err.message, strlen(err.message));
    kel_record *own;
    kel_text text = KEL_TEXT_INIT;
    if (kel_record_parse(&own, bytes, size, &err) != KEL_OK || kel_record_format(&text, own, &err) != KEL_OK ||
        text.size > sizeof out->text)
        return false;
    memcpy(out->text, text.bytes, text.size);
    out->text_size = text.size;
    kel_text_free(&text);
    kel_record_free(own);
    return true;
}

static void *
work(void *argument)
{
    job *j = argument;
    for (int i = 0; i < ROUNDS && !j->failed; i++)
        j->failed = !evaluate(j->out, j->record, j->bytes, j->size);
    return NULL;
}

int
main(int argc, char **argv)
{
    kel_record *record = NULL;
    kel_error err = { KEL_OK, 0, 0, "" };
    kel_text text = KEL_TEXT_INIT;
    if (argc != 2 || kel_record_load(&record, argv[1], &err) != KEL_OK ||
        kel_record_format(&text, record, &err) != KEL_OK) {
        fprintf(stderr, "threads RECORD.json: %s\n", err.message);
        return 2;
    }
    results *alone = calloc(1, sizeof *alone);
    pthread_t thread[THREADS];
    job jobs[THREADS];
    int differ = 0;
    if (alone == NULL || !evaluate(alone, record, text.bytes, text.size))
        return 2;
    for (int i = 0; i < THREADS; i++)
        jobs[i] = (job){ record, text.bytes, text.size, calloc(1, sizeof *alone), false };
    for (int i = 0; i < THREADS; i++)
        if (pthread_create(&thread[i], NULL, work, &jobs[i]) != 0)
            return 2;
    for (int i = 0; i < THREADS; i++) {
        pthread_join(thread[i], NULL);
        differ += jobs[i].failed || memcmp(jobs[i].out, alone, sizeof *alone) != 0;
        free(jobs[i].out);
    }
    free(alone);
    kel_text_free(&text);
    kel_record_free(record);
    if (differ > 0)
        printf("%d of %d threads got something else than one alone\n", differ, THREADS);
    else
        printf("%d threads, %d answers each as one alone\n", THREADS, ROUNDS * N * (QUANTITIES + 6));
    return differ > 0;
}

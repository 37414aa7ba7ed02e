/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Reservations. Each has a code for scripts and a sentence for people; they stand beside their number on stdout and
   once on stderr, or in the object with --json. Status 3 tells of them, unless --accept names their codes. */
#include "reservations.h"

#include "messages.h"
#include "options.h"
#include "output.h"

#include <string.h>

static const struct { unsigned flag; const char *code; bool raises; } codes[] = {
    { KEL_FLAG_EXTRAPOLATED, "extrapolated", true },
    { KEL_FLAG_GAP, "gap", true },
    { KEL_FLAG_TRANSITION, "transition", true },
    { FLAG_UNREACHABLE, "unreachable", true },
    { KEL_FLAG_UNKNOWN_U, "unknown-uncertainty", false },
};

enum { CODES = sizeof codes / sizeof codes[0] };

/* --accept may be repeated, and each may be a list. An unknown code is refused: a slip in a script would otherwise
   accept nothing without a word. */
int
reservations_begin(job *j)
{
    size_t n;
    const char *const *values = option_values(j, OPT_ACCEPT, &n);
    if (values == NULL)
        return fail_memory(j);
    for (size_t i = 0; i < n; i++) {
        const char *rest = values[i], *item;
        size_t size;
        while (next_item(&rest, &item, &size)) {
            size_t k = 0;
            while (k < CODES && (strlen(codes[k].code) != size || memcmp(codes[k].code, item, size) != 0))
                k++;
            if (k == CODES)
                return usage(j, "--accept knows extrapolated, gap, transition, unreachable and unknown-uncertainty, "
                                "not %.*s",
                             (int)size, item);
            j->accepted |= codes[k].flag;
        }
    }
    return EXIT_FINE;
}

const char *
reservation_code(unsigned flag)
{
    for (size_t i = 0; i < CODES; i++)
        if (codes[i].flag == flag)
            return codes[i].code;
    return "";
}

/* In the order of the table, which is from grave to light. */
void
add_codes(kel_text *out, unsigned flags, const char *between)
{
    const char *before = "";
    for (size_t i = 0; i < CODES; i++)
        if (flags & codes[i].flag) {
            kel_text_add(out, before);
            kel_text_add(out, codes[i].code);
            before = between;
        }
}

/* The limit with its units and whose it is. */
static void
add_range(kel_text *out, const subject *s, const concern *about)
{
    add_temperature(out, about->unit, s->content->range.lo);
    kel_text_add(out, " to ");
    add_temperature(out, about->unit, s->content->range.hi);
    kel_text_add(out, " of ");
    add_file_name(out, s->name);
}

/* "T = 20 K", or "20 K to 77 K". */
static void
add_concern(kel_text *out, const concern *about)
{
    if (about->count == 1)
        kel_text_add(out, "T = ");
    add_temperature(out, about->unit, about->points[0]);
    if (about->count == 2) {
        kel_text_add(out, " to ");
        add_temperature(out, about->unit, about->points[1]);
    }
}

/* Names what lies outside: the question itself, the temperature of the length, or else the reference temperature, on
   which the answer leans without being asked about it. */
static void
add_extrapolated(kel_text *out, const subject *s, const concern *about)
{
    bool outside = false;
    for (size_t i = 0; i < about->count; i++)
        outside = outside || !kel_record_inside(s->record, about->points[i]);
    if (outside) {
        add_concern(out, about);
        kel_text_add(out, about->count == 1 ? " is outside the validity range " : " leaves the validity range ");
    } else if (!isnan(about->at) && !kel_record_inside(s->record, about->at)) {
        kel_text_add(out, "the length's temperature ");
        add_temperature(out, about->unit, about->at);
        kel_text_add(out, " is outside the validity range ");
    } else {
        kel_text_add(out, "the reference temperature ");
        add_temperature(out, about->unit, isnan(about->reference) ? s->content->reference_temperature
                        : about->reference);
        kel_text_add(out, " is outside the validity range ");
    }
    add_range(out, s, about);
}

/* If no end lies inside one, the answer leans on it through the reference temperature. */
static void
add_gap(kel_text *out, const subject *s, const concern *about)
{
    const kel_content *c = s->content;
    for (size_t i = 0; i < about->count; i++)
        for (size_t k = 0; k < c->gap_count; k++)
            if (about->points[i] > c->gaps[k].lo && about->points[i] < c->gaps[k].hi) {
                add_temperature(out, about->unit, about->points[i]);
                kel_text_add(out, " lies in a gap without observations from ");
                add_temperature(out, about->unit, c->gaps[k].lo);
                kel_text_add(out, " to ");
                add_temperature(out, about->unit, c->gaps[k].hi);
                kel_text_add(out, " of ");
                add_file_name(out, s->name);
                return;
            }
    add_concern(out, about);
    kel_text_add(out, " leans on a gap without observations of ");
    add_file_name(out, s->name);
}

/* The same rule as the integral: a step at T is crossed by lo < T <= hi. */
static void
add_transition(kel_text *out, const subject *s, const concern *about)
{
    double a = about->points[0], b = about->count == 2 ? about->points[1] : about->reference;
    double lo = fmin(a, b), hi = fmax(a, b);
    add_temperature(out, about->unit, about->count == 2 ? a : b);
    kel_text_add(out, " to ");
    add_temperature(out, about->unit, about->count == 2 ? b : a);
    kel_text_add(out, " crosses the transition at ");
    const char *before = "";
    for (size_t i = 0; i < s->content->transition_count; i++) {
        double t = s->content->transitions[i].at;
        if (lo < t && t <= hi) {
            kel_text_add(out, before);
            add_temperature(out, about->unit, t);
            before = " and ";
        }
    }
    kel_text_add(out, " of ");
    add_file_name(out, s->name);
}

void
add_reservation_text(kel_text *out, const subject *s, const concern *about, unsigned flag)
{
    switch (flag) {
    case KEL_FLAG_EXTRAPOLATED:
        add_extrapolated(out, s, about);
        break;
    case KEL_FLAG_GAP:
        add_gap(out, s, about);
        break;
    case KEL_FLAG_TRANSITION:
        add_transition(out, s, about);
        break;
    case FLAG_UNREACHABLE:
        add_concern(out, about);
        kel_text_add(out, " does not reach the wanted value");
        break;
    default:
        kel_text_add(out, "the uncertainty is not known for ");
        add_file_name(out, s->name);
    }
}

/* One note for each code: its words are those of the first answer, later ones only count. So a million rows cost
   nothing. */
static int
keep(job *j, const subject *s, const concern *about, unsigned flag, const char *input, size_t place)
{
    note **end = &j->reservations;
    for (; *end != NULL; end = &(*end)->next)
        if ((*end)->flag == flag) {
            (*end)->count++;
            return EXIT_FINE;
        }
    kel_text text = KEL_TEXT_INIT;
    add_reservation_text(&text, s, about, flag);
    note *n = text.failed ? NULL : kel_arena_take(j->memory, 1, sizeof *n);
    if (n != NULL) {
        *n = (note){ reservation_code(flag), kel_arena_string(j->memory, text.bytes), input, place, 1, flag, NULL };
        if (n->text == NULL)
            n = NULL;
    }
    kel_text_free(&text);
    if (n == NULL)
        return fail_memory(j);
    *end = n;
    return EXIT_FINE;
}

/* The refusal of --within-range comes first: an answer that is refused leaves no note. */
int
reserve(job *j, const subject *s, const concern *about, unsigned flags, const char *input, size_t place)
{
    if (j->within_range && (flags & KEL_FLAG_EXTRAPOLATED)) {
        kel_text text = KEL_TEXT_INIT;
        kel_error err = { .code = KEL_E_RANGE, .line = place };
        add_extrapolated(&text, s, about);
        if (text.failed)
            return fail_memory(j);
        kel_error_set(&err, KEL_E_RANGE, place, 0, "%s", text.bytes);
        kel_text_free(&text);
        return fail(j, input, &err);
    }
    for (size_t i = 0; i < CODES; i++)
        if ((flags & codes[i].flag) && keep(j, s, about, codes[i].flag, input, place) != EXIT_FINE)
            return EXIT_FAILED;
    return EXIT_FINE;
}

static void
json_one(kel_json *json, const char *code, const char *text)
{
    kel_json_inline_object(json, NULL);
    kel_json_string(json, "code", code);
    kel_json_string(json, "text", text);
    kel_json_end(json);
}

/* The words are made anew for each row, since they name its temperature. */
void
json_reservations_of(kel_json *json, const subject *s, const concern *about, unsigned flags)
{
    kel_json_array(json, "reservations");
    for (size_t i = 0; i < CODES; i++)
        if (flags & codes[i].flag) {
            kel_text text = KEL_TEXT_INIT;
            add_reservation_text(&text, s, about, codes[i].flag);
            if (text.failed)
                json->text->failed = true;
            else
                json_one(json, codes[i].code, text.bytes);
            kel_text_free(&text);
        }
    kel_json_end(json);
}

void
json_reservations(const job *j, kel_json *json)
{
    kel_json_array(json, "reservations");
    for (const note *n = j->reservations; n != NULL; n = n->next)
        json_one(json, n->code, n->text);
    kel_json_end(json);
}

/* The last thing a command does, after its answer is out: only now is it known that there is one. */
int
finish(const job *j)
{
    say_warnings(j);
    int status = EXIT_FINE;
    for (const note *n = j->reservations; n != NULL; n = n->next) {
        for (size_t i = 0; i < CODES; i++)
            if (codes[i].flag == n->flag && codes[i].raises && !(j->accepted & n->flag))
                status = EXIT_RESERVED;
        if (j->json)
            continue;
        kel_text line = KEL_TEXT_INIT;
        kel_text_add(&line, "kelspan: ");
        if (n->file != NULL)
            add_file_name(&line, n->file);
        if (n->line != 0)
            kel_text_printf(&line, ":%zu: ", n->line);
        kel_text_printf(&line, "%s: %s", n->code, n->text);
        if (n->count > 1)
            kel_text_printf(&line, " (%zu answers, this is the first)", n->count);
        kel_text_add(&line, "\n");
        if (!line.failed)
            say_line(line.bytes, line.size);
        kel_text_free(&line);
    }
    return status;
}

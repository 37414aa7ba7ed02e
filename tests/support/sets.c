/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The reader of sets.h. */
#include "sets.h"

#include <math.h>
#include <stdio.h>
#include <string.h>
#include <strings.h>

enum { CELLS = 8, LINE = 4096 };

static bool
number(quad *out, const char *cell)
{
    char *end;
    strtod(cell, &end);
    if (end == cell || *end != '\0' || strspn(cell, "+-.0123456789eE") != strlen(cell))
        return false;
    *out = quad_read(cell);
    return true;
}

static size_t
cut(char **cells, char *line)
{
    size_t n = 0;
    line[strcspn(line, "\r\n")] = '\0';
    for (char *at = line; at != NULL && n < CELLS;) {
        cells[n++] = at;
        at = strchr(at, ',');
        if (at != NULL)
            *at++ = '\0';
    }
    return n;
}

/* Terms B0, Bk*x, Bk*x^k and "...", joined by +, after "y =" and up to a comma or a bracket. */
static bool
read_model(ls_set *set, const char *line)
{
    char text[LINE];
    size_t n = 0;
    const char *from = strchr(line, '=');
    if (from == NULL)
        return false;
    for (from++; *from != '\0' && strchr(",(\r\n", *from) == NULL && n + 1 < sizeof text; from++)
        if (*from != ' ')
            text[n++] = *from;
    text[n] = '\0';
    set->degree = -1;
    set->constant = false;
    for (char *at = text; *at != '\0';) {
        size_t length = strcspn(at, "+");
        char term[32] = "";
        int index = -1, power = 0, used = 0;
        if (length == 0 || length >= sizeof term)
            return false;
        memcpy(term, at, length);
        at += length + (at[length] == '+');
        if (strcmp(term, "...") == 0)
            continue;
        if (sscanf(term, "B%d*x^%d%n", &index, &power, &used) == 2 && (size_t)used == length)
            ;
        else if (sscanf(term, "B%d*x%n", &index, &used) == 1 && (size_t)used == length)
            power = 1;
        else if (sscanf(term, "B%d%n", &index, &used) == 1 && (size_t)used == length)
            power = 0;
        else
            return false;
        if (index != power || power >= SET_TERMS)
            return false;
        set->constant |= power == 0;
        set->degree = power > set->degree ? power : set->degree;
    }
    return set->degree >= (set->constant ? 0 : 1);
}

static bool
add_point(ls_set *set, size_t *room, const quad *x, const quad *y, const quad *u)
{
    double **columns[] = { &set->x, &set->x_lo, &set->y, &set->y_lo, &set->u };
    if (set->n == *room) {
        *room = *room > 0 ? 2 * *room : 128;
        for (size_t k = 0; k < (u != NULL ? 5 : 4); k++) {
            double *larger = realloc(*columns[k], *room * sizeof *larger);
            if (larger == NULL)
                return false;
            *columns[k] = larger;
        }
    }
    size_t i = set->n++;
    set->x[i] = (double)*x;
    set->x_lo[i] = (double)(*x - (quad)set->x[i]);
    set->y[i] = (double)*y;
    set->y_lo[i] = (double)(*y - (quad)set->y[i]);
    if (u != NULL)
        set->u[i] = (double)*u;
    return true;
}

/* Rows of the file after its header; columns x, y, u are found by name. */
static bool
read_points(ls_set *set, char *why, FILE *f)
{
    char line[LINE], *cells[CELLS];
    size_t columns = 0, room = 0, number_of_line = 0, at[3] = { CELLS, CELLS, CELLS };
    bool model = false;
    while (fgets(line, sizeof line, f) != NULL) {
        number_of_line++;
        if (strncmp(line, "# model:", 8) == 0) {
            model = read_model(set, line);
            if (!model)
                return set->degree = -1, snprintf(why, SET_WHY, "its model is no polynomial of one variable"), false;
        }
        if (*line == '#' || *line == '\n' || *line == '\r')
            continue;
        size_t n = cut(cells, line);
        if (columns == 0) {
            columns = n;
            for (size_t j = 0; j < n; j++)
                for (size_t k = 0; k < 3; k++)
                    if (strcmp(cells[j], (const char *const[]){ "x", "y", "u" }[k]) == 0)
                        at[k] = j;
            if (!model || at[0] == CELLS || at[1] == CELLS)
                return snprintf(why, SET_WHY, "it has no line '# model:' or no columns x and y"), false;
            continue;
        }
        quad value[3];
        for (size_t k = 0; k < 3; k++)
            if (n != columns || (at[k] < CELLS && !number(&value[k], cells[at[k]])))
                return snprintf(why, SET_WHY, "line %zu is no row of %zu numbers", number_of_line, columns), false;
        if (!add_point(set, &room, &value[0], &value[1], at[2] < CELLS ? &value[2] : NULL))
            return snprintf(why, SET_WHY, "out of memory"), false;
    }
    if (set->n == 0)
        snprintf(why, SET_WHY, "it has no points");
    return set->n > 0;
}

bool
set_read(ls_set *out, char why[SET_WHY], const char *path)
{
    *out = (ls_set){ .degree = -1 };
    FILE *f = fopen(path, "r");
    if (f == NULL)
        return snprintf(why, SET_WHY, "it cannot be opened"), false;
    bool fine = read_points(out, why, f);
    fclose(f);
    return fine;
}

void
set_free(ls_set *set)
{
    free(set->x);
    free(set->x_lo);
    free(set->y);
    free(set->y_lo);
    free(set->u);
    *set = (ls_set){ .degree = -1 };
}

static bool
read_certificates(ls_certificates *out, char *why, FILE *f)
{
    char line[LINE], *cells[CELLS];
    bool header = false;
    while (fgets(line, sizeof line, f) != NULL) {
        if (*line == '#' || *line == '\n' || *line == '\r')
            continue;
        if (!header) {
            header = strncmp(line, "dataset,item,certified,certified_sd", 35) == 0;
            if (!header)
                return snprintf(why, SET_WHY, "its header is not dataset,item,certified,certified_sd"), false;
            continue;
        }
        size_t n = cut(cells, line);
        ls_certificate row = { .has_sd = n == 4 && *cells[3] != '\0' };
        if (n != 4 || !number(&row.value, cells[2]) || (row.has_sd && !number(&row.sd, cells[3])))
            return snprintf(why, SET_WHY, "a row of '%.40s' is no certificate", cells[0]), false;
        snprintf(row.dataset, sizeof row.dataset, "%s", cells[0]);
        snprintf(row.item, sizeof row.item, "%s", cells[1]);
        ls_certificate *larger = realloc(out->rows, (out->n + 1) * sizeof *larger);
        if (larger == NULL)
            return snprintf(why, SET_WHY, "out of memory"), false;
        out->rows = larger;
        out->rows[out->n++] = row;
    }
    return true;
}

bool
certificates_read(ls_certificates *out, char why[SET_WHY], const char *path)
{
    *out = (ls_certificates){ 0 };
    FILE *f = fopen(path, "r");
    if (f == NULL)
        return snprintf(why, SET_WHY, "it cannot be opened"), false;
    bool fine = read_certificates(out, why, f);
    fclose(f);
    return fine;
}

void
certificates_free(ls_certificates *certificates)
{
    free(certificates->rows);
    *certificates = (ls_certificates){ 0 };
}

const ls_certificate *
certificate_find(const ls_certificates *certificates, const char *dataset, const char *item)
{
    for (size_t i = 0; i < certificates->n; i++)
        if (strcasecmp(certificates->rows[i].dataset, dataset) == 0 && strcmp(certificates->rows[i].item, item) == 0)
            return &certificates->rows[i];
    return NULL;
}

double
set_digits(double got, quad want)
{
    double d = (double)(quad_abs((quad)got - want) / quad_abs(want));
    return isfinite(d) ? fmin(SET_DIGITS, d > 0 ? -log10(d) : SET_DIGITS) : 0;
}

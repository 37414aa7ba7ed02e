/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Prints a value of a JSON text on stdin by its path, for the command-line tests:

       json_get rows.0.temperature_K < FILE

   Steps are parted by points; a number counts elements from 0; `#` gives the number of members; no path prints
   everything. Strings are printed bare, numbers with 17 digits, the rest as compact JSON. Status 1: not JSON; 2: no such
   path. */
#include <jansson.h>
#include <stdlib.h>
#include <string.h>

/* One step down, NULL if there is none. `name` is cut at the end of the step. */
static json_t *
step(json_t *at, const char *name)
{
    char *end;
    if (json_is_object(at))
        return json_object_get(at, name);
    unsigned long i = strtoul(name, &end, 10);
    return end != name && *end == '\0' ? json_array_get(at, i) : NULL;
}

static int
print(json_t *value)
{
    if (json_is_string(value))
        return puts(json_string_value(value)) < 0;
    if (json_is_real(value))
        return printf("%.17g\n", json_real_value(value)) < 0;
    char *text = json_dumps(value, JSON_ENCODE_ANY | JSON_COMPACT | JSON_REAL_PRECISION(17));
    int failed = text == NULL || puts(text) < 0;
    free(text);
    return failed;
}

int
main(int argc, char **argv)
{
    json_error_t error;
    json_t *root = json_loadf(stdin, JSON_REJECT_DUPLICATES, &error), *at = root;
    if (root == NULL) {
        fprintf(stderr, "json_get: line %d: %s\n", error.line, error.text);
        return 1;
    }
    int status = 0;
    char *rest = argc > 1 ? argv[1] : NULL;
    for (char *name; at != NULL && (name = strsep(&rest, ".")) != NULL;) {
        if (strcmp(name, "#") == 0) {
            printf("%zu\n", json_is_object(at) ? json_object_size(at) : json_array_size(at));
            json_decref(root);
            return 0;
        }
        at = step(at, name);
    }
    if (at == NULL) {
        fprintf(stderr, "json_get: no such path\n");
        status = 2;
    } else {
        status = print(at);
    }
    json_decref(root);
    return status;
}

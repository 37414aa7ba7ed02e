/* SPDX-License-Identifier: Apache-2.0 */
/* JSON text read strictly, with the place in the tree in every message. Shared inside libkelspan, not installed.

   A node is a value with the way to it; nodes live on the caller's stack and borrow from the tree. The first failure
   is kept in the reader, and from then on getters give zero, NULL or no elements: one look at `status` at the end is
   enough. Every failure of a getter is KEL_E_DATA and names the value's place ("modes[2].label"). */
#ifndef KELSPAN_JSON_READ_H
#define KELSPAN_JSON_READ_H

#include "core.h"
#include "names.h"

typedef struct kel__tree kel__tree;

typedef struct kel__node {
    const void *value;              /* the parser's; NULL after a failure */
    const struct kel__node *parent; /* NULL for the root */
    const char *key;                /* in an object; NULL in an array */
    size_t index;                   /* in an array */
} kel__node;

typedef struct kel__reader {
    kel_arena *memory;              /* strings and arrays that getters give live here */
    kel_error *err;
    kel_status status;
} kel__reader;

/* Parses n bytes that must be one JSON value without duplicate keys and without NUL. KEL_E_SYNTAX, or KEL_E_RANGE
   for a number beyond a double, with line and column (in bytes) of the end of the token that is wrong; KEL_E_NOMEM. */
kel_status kel__tree_parse(kel__tree **out, const char *bytes, size_t n, kel_error *err);
/* Reports a failure at byte number `position` of the text, from 1, with line and column: "not valid JSON: what
   near". */
kel_status kel__json_fail(kel_error *err, kel_status code, const char *bytes, size_t n, size_t position,
                          const char *what,
                          const char *near);
void kel__tree_free(kel__tree *tree);
kel__node kel__tree_root(const kel__tree *tree);

/* Records a failure at node; `what` goes on after the name of the place: "is not a number". */
void kel__read_fail(kel__reader *reader, const kel__node *node, const char *what);

bool kel__is_object(const kel__node *node);
bool kel__has_member(const kel__node *object, const char *key);

/* The object's keys must be exactly these; `optional` (NULL: none) may stand beside them. An unknown key is reported
   before a missing one, for it is usually the missing one misspelt. */
void kel__read_keys(kel__reader *reader, const kel__node *object, const char *const *keys, size_t n,
                    const char *optional);

kel__node kel__read_member(kel__reader *reader, const kel__node *object, const char *key);
kel__node kel__read_element(kel__reader *reader, const kel__node *array, size_t index);
size_t kel__read_length(kel__reader *reader, const kel__node *array);

/* Typed members of an object. `_or_null` turns null into NaN or a NULL string. */
double kel__read_number(kel__reader *reader, const kel__node *object, const char *key);
double kel__read_number_or_null(kel__reader *reader, const kel__node *object, const char *key);
size_t kel__read_count(kel__reader *reader, const kel__node *object, const char *key);
bool kel__read_bool(kel__reader *reader, const kel__node *object, const char *key);
const char *kel__read_string(kel__reader *reader, const kel__node *object, const char *key);
const char *kel__read_string_or_null(kel__reader *reader, const kel__node *object, const char *key);
int kel__read_word(kel__reader *reader, const kel__node *object, const char *key,
                   const kel__words *list); /* its place */

/* The number, string or word that a node itself is, and all numbers of an array into out[n], n = kel__read_length. */
double kel__node_number(kel__reader *reader, const kel__node *node);
const char *kel__node_string(kel__reader *reader, const kel__node *node);
int kel__node_word(kel__reader *reader, const kel__node *node, const kel__words *list);
void kel__node_numbers(kel__reader *reader, const kel__node *array, double *out, size_t n);

/* n elements of zero in the reader's memory; NULL with KEL_E_NOMEM in the reader. */
void *kel__read_take(kel__reader *reader, size_t n, size_t size);

/* The text of the root's member `key` as it stands in bytes[n], which must be what the tree was parsed from. NULL, with
   KEL_E_NOMEM in the reader, if memory ran out. */
const char *kel__read_raw(kel__reader *reader, const kel__node *root, const char *key, const char *bytes, size_t n);

#endif

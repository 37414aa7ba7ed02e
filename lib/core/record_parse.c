/* SPDX-License-Identifier: Apache-2.0 */
/* A record from its JSON text. In this order, so that the first thing reported is what helps most: is it a record,
   is its format known, has it the right keys and types, does its content keep the rules, is it what was written
   (digest, over our own writing of the content, so that layout does not matter), and does its curve give the values
   that it gave where it was written. */
#include "kernel.h"
#include "record_parts.h"
#include "record_read.h"

#include <stdlib.h>
#include <string.h>

static kel_status
check_version(kel__reader *reader, const kel__node *root)
{
    static const char key[] = "kelspan_record";
    if (!kel__is_object(root))
        return kel_error_set(reader->err, KEL_E_DATA, 0, 0, "not a record: its JSON text is not an object");
    if (!kel__has_member(root, key))
        return kel_error_set(reader->err, KEL_E_DATA, 0, 0, "not a record: the key %s is missing", key);
    size_t version = kel__read_count(reader, root, key);
    /* Before unknown keys are looked for: a newer format has some. */
    if (reader->status == KEL_OK && version > KEL__RECORD_VERSION)
        reader->status = kel_error_set(reader->err, KEL_E_VERSION, 0, 0,
                                       "written by a newer kelspan (record version %zu, this one reads up to %d)",
                                       version, KEL__RECORD_VERSION);
    if (reader->status == KEL_OK && version < 1)
        reader->status = kel_error_set(reader->err, KEL_E_DATA, 0, 0, "%s = 0 is no version, the first is 1", key);
    return reader->status;
}

static kel_status
check_digest(const kel_content *content, kel_error *err)
{
    char hex[65];
    kel_status status = kel__record_digest(hex, NULL, content, err);
    if (status == KEL_OK && strcmp(hex, content->digest) != 0)
        status = kel_error_set(err, KEL_E_DIGEST, 0, 0,
                               "the content does not match its digest: the record was changed after it was written");
    return status;
}

static kel_status
fill(kel_record *record, const kel__tree *tree, const char *bytes, size_t n, kel_error *err)
{
    kel_content *content = &record->content;
    kel__reader reader = { record->memory, err, KEL_OK };
    const kel__node root = kel__tree_root(tree);
    kel_status status = check_version(&reader, &root);
    if (status != KEL_OK)
        return status;
    kel__content_read(content, &reader, &root);
    if (reader.status == KEL_OK && kel__has_member(&root, "annotations")) {
        const kel__node annotations = kel__read_member(&reader, &root, "annotations");
        if (kel__is_object(&annotations))
            content->annotations = kel__read_raw(&reader, &root, "annotations", bytes, n);
        else
            kel__read_fail(&reader, &annotations, "is not an object");
    }
    status = reader.status;
    if (status == KEL_OK)
        status = kel__content_check(content, KEL_E_DATA, err);
    if (status == KEL_OK)
        status = check_digest(content, err);
    if (status == KEL_OK)
        status = kel__checks_compare(record, err);
    if (status == KEL_OK)
        status = kel__kernel_make(&record->kernel, content, record->memory, err);
    return status;
}

static kel_status
parse(kel_record **out, const char *bytes, size_t n, kel_error *err)
{
    kel__tree *tree = NULL;
    *out = NULL;
    kel_status status = kel__tree_parse(&tree, bytes, n, err);
    if (status != KEL_OK)
        return status;
    kel_record *record = calloc(1, sizeof *record);
    if (record != NULL)
        record->memory = kel_arena_new();
    if (record == NULL || record->memory == NULL)
        status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a record");
    else
        status = fill(record, tree, bytes, n, err);
    kel__tree_free(tree);
    if (status == KEL_OK)
        *out = record;
    else
        kel_record_free(record);
    return status;
}

kel_status
kel_record_parse(kel_record **out, const char *bytes, size_t n, kel_error *err)
{
    if (out == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "there is no place for the record");
    *out = NULL;
    if (bytes == NULL && n != 0)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no text was given");
    if (n > KEL__RECORD_LARGEST)
        return kel_error_set(err, KEL_E_DATA, 0, 0, "not a record: it is larger than 16 MiB");
    if (n == 0)
        return kel_error_set(err, KEL_E_SYNTAX, 1, 1, "not a record: it is empty");
    return parse(out, bytes, n, err);
}

/* SPDX-License-Identifier: Apache-2.0 */
/* A record from content that a program holds: checked, copied, given its check values and its digest.

   What cannot be written and read back is refused here and not only when it is saved: that includes annotations that
   are no JSON object and a text above the largest file. */
#include "kernel.h"
#include "record_parts.h"

#include <stdlib.h>
#include <string.h>

/* Digest, annotations' key and a little more: what the whole text has beyond its digested part and the annotations. */
enum { REST_OF_TEXT = 256 };

/* Check values, annotations, digest: what a record has beyond the content given. */
static kel_status
complete(kel_record *record, const char *annotations, kel_error *err)
{
    kel_content *content = &record->content;
    char hex[65];
    size_t size = 0;
    kel_status status = kel__checks_make(record, err);
    if (status == KEL_OK)
        status = kel__annotations_copy(&content->annotations, annotations, record->memory, err);
    if (status == KEL_OK)
        status = kel__record_digest(hex, &size, content, err);
    if (status != KEL_OK)
        return status;
    if (content->annotations != NULL)
        size += strlen(content->annotations);
    if (size > KEL__RECORD_LARGEST - REST_OF_TEXT)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "the record would be larger than 16 MiB");
    content->digest = kel_arena_string(record->memory, hex);
    if (content->digest == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a record");
    return KEL_OK;
}

kel_status
kel_record_build(kel_record **out, const kel_content *content, kel_error *err)
{
    if (out == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "there is no place for the record");
    *out = NULL;
    if (content == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no content was given");
    kel_status status = kel__content_check(content, KEL_E_ARGUMENT, err);
    if (status != KEL_OK)
        return status;
    kel_record *record = calloc(1, sizeof *record);
    if (record != NULL)
        record->memory = kel_arena_new();
    if (record == NULL || record->memory == NULL)
        status = kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a record");
    if (status == KEL_OK)
        status = kel__content_copy(&record->content, content, record->memory, err);
    if (status == KEL_OK)
        status = complete(record, content->annotations, err);
    if (status == KEL_OK)
        status = kel__kernel_make(&record->kernel, &record->content, record->memory, err);
    if (status != KEL_OK) {
        kel_record_free(record);
        return status;
    }
    *out = record;
    return KEL_OK;
}

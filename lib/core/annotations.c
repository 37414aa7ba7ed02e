/* SPDX-License-Identifier: Apache-2.0 */
/* A user's annotations: any JSON object, kept to the byte.

   It is checked in the place where it will stand, as a member of an object, so that a depth which is fine alone but
   too deep there is refused, and by the parser that will read it. */
#include "json_read.h"
#include "record_parts.h"

#include <string.h>

static const char wrap_before[] = "{\"annotations\": ", wrap_after[] = "}";

static kel_status
check_wrapped(const char **out, const kel_text *wrapped, kel_arena *memory, kel_error *err)
{
    static const char *const keys[] = { "annotations" };
    kel__tree *tree = NULL;
    kel__reader reader = { memory, err, KEL_OK };
    *out = NULL;
    kel_status status = kel__tree_parse(&tree, wrapped->bytes, wrapped->size, err);
    if (status != KEL_OK)
        return status;
    const kel__node root = kel__tree_root(tree);
    /* "{}, "more": 1" would pass as JSON inside the wrapping. */
    kel__read_keys(&reader, &root, keys, 1, NULL);
    const kel__node value = kel__read_member(&reader, &root, keys[0]);
    if (!kel__is_object(&value))
        kel__read_fail(&reader, &value, "is not an object");
    if (reader.status == KEL_OK)
        *out = kel__read_raw(&reader, &root, keys[0], wrapped->bytes, wrapped->size);
    kel__tree_free(tree);
    return reader.status;
}

kel_status
kel__annotations_copy(const char **out, const char *annotations, kel_arena *memory, kel_error *err)
{
    *out = NULL;
    if (annotations == NULL)
        return KEL_OK;
    kel_text wrapped = KEL_TEXT_INIT;
    kel_text_add(&wrapped, wrap_before);
    kel_text_add(&wrapped, annotations);
    kel_text_add(&wrapped, wrap_after);
    kel_error inner;
    kel_status status;
    if (wrapped.failed)
        status = kel_error_set(&inner, KEL_E_NOMEM, 0, 0, "out of memory for annotations");
    else if (wrapped.size > KEL__RECORD_LARGEST)
        status = kel_error_set(&inner, KEL_E_ARGUMENT, 0, 0, "they are larger than 16 MiB");
    else
        status = check_wrapped(out, &wrapped, memory, &inner);
    kel_text_free(&wrapped);
    if (status == KEL_OK || status == KEL_E_NOMEM)
        return status == KEL_OK ? KEL_OK : kel_error_set(err, status, 0, 0, "%s", inner.message);
    /* Columns count from the text as it was given. */
    if (inner.line == 1)
        inner.column = inner.column > strlen(wrap_before) ? inner.column - strlen(wrap_before) : 1;
    return kel_error_set(err, KEL_E_ARGUMENT, inner.line, inner.column, "annotations: %s", inner.message);
}

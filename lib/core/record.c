/* SPDX-License-Identifier: Apache-2.0 */
/* What a record is made of can be looked at, and goes all at once. */
#include "core.h"

#include <stdlib.h>

const kel_content *
kel_record_content(const kel_record *record)
{
    return record == NULL ? NULL : &record->content;
}

void
kel_record_free(kel_record *record)
{
    if (record == NULL)
        return;
    kel_arena_free(record->memory);
    free(record);
}

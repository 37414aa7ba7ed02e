/* SPDX-License-Identifier: Apache-2.0 */
/* The steps by which a record is built, written and read. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_RECORD_PARTS_H
#define KELSPAN_RECORD_PARTS_H

#include "core.h"

/* The newest format that this library reads, and the one it writes. */
enum { KEL__RECORD_VERSION = 1 };

/* The largest file of a record, in bytes. */
enum { KEL__RECORD_LARGEST = 16 << 20 };

/* Checks every rule that evaluation and reports rely on; a breach gives `code` and a message that names the key of the
   record's file. Check values, digest and annotations are not looked at. */
kel_status kel__content_check(const kel_content *content, kel_status code, kel_error *err);

/* Deep copy into memory, which is to outlive it: invalid UTF-8 in strings becomes U+FFFD, a source's empty digest
   NULL. Check values, digest and annotations are left empty. content has been checked. KEL_E_NOMEM. */
kel_status kel__content_copy(kel_content *out, const kel_content *content, kel_arena *memory, kel_error *err);

/* A user's JSON object, checked, without blanks around it. NULL stays NULL. KEL_E_ARGUMENT with the place in the
   object. */
kel_status kel__annotations_copy(const char **out, const char *annotations, kel_arena *memory, kel_error *err);

/* Check values from the curve, at temperatures that the validity range fixes. KEL_E_ARGUMENT where one is not
   finite. */
kel_status kel__checks_make(kel_record *record, kel_error *err);

/* Works out the record's check values again. KEL_E_DIGEST where one differs, KEL_E_DATA where there are none or one
   lies outside the validity range. */
kel_status kel__checks_compare(const kel_record *record, kel_error *err);

/* Appends the record's JSON text; without the members digest and annotations if not `whole`. */
void kel__record_write(kel_text *out, const kel_content *content, bool whole);

/* SHA-256 of the text that kel__record_write gives if not `whole`; its size to *size, which may be NULL.
   KEL_E_NOMEM. */
kel_status kel__record_digest(char hex[65], size_t *size, const kel_content *content, kel_error *err);

#endif

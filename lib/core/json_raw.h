/* SPDX-License-Identifier: Apache-2.0 */
/* A member of a JSON object as it stands in the text. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_JSON_RAW_H
#define KELSPAN_JSON_RAW_H

#include <stddef.h>

/* The text of the value of the object's member number `place`, from 0, without blanks around it. bytes[n] must be a valid JSON
   object with more than `place` members: it is not checked again. */
const char *kel__json_member_text(size_t *size, size_t place, const char *bytes, size_t n);

#endif

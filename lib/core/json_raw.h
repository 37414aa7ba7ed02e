/* SPDX-License-Identifier: Apache-2.0 */
/* JSON as it stands in a text: members, ends, tokens. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_JSON_RAW_H
#define KELSPAN_JSON_RAW_H

#include <stddef.h>

/* The text of the value of the object's member number `place`, from 0, without blanks around it. bytes[n] must be a
   valid JSON object with more than `place` members: it is not checked again. */
const char *kel__json_member_text(size_t *size, size_t place, const char *bytes, size_t n);

/* Bytes up to the end of the value that a text begins with, blanks before it included. The value must be valid. */
size_t kel__json_value_size(const char *bytes, size_t n);

/* Bytes of the longest token of a text: a string with its quotes, a number or a word. The text may be anything; what
   a parser would take for a token before it meets an error is counted in full. */
size_t kel__json_longest_token(const char *bytes, size_t n);

#endif

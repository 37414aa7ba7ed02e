/* SPDX-License-Identifier: Apache-2.0 */
/* A record's content from its JSON tree. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_RECORD_READ_H
#define KELSPAN_RECORD_READ_H

#include "json_read.h"

/* Fills content from the root of a record's tree, annotations left out. Types, keys and lengths are checked here,
   the rules of the content are not. Failures go to the reader. */
void kel__content_read(kel_content *content, kel__reader *reader, const kel__node *root);

#endif

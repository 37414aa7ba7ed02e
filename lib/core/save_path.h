/* SPDX-License-Identifier: Apache-2.0 */
/* Paths that writing a file needs. Shared inside libkelspan, not installed. */
#ifndef KELSPAN_SAVE_PATH_H
#define KELSPAN_SAVE_PATH_H

#include <stddef.h>

/* Where path leads when symbolic links in its last component are followed, also where nothing is there yet. To be
   freed. Returns 0 or a value of errno; *target is NULL then. */
int kel__path_follow(char **target, const char *path);

/* The directory part, "." where there is none. To be freed; NULL if memory ran out. */
char *kel__path_directory(const char *path);

/* Bytes that kel__path_beside needs, and a hidden name in target's directory made of two numbers. */
size_t kel__path_beside_size(const char *target);
void kel__path_beside(char *name, const char *target, unsigned long a, unsigned long b);

#endif

/* SPDX-License-Identifier: Apache-2.0 */
/* Paths taken apart and links followed by hand: realpath(3) refuses a link to what does not exist yet. */
#include "save_path.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

enum { LINKS_FOLLOWED = 40, FIRST_LINK = 256, BESIDE_EXTRA = 64 };

/* Length of the directory part with its last slash; 0 where there is none. */
static size_t
directory_length(const char *path)
{
    const char *slash = strrchr(path, '/');
    return slash == NULL ? 0 : (size_t)(slash - path) + 1;
}

/* What a link holds. EINVAL: it is none. */
static int
read_link(char **out, const char *path)
{
    for (size_t size = FIRST_LINK;; size *= 2) {
        char *text = malloc(size);
        if (text == NULL)
            return ENOMEM;
        ssize_t n = readlink(path, text, size);
        if (n >= 0 && (size_t)n < size) {
            text[n] = '\0';
            *out = text;
            return 0;
        }
        int reason = errno;
        free(text);
        if (n < 0)
            return reason;
    }
}

/* A link's text counts from the directory that the link is in. */
static char *
join(const char *link, const char *text)
{
    size_t head = text[0] == '/' ? 0 : directory_length(link), tail = strlen(text);
    char *joined = malloc(head + tail + 1);
    if (joined == NULL)
        return NULL;
    memcpy(joined, link, head);
    memcpy(joined + head, text, tail + 1);
    return joined;
}

int
kel__path_follow(char **target, const char *path)
{
    char *at = strdup(path), *text = NULL;
    int reason = at == NULL ? ENOMEM : 0;
    *target = NULL;
    for (int i = 0; reason == 0; i++) {
        reason = read_link(&text, at);
        /* No link, or nothing there: this is what will be written. Other failures show again when it is. */
        if (reason != 0 && reason != ENOMEM) {
            *target = at;
            return 0;
        }
        if (reason == 0 && i == LINKS_FOLLOWED)
            reason = ELOOP;
        if (reason == 0) {
            char *next = join(at, text);
            free(at);
            at = next;
            reason = next == NULL ? ENOMEM : 0;
        }
        free(text);
        text = NULL;
    }
    free(at);
    return reason;
}

char *
kel__path_directory(const char *path)
{
    size_t n = directory_length(path);
    return n == 0 ? strdup(".") : strndup(path, n);
}

size_t
kel__path_beside_size(const char *target)
{
    return directory_length(target) + BESIDE_EXTRA;
}

void
kel__path_beside(char *name, const char *target, unsigned long a, unsigned long b)
{
    size_t n = directory_length(target);
    memcpy(name, target, n);
    snprintf(name + n, BESIDE_EXTRA, ".kelspan-%lx-%lx", a, b);
}

/* SPDX-License-Identifier: Apache-2.0 */
/* A record from a file. It is read to its end, for what is no regular file has no size; a file that is too large is
   given up as soon as that is seen. */
#include "io_error.h"
#include "record_parts.h"

#include <errno.h>
#include <fcntl.h>
#include <unistd.h>

enum { BLOCK = 1 << 14 };

static kel_status
read_all(kel_text *text, int fd, const char *path, kel_error *err)
{
    char block[BLOCK];
    /* One byte above the limit is enough to know. */
    while (text->size <= KEL__RECORD_LARGEST) {
        ssize_t n = read(fd, block, sizeof block);
        if (n < 0 && errno == EINTR)
            continue;
        if (n < 0)
            return kel__io_error(err, "read", path, errno);
        if (n == 0)
            break;
        kel_text_add_bytes(text, block, (size_t)n);
        if (text->failed)
            return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for the text of a record");
    }
    return KEL_OK;
}

kel_status
kel_record_load(kel_record **out, const char *path, kel_error *err)
{
    if (out == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "there is no place for the record");
    *out = NULL;
    if (path == NULL)
        return kel_error_set(err, KEL_E_ARGUMENT, 0, 0, "no path was given");
    int fd;
    do
        fd = open(path, O_RDONLY | O_CLOEXEC | O_NOCTTY);
    while (fd < 0 && errno == EINTR);
    if (fd < 0)
        return kel__io_error(err, "read", path, errno);
    kel_text text = KEL_TEXT_INIT;
    kel_status status = read_all(&text, fd, path, err);
    close(fd);
    if (status == KEL_OK)
        status = kel_record_parse(out, text.bytes, text.size, err);
    kel_text_free(&text);
    return status;
}

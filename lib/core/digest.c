/* SPDX-License-Identifier: Apache-2.0 */
/* SHA-256 (FIPS 180-4) by nettle. The only file that knows nettle. */
#include "core.h"

#include <nettle/sha2.h>
#include <stdlib.h>

struct kel_digest {
    struct sha256_ctx state;
};

kel_status
kel_digest_new(kel_digest **out, kel_error *err)
{
    *out = malloc(sizeof **out);
    if (*out == NULL)
        return kel_error_set(err, KEL_E_NOMEM, 0, 0, "out of memory for a digest");
    sha256_init(&(*out)->state);
    return KEL_OK;
}

void
kel_digest_add(kel_digest *digest, const void *bytes, size_t n)
{
    if (n != 0)
        sha256_update(&digest->state, n, bytes);
}

/* nettle starts anew after it gave the digest, so that the object serves the next text. */
void
kel_digest_finish(kel_digest *digest, char hex[65])
{
    static const char digits[] = "0123456789abcdef";
    uint8_t bytes[SHA256_DIGEST_SIZE];
    sha256_digest(&digest->state, sizeof bytes, bytes);
    for (size_t i = 0; i < sizeof bytes; i++) {
        hex[2 * i] = digits[bytes[i] >> 4];
        hex[2 * i + 1] = digits[bytes[i] & 15];
    }
    hex[2 * sizeof bytes] = '\0';
}

void
kel_digest_free(kel_digest *digest)
{
    free(digest);
}

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* SHA-256 against the examples of FIPS 180-2, appendix B, and the digest of nothing (NIST CAVP, SHA256ShortMsg.rsp,
   Len = 0). */
#include "../support/unit.h"

#include <kelspan.h>
#include <string.h>

static const struct row { const char *label, *message; size_t repeat; const char *want; } rows[] = {
    { "nothing", "", 1, "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855" },
    { "B.1, one block", "abc", 1, "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad" },
    { "B.2, two blocks", "abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq", 1,
      "248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1" },
    { "B.3, a million times a", "a", 1000000, "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0" },
};

static kel_digest *
begin(void)
{
    kel_digest *digest;
    kel_error err;
    ck_assert_int_eq(kel_digest_new(&digest, &err), KEL_OK);
    return digest;
}

START_TEST(published)
{
    char hex[65];
    kel_digest *digest = begin();
    for (size_t i = 0; i < rows[_i].repeat; i++)
        kel_digest_add(digest, rows[_i].message, strlen(rows[_i].message));
    kel_digest_finish(digest, hex);
    ck_assert_msg(strcmp(hex, rows[_i].want) == 0, "%s: got %s", rows[_i].label, hex);
    kel_digest_free(digest);
}
END_TEST

/* However the bytes are cut into pieces, and with the same object used again. */
START_TEST(pieces_do_not_matter)
{
    const char *message = rows[2].message;
    size_t n = strlen(message);
    char hex[65];
    kel_digest *digest = begin();
    for (size_t cut = 0; cut <= n; cut++) {
        kel_digest_add(digest, message, cut);
        kel_digest_add(digest, NULL, 0);
        kel_digest_add(digest, message + cut, n - cut);
        kel_digest_finish(digest, hex);
        ck_assert_msg(strcmp(hex, rows[2].want) == 0, "cut at %zu: got %s", cut, hex);
    }
    kel_digest_free(digest);
    kel_digest_free(NULL);
}
END_TEST

KEL_TCASE(pieces, pieces_do_not_matter)

static TCase *
tables(void)
{
    TCase *c = tcase_create("published");
    tcase_add_loop_test(c, published, 0, KEL_LENGTH(rows));
    return c;
}

KEL_TEST_MAIN("digest", pieces, tables)

/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Gives a fuzz target its corpus without a fuzzer: every file of tests/fuzz/corpus/NAME (seeds, and the inputs that
   once found something) and those of tests/data that are of its kind. Prints TAP, a line for each folder; a finding
   ends the process, so the plan stays unfulfilled, and the input's name stands above it. With arguments it gives it
   those files instead. */
#include "fuzz.h"

#include <glob.h>

/* An exact block of the heap, so that a sanitizer sees a byte read beyond. */
static void
give_file(const char *path)
{
    FILE *f = fopen(path, "rb");
    FUZZ_REQUIRE(f != NULL, "%s cannot be opened", path);
    FUZZ_REQUIRE(fseek(f, 0, SEEK_END) == 0 && ftell(f) >= 0, "%s has no size", path);
    size_t n = (size_t)ftell(f);
    rewind(f);
    uint8_t *bytes = malloc(n == 0 ? 1 : n);
    FUZZ_REQUIRE(bytes != NULL && fread(bytes, 1, n, f) == n, "%s cannot be read", path);
    fclose(f);
    printf("# %s\n", path);
    fflush(stdout);
    LLVMFuzzerTestOneInput(bytes, n);
    free(bytes);
}

/* Number of the files that were given. */
static size_t
give_pattern(const char *folder, const char *pattern)
{
    char path[4096];
    glob_t found;
    int n = snprintf(path, sizeof path, "%s/%s", folder, pattern);
    FUZZ_REQUIRE(n > 0 && (size_t)n < sizeof path, "the path of %s is too long", pattern);
    int status = glob(path, GLOB_ERR, NULL, &found);
    FUZZ_REQUIRE(status == 0 || status == GLOB_NOMATCH, "%s: glob gives %d", path, status);
    size_t files = status == 0 ? found.gl_pathc : 0;
    for (size_t i = 0; i < files; i++)
        give_file(found.gl_pathv[i]);
    if (status == 0)
        globfree(&found);
    return files;
}

int
main(int argc, char **argv)
{
    size_t patterns = 0, bad = 0;
    char own[128];
    if (argc > 1) {
        for (int i = 1; i < argc; i++)
            give_file(argv[i]);
        return EXIT_SUCCESS;
    }
    while (fuzz_data[patterns] != NULL)
        patterns++;
    snprintf(own, sizeof own, "tests/fuzz/corpus/%s/*", fuzz_name);
    printf("1..%zu\n", patterns + 1);
    for (size_t i = 0; i <= patterns; i++) {
        const char *pattern = i == 0 ? own : fuzz_data[i - 1];
        size_t files = give_pattern(fuzz_source(), pattern);
        printf("%s %zu %s: %zu inputs\n", files > 0 ? "ok" : "not ok", i + 1, pattern, files);
        bad += files == 0;
    }
    return bad == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}

#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# Eight threads share a record, under the thread sanitizer: libkelspan's sources and threads.c are compiled for it here,
# because its objects do not mix with others. Prints TAP; skipped where the sanitizer is missing or cannot run.
# KEL_CC names the compiler, KEL_CORE_LIBS what jansson and nettle need, as configure found them.
set -u
LC_ALL=C
export LC_ALL
source=${KEL_SOURCE_DIR:-${srcdir:-.}}
CC=${KEL_CC:-cc}
DEPENDENCIES=${KEL_CORE_LIBS:--ljansson -lnettle}
folder=$(mktemp -d) || exit 99
trap 'rm -rf "$folder"' EXIT

skip() {
    echo "1..0 # SKIP $1"
    exit 77
}

# Some kernels place memory where the sanitizer does not expect it; without random places it works.
cat >"$folder/try.c" <<'END'
#include <pthread.h>
static void *f(void *p) { return p; }
int main(void) { pthread_t t; return pthread_create(&t, 0, f, 0) || pthread_join(t, 0); }
END
$CC -fsanitize=thread "$folder/try.c" -o "$folder/try" -lpthread >"$folder/log" 2>&1 ||
    skip "$CC has no thread sanitizer"
run=
"$folder/try" >"$folder/log" 2>&1 || {
    run="setarch $(uname -m) -R"
    $run "$folder/try" >"$folder/log" 2>&1 || skip "the thread sanitizer does not run here"
}

echo "1..2"
# shellcheck disable=SC2086
if ! $CC -std=gnu17 -D_GNU_SOURCE -ffp-contract=off -O1 -g -fsanitize=thread \
    -I"$source/lib/include" -I"$source/lib/core" "$source"/lib/core/*.c "$source/tests/faults/threads.c" \
    $DEPENDENCIES -lm -lpthread -o "$folder/threads" >"$folder/log" 2>&1
then
    sed 's/^/# /' "$folder/log"
    echo "not ok 1 threads.c and libkelspan under the thread sanitizer: they do not compile"
    exit 1
fi

failed=0
n=0
for record in good-record.json good-record-modes.json; do
    n=$((n + 1))
    if TSAN_OPTIONS="halt_on_error=1 exitcode=66" $run "$folder/threads" "$source/tests/data/$record" \
        >"$folder/log" 2>&1
    then
        echo "ok $n $record: $(tail -n 1 "$folder/log")"
    else
        failed=1
        sed 's/^/# /' "$folder/log"
        echo "not ok $n $record"
    fi
done
exit $failed

#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# Runs fuzz targets that were built with libFuzzer, one after the other:
#
#     run.sh -c COMPILER                          is the compiler there, with libFuzzer? Says how to get it if not
#     run.sh SOURCE BUILD SECONDS TARGET...       BUILD/fuzz_TARGET for SECONDS each
#
# The corpus grows in BUILD/corpus/TARGET; it starts with the committed one and with the files of tests/data of the
# target's kind, which the target itself knows and are listed here a second time. What was found stands in
# BUILD/found-TARGET-*: reproduce with BUILD/fuzz_TARGET FILE, mend, and keep the file in tests/fuzz/corpus/TARGET.
# Prints executions, edges and features of each; status 1 if something was found.
set -eu

if test "$1" = -c; then
    folder=$(mktemp -d)
    trap 'rm -rf "$folder"' EXIT
    printf 'int LLVMFuzzerTestOneInput(const char *d, unsigned long n);\nint LLVMFuzzerTestOneInput(const char *d, %s\n' \
        'unsigned long n) { return d == 0 && n == 1; }' >"$folder/probe.c"
    "$2" -fsanitize=fuzzer,address,undefined -o "$folder/probe" "$folder/probe.c" >"$folder/log" 2>&1 && exit 0
    echo "make fuzz needs clang with libFuzzer (Debian: apt-get install clang-14 libclang-rt-14-dev);" \
        "another one is named by FUZZ_CC=COMPILER" >&2
    exit 1
fi

source=$1 build=$2 seconds=$3
shift 3
KEL_SOURCE_DIR=$(cd "$source" && pwd) OPENBLAS_NUM_THREADS=1
ASAN_OPTIONS=detect_leaks=1:allocator_may_return_null=1 UBSAN_OPTIONS=print_stacktrace=1
export KEL_SOURCE_DIR OPENBLAS_NUM_THREADS ASAN_OPTIONS UBSAN_OPTIONS
bad=0

for target; do
    case $target in
    table) seeds="$source/tests/data/*-*.csv $source/tests/data/odd-*.txt $source/datasets/*.csv" ;;
    coefficients) seeds="$source/tests/data/*-coefficients-*.csv $source/datasets/latch.csv" ;;
    record) seeds="$source/tests/data/*-record*.json" ;;
    *) seeds= ;;
    esac
    mkdir -p "$build/corpus/$target"
    for file in "$source/tests/fuzz/corpus/$target"/* $seeds; do
        test ! -f "$file" || cp "$file" "$build/corpus/$target/"
    done
    words=
    test ! -f "$source/tests/fuzz/$target.words" || words=-dict=$source/tests/fuzz/$target.words
    # NUL inside a word would be lost in a shell variable, so the options are few and plain.
    status=0
    "$build/fuzz_$target" -max_total_time="$seconds" -timeout=20 -rss_limit_mb=2048 -max_len=16384 -print_final_stats=1 \
        $words -artifact_prefix="$build/found-$target-" "$build/corpus/$target" >"$build/$target.log" 2>&1 || status=$?
    awk -v target="$target" -v status="$status" '
        / cov: / { for (i = 1; i < NF; i++) { if ($i == "cov:") edges = $(i + 1); if ($i == "ft:") features = $(i + 1) } }
        /^stat::number_of_executed_units/ { runs = $2 }
        END {
            printf "%-13s %10d executions, %6d edges, %6d features: %s\n", target, runs, edges, features,
                   status == 0 ? "nothing found" : "FOUND, see the log"
        }' "$build/$target.log"
    test "$status" -eq 0 || { bad=1; tail -n 40 "$build/$target.log"; }
done
exit $bad

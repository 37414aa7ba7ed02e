#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# Runs the programs given, and calls of the tool, under valgrind: an error or a block that is definitely lost fails. Prints
# TAP. Check's tests are processes of their own, each of which is looked at; KELSPAN names the tool.
set -u
LC_ALL=C
export LC_ALL
source=${KEL_SOURCE_DIR:-${srcdir:-.}}
folder=$(mktemp -d) || exit 99
trap 'rm -rf "$folder"' EXIT

command -v valgrind >/dev/null || {
    echo "1..0 # SKIP valgrind is not installed"
    exit 0
}
CK_DEFAULT_TIMEOUT=1800
export CK_DEFAULT_TIMEOUT

count=0
failed=0
# one STATUS NAME COMMAND...: runs it; the status is what the command gives by itself.
one() {
    want=$1
    name=$2
    shift 2
    count=$((count + 1))
    valgrind -q --error-exitcode=99 --leak-check=full --show-leak-kinds=definite --errors-for-leak-kinds=definite \
        --log-file="$folder/log.%p" "$@" >"$folder/out" 2>&1
    status=$?
    cat "$folder"/log.* >"$folder/all"
    rm -f "$folder"/log.*
    if test $status -eq "$want" && test ! -s "$folder/all"; then
        echo "ok $count $name"
    else
        failed=1
        echo "not ok $count $name: status $status"
        cat "$folder/out" "$folder/all" | head -n 100 | sed 's/^/# /'
    fi
}

if test -x "${KELSPAN:-}"; then
    data=$source/tests/data
    r=$folder/r.json
    one 0 "fit" "$KELSPAN" fit "$data/good-uncertainty.csv" "$data/good-transition.csv" --degree 1 -o "$r"
    one 0 "fit, degree auto" "$KELSPAN" fit "$data/good-coefficient.csv" --candidates --json
    one 1 "fit, refused" "$KELSPAN" fit "$data/bad-unknown-unit.csv"
    one 0 "read" "$KELSPAN" read "$data/good-code-table.csv" --as csv
    one 0 "read, transposed" "$KELSPAN" read "$data/odd-transposed.csv" --transpose
    one 0 "adopt" "$KELSPAN" adopt "$data/good-coefficients-expansion-three-pieces.csv" -o "$folder/a.json"
    one 0 "show" "$KELSPAN" show "$r" --powers
    one 0 "residuals" "$KELSPAN" residuals "$r"
    one 0 "value" "$KELSPAN" value "$r" 100K 200K --accept extrapolated,gap,transition
    one 3 "integrate" "$KELSPAN" integrate "$r" --from 100K --to 350K --length 1m
    one 0 "tabulate" "$KELSPAN" tabulate "$r" --from 100K --to 200K --step 10K --csv --accept extrapolated,gap
    one 1 "a changed record" "$KELSPAN" value "$data/bad-record-digest.json" 100K
    one 2 "wrong usage" "$KELSPAN" value "$r" 100
fi
for program; do
    one 0 "$program" "./$program"
done
echo "1..$count"
exit $failed

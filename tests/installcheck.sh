#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# What was installed, used as a stranger would: builds man/examples by pkg-config, runs them on a record, and looks at what
# an evaluator loads. Called by make installcheck:
#
#     tests/installcheck.sh SOURCE-TREE
#
# Environment: DESTDIR (may be empty), libdir, bindir, pkgconfigdir as configured (or PREFIX alone for the usual ones below it);
# CC; CFLAGS as far as the link needs them (-fsanitize=...). Prints TAP. Where libkelspan-fit was not installed, what needs it is skipped.
# shellcheck disable=SC2317 # functions are called by way of expect
set -u
source=$(cd "${1:-${srcdir:-.}}" && pwd) || exit 99
DESTDIR=${DESTDIR:-}
prefix=${PREFIX:-${prefix:-/usr/local}}
libdir=$DESTDIR${libdir:-$prefix/lib}
bindir=$DESTDIR${bindir:-$prefix/bin}
pkgconfigdir=$DESTDIR${pkgconfigdir:-$prefix/lib/pkgconfig}
CC=${CC:-cc}
record=$source/tests/data/good-mirror.json

work=$(mktemp -d) || exit 99
trap 'rm -rf "$work"' EXIT
cd "$work" || exit 99
PKG_CONFIG_PATH=$pkgconfigdir
export PKG_CONFIG_PATH
# With a DESTDIR the paths in the .pc files lie below it.
if test -n "$DESTDIR"; then
    PKG_CONFIG_SYSROOT_DIR=$DESTDIR
    export PKG_CONFIG_SYSROOT_DIR
fi
LD_LIBRARY_PATH=$libdir${LD_LIBRARY_PATH:+:$LD_LIBRARY_PATH}
export LD_LIBRARY_PATH

count=0
broken=0
# Runs a command; what it says is shown if it fails or ends with another status than expected.
expect() {
    expected=$1 title=$2
    shift 2
    count=$((count + 1))
    status=0
    "$@" >out 2>&1 || status=$?
    if test "$status" -eq "$expected"; then
        echo "ok $count - $title"
    else
        echo "not ok $count - $title (status $status instead of $expected)"
        sed 's/^/# /' out
        broken=1
    fi
}
# Does the last command's answer hold these words?
answered() {
    count=$((count + 1))
    if grep -qF -e "$1" out; then
        echo "ok $count - it says: $1"
    else
        echo "not ok $count - it says: $1"
        sed 's/^/# /' out
        broken=1
    fi
}
skip() {
    count=$((count + 1))
    echo "ok $count - $1 # SKIP libkelspan-fit was not installed"
}

compile() {
    # shellcheck disable=SC2046,SC2086 # flags are words
    $CC -std=c17 ${CFLAGS:-} -o "$1" "$source/man/examples/$1.c" $(pkg-config --cflags --libs "$2") -lm
}
# Fails if a library in the list that the loader gives matches the expression.
loads_none() {
    ldd "$1" || return 1
    ! ldd "$1" | grep -E "$2"
}

expect 0 "pkg-config knows libkelspan" pkg-config --exists --print-errors libkelspan
expect 0 "01-evaluate builds" compile 01-evaluate libkelspan
expect 0 "02-integrate-array builds" compile 02-integrate-array libkelspan
expect 0 "an evaluator loads libkelspan" sh -c 'ldd 01-evaluate && ldd 01-evaluate | grep -q libkelspan.so'
expect 0 "an evaluator loads neither GSL nor LAPACK nor libcsv" loads_none ./01-evaluate 'gsl|lapack|blas|libcsv|libkelspan-fit'
expect 0 "the array evaluator neither" loads_none ./02-integrate-array 'gsl|lapack|blas|libcsv|libkelspan-fit'

if pkg-config --exists libkelspan-fit; then
    expect 0 "03-fit-arrays builds" compile 03-fit-arrays libkelspan-fit
    expect 0 "03-fit-arrays runs" ./03-fit-arrays fitted.json
    answered "11 observations"
    record=fitted.json
    expect 0 "the installed tool fits a table" "$bindir/kelspan" fit --quiet "$source/datasets/spacer.csv" -o spacer.json
    expect 0 "01-evaluate reads the tool's record" ./01-evaluate spacer.json 77K 20degC
else
    skip "03-fit-arrays builds"
    skip "03-fit-arrays runs"
    skip "it says: 11 observations"
    skip "the installed tool fits a table"
    skip "01-evaluate reads the tool's record"
fi

expect 0 "01-evaluate runs" ./01-evaluate "$record" 100K 20degC
answered "expansion"
expect 3 "01-evaluate flags an extrapolation" ./01-evaluate "$record" 1K
answered "extrapolated"
expect 0 "02-integrate-array runs" ./02-integrate-array "$record"
expect 1 "a record that is not there is an error" ./01-evaluate nowhere.json 77K

echo "1..$count"
exit $broken

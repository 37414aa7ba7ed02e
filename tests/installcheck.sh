#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# What was installed, used as a stranger would: builds man/examples by pkg-config, runs them on a record, and looks at
# what an evaluator loads. Called by make installcheck:
#
#     tests/installcheck.sh SOURCE-TREE
#
# Environment: DESTDIR (may be empty), libdir, bindir, pkgconfigdir as configured (or PREFIX alone for the usual ones
# below it); CC; CFLAGS as far as the link needs them (-fsanitize=...). Prints TAP. Where libkelspan-fit was not
# installed, what needs it is skipped.
# shellcheck disable=SC2317 # functions are called by way of expect
set -u
source=$(cd "${1:-${srcdir:-.}}" && pwd) || exit 99
DESTDIR=${DESTDIR:-}
prefix=${PREFIX:-${prefix:-/usr/local}}
libdir=$DESTDIR${libdir:-$prefix/lib}
bindir=$DESTDIR${bindir:-$prefix/bin}
pkgconfigdir=$DESTDIR${pkgconfigdir:-$prefix/lib/pkgconfig}
CC=${CC:-cc}

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

# Builds a program from its one source with what pkg-config says of a library.
compile() {
    # shellcheck disable=SC2046,SC2086 # flags are words
    $CC -std=c17 ${CFLAGS:-} -o "$(basename "$1" .c)" "$source/$1" $(pkg-config --cflags --libs "$2") -lm
}
heavy='gsl|lapack|blas|libcsv|libkelspan-fit'
# Fails if a library in the list that the loader gives matches the expression.
loads_none() {
    ldd "$1" || return 1
    ! ldd "$1" | grep -E "$2"
}

expect 0 "pkg-config knows libkelspan" pkg-config --exists --print-errors libkelspan
expect 0 "01-evaluate builds" compile man/examples/01-evaluate.c libkelspan
expect 0 "02-integrate-array builds" compile man/examples/02-integrate-array.c libkelspan
expect 0 "an evaluator loads libkelspan" sh -c 'ldd 01-evaluate && ldd 01-evaluate | grep -q libkelspan.so'
expect 0 "an evaluator loads neither GSL nor LAPACK nor libcsv" loads_none ./01-evaluate "$heavy"
expect 0 "the array evaluator neither" loads_none ./02-integrate-array "$heavy"

# A line through 10e-6/K at 190 K, with 1 %.
expect 0 "a record can be built" compile tests/support/make_record.c libkelspan
expect 0 "and saved" ./make_record line.json
expect 0 "01-evaluate runs" ./01-evaluate line.json 190K 20degC
answered "coefficient 10 1e-6/K, u 0.1 1e-6/K"
answered "expansion   0 ppm"
expect 3 "01-evaluate flags an extrapolation" ./01-evaluate line.json 1K
answered "extrapolated"
expect 0 "02-integrate-array runs" ./02-integrate-array line.json
answered "1000 elements"
expect 1 "a record that is not there is an error" ./01-evaluate nowhere.json 77K

if pkg-config --exists libkelspan-fit; then
    expect 0 "03-fit-arrays builds" compile man/examples/03-fit-arrays.c libkelspan-fit
    expect 0 "03-fit-arrays runs" ./03-fit-arrays fitted.json
    answered "11 observations"
    expect 0 "01-evaluate reads that record" ./01-evaluate fitted.json 100K
    table=$source/datasets/spacer.csv
    expect 0 "the installed tool fits a table" "$bindir/kelspan" fit --quiet "$table" -o spacer.json
    expect 0 "01-evaluate reads the tool's record" ./01-evaluate spacer.json 77K 20degC
else
    skip "03-fit-arrays builds"
    skip "03-fit-arrays runs"
    skip "it says: 11 observations"
    skip "01-evaluate reads that record"
    skip "the installed tool fits a table"
    skip "01-evaluate reads the tool's record"
fi

echo "1..$count"
exit $broken

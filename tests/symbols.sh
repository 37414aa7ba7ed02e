#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# The exported symbols, checked both ways: what the public headers declare with KEL_API, what the version map lists and what the built
# library defines must be the same names. Prints TAP.
set -u
source=${KEL_SOURCE_DIR:-.}
build=${KEL_BUILD_DIR:-.}
work=$(mktemp -d) || exit 99
trap 'rm -rf "$work"' EXIT

# Functions that headers declare: the last word before the first bracket behind each KEL_API.
declared() {
    cat "$@" | tr '\n' ' ' | grep -oE 'KEL_API [^;(]*\(' | grep -oE 'kel_[a-z0-9_]+\($' | tr -d '(' | LC_ALL=C sort -u
}
listed() {
    sed -n 's/^ *\(kel_[a-z0-9_]*\);$/\1/p' "$1" | LC_ALL=C sort -u
}
defined() {
    nm -D --defined-only "$1" | awk '$2 ~ /^[TDBRWV]$/ { sub(/@.*/, "", $3); if ($3 ~ /^kel/) print $3 }' | LC_ALL=C sort -u
}

broken=0
same() {
    if diff "$2" "$3" >"$work/diff"; then
        echo "ok $1"
    else
        echo "not ok $1"
        sed 's/^/# /' "$work/diff"
        broken=1
    fi
}

echo "1..4"
headers=$source/lib/include/kelspan
(cd "$headers" && declared answer.h arena.h record.h status.h text.h unit.h) >"$work/core.declared"
(cd "$headers" && declared coefficients.h fit.h leastsquares.h rows.h table.h) >"$work/fit.declared"
listed "$source/lib/core/libkelspan.map" >"$work/core.listed"
listed "$source/lib/fit/libkelspan-fit.map" >"$work/fit.listed"
defined "$build/.libs/libkelspan.so" >"$work/core.defined"
defined "$build/.libs/libkelspan-fit.so" >"$work/fit.defined"
same "1 - libkelspan: headers and map" "$work/core.declared" "$work/core.listed"
same "2 - libkelspan: map and library" "$work/core.listed" "$work/core.defined"
same "3 - libkelspan-fit: headers and map" "$work/fit.declared" "$work/fit.listed"
same "4 - libkelspan-fit: map and library" "$work/fit.listed" "$work/fit.defined"
exit $broken

#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# The examples of the manual pages, run: what a page shows is what the program prints. Numbers are compared to 1e-9 of their
# size (the last digits of a fit depend on the machine's linear algebra), everything else as text.
load common

man() { echo "${KEL_SOURCE_DIR:-$here/../..}/man/$1"; }

# A page's text as it is meant: without the escapes of its source.
plain() { sed -e 's/^\\&//' -e 's/\\e/\\/g' "$1"; }

# The block behind the line that names rod.csv in the overview, and that of glass.csv and pairs.csv where they are shown.
files() {
    plain "$(man kelspan.1)" | awk '/^\.Pa rod\.csv/ { getline; on = 1; next } on && /^\.Ed/ { exit } on' >rod.csv
    plain "$(man kelspan-adopt.1)" | awk '/^\$ cat glass/ { on = 1; next } on && (/^\$ / || /^\.Ed/) { exit } on' >glass.csv
    plain "$(man kelspan-integrate.1)" | awk '/^\$ cat pairs/ { on = 1; next } on && (/^\$ / || /^\.Ed/) { exit } on' >pairs.csv
    test -s rod.csv && test -s glass.csv && test -s pairs.csv
    kel 0 fit rod.csv -o rod.json --quiet
}

# Runs the commands behind '$ ' in a page's literal blocks, and prints them with what they say, as the page does.
played() {
    plain "$1" | awk '/^\.Bd -literal/ { in_block = 1; next } /^\.Ed/ { in_block = 0 } in_block && /^\$ / { print substr($0, 3) }' |
        while read -r line; do
            printf '$ %s\n' "$line"
            case $line in
            "kelspan "*) sh -c "'$KELSPAN' ${line#kelspan }" 2>&1 || : ;;
            "cat "*) sh -c "$line" ;;
            *) echo "a page's example runs something else" ;;
            esac
        done
}

shown() {
    plain "$1" | awk '/^\.Bd -literal/ { block = 1; first = 1; next } /^\.Ed/ { block = 0 }
        block && first { show = /^\$ /; first = 0 } block && show'
}

agree() {
    awk '
        function number(s) { return s ~ /^[-+]?[0-9]+(\.[0-9]+)?([eE][-+]?[0-9]+)?$/ }
        NR == FNR { want[FNR] = $0; n = FNR; next }
        {
            m = FNR
            k = split(want[FNR], a, /[ ,:;%()\/]+/); l = split($0, b, /[ ,:;%()\/]+/)
            good = k == l
            for (i = 1; i <= k && good; i++) {
                if (a[i] == b[i]) continue
                d = a[i] - b[i]; if (d < 0) d = -d
                s = a[i] < 0 ? -a[i] : a[i] + 0
                good = number(a[i]) && number(b[i]) && d <= 1e-9 * s
            }
            if (!good) { print "line " FNR ": the page shows"; print "  " want[FNR]; print "the program prints"; print "  " $0; bad = 1; exit }
        }
        END { if (!bad && m != n) { print m " lines, the page shows " n; bad = 1 } exit bad }' "$1" "$2"
}

page() {
    files
    shown "$(man "$1")" >want
    played "$(man "$1")" >got
    test -s want
    agree want got
}

@test "kelspan(1)" { page kelspan.1; }
@test "kelspan-read(1)" { page kelspan-read.1; }
@test "kelspan-fit(1)" { page kelspan-fit.1; }
@test "kelspan-adopt(1)" { page kelspan-adopt.1; }
@test "kelspan-show(1)" { page kelspan-show.1; }
@test "kelspan-residuals(1)" { page kelspan-residuals.1; }
@test "kelspan-value(1)" { page kelspan-value.1; }
@test "kelspan-integrate(1)" { page kelspan-integrate.1; }
@test "kelspan-tabulate(1)" { page kelspan-tabulate.1; }

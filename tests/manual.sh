#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# The manual, checked against itself and against the tool. Argument: the source tree. KELSPAN names the program;
# without it, or where it was not built, the tests that need it are skipped. Prints TAP.
#
# Exception to the lint: it looks for pages that are referred to among the installed ones. Ours need not be installed
# yet, so for them the tests look into man/ instead.
set -u
LC_ALL=C
export LC_ALL
kelspan=${KELSPAN:-./tools/kelspan}
case $kelspan in /*) ;; *) kelspan=$PWD/$kelspan ;; esac
cd "${1:-${srcdir:-.}}" || exit 99
command -v mandoc >/dev/null || { echo "1..0 # SKIP no mandoc"; exit 77; }

count=0
broken=0
offences=$(mktemp) || exit 99
trap 'rm -f "$offences"' EXIT

# Reports the offences that were collected as one test, and starts the next collection.
verdict() {
    count=$((count + 1))
    if test -s "$offences"; then
        echo "not ok $count - $1"
        sed 's/^/# /' "$offences"
        broken=1
    else
        echo "ok $count - $1"
    fi
    : >"$offences"
}

skip() {
    count=$((count + 1))
    echo "ok $count - $1 # SKIP $2"
}

# A page as plain text in long lines, without overstrikes.
text() { mandoc -T ascii -O width=1000 "$1" | sed 's/.\x08//g'; }

for page in man/*.[1-9]; do
    mandoc -T lint -W style "$page" 2>&1 |
        grep -vE 'STYLE: referenced manual not found: Xr (lib)?kelspan[a-z-]* [135]( |$)' >>"$offences"
    verdict "$page is clean"

    grep -E '^\.Xr (lib)?kelspan' "$page" | sort -u | while read -r _ name section _; do
        test -e "man/$name.$section" || echo "$page refers to $name($section), which is not there"
    done >>"$offences"
    name=$(basename "${page%.*}")
    grep -qi "^\.Dt $name ${page##*.}\$" "$page" || echo "$page: its .Dt line names another page" >>"$offences"
    verdict "$page refers to pages that exist"
done

# Every public function is named by a page, or belongs to a family that a page names.
grep -hoE '\bkel_[a-z_]+\(' lib/include/kelspan/*.h | tr -d '(' | sort -u |
    grep -vE '^kel_(text|json|arena|digest|error|file|number)_|_name$' | while read -r function; do
    cat man/libkelspan.3 man/libkelspan-fit.3 | grep -qw "$function" || echo "no page names $function"
done >>"$offences"
verdict "every function of the headers is in a page"

if ! test -x "$kelspan"; then
    skip "the commands have their pages" "the tool was not built"
    echo "1..$count"
    exit $broken
fi

# Commands stand indented in the answer of help, each as the first word of its line.
commands=$("$kelspan" help | sed -nE 's/^  +([a-z]+)  .*/\1/p')
test -n "$commands" || echo "kelspan help lists no command" >>"$offences"
overview=$(text man/kelspan.1)
for command in $commands; do
    test "$command" = help && continue
    test -e "man/kelspan-$command.1" || echo "no man/kelspan-$command.1" >>"$offences"
    case $overview in *"$command"*) ;; *) echo "kelspan.1 does not name $command" >>"$offences" ;; esac
done
for page in man/kelspan-*.1; do
    command=${page#man/kelspan-}
    case " $(echo "$commands" | tr '\n' ' ') " in
    *" ${command%.1} "*) ;;
    *) echo "$page describes no command of kelspan help" >>"$offences" ;;
    esac
done
verdict "each command has a page and each page a command"

for command in $commands; do
    test "$command" = help && continue
    test -e "man/kelspan-$command.1" || continue
    page=$(text "man/kelspan-$command.1")
    "$kelspan" help "$command" >/dev/null 2>&1 || echo "kelspan help $command fails" >>"$offences"
    shown=$("$kelspan" help "$command" | grep -oE -e '--[a-z][a-z-]*' | sort -u)
    for option in $shown; do
        # General options are described once, in kelspan(1).
        printf '%s\n%s\n' "$page" "$overview" | grep -qE -e "(^|[^a-z-])$option([^a-z-]|\$)" ||
            echo "kelspan-$command.1 lacks $option" >>"$offences"
    done
    # And none that the command does not know.
    sed -nE 's/^\.It Fl -([a-z][a-z-]*).*/--\1/p' "man/kelspan-$command.1" | sort -u | while read -r option; do
        echo "$shown" | grep -qx -e "$option" || echo "kelspan-$command.1 describes $option, which help does not show"
    done >>"$offences"
    verdict "kelspan $command: options of help and page agree"
done

echo "1..$count"
exit $broken

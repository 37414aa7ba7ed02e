#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# The law of dependency and the manners of the libraries, checked from the sources. Argument: the source tree. Prints
# TAP.
#
#     tools    -> public headers, their own headers, the C library
#     lib/fit  -> public headers, its own internal headers, the C library, GSL, LAPACKE, libcsv
#     lib/core -> public headers of its own library, its own internal headers, the C library, jansson, nettle
set -u
LC_ALL=C
export LC_ALL
cd "${1:-${srcdir:-.}}" || exit 99

count=0
broken=0
offences=$(mktemp) || exit 99
trap 'rm -f "$offences"' EXIT

# Reports the offences that were collected as one test, and starts the next collection.
verdict() {
    count=$((count + 1))
    if test -s "$offences"; then
        echo "not ok $count $1"
        sed 's/^/# /' "$offences"
        broken=1
    else
        echo "ok $count $1"
    fi
    : >"$offences"
}

# FILE:LINE:TARGET for each include in the files given; TARGET keeps its brackets or quotes.
includes() {
    grep -HnE '^[[:space:]]*#[[:space:]]*include' "$@" /dev/null |
        sed -E 's/^([^:]*:[0-9]+):[[:space:]]*#[[:space:]]*include[[:space:]]*([<"][^>"]*[>"]).*/\1:\2/'
}

# A C source without its comments and without what stands in quotes, its lines kept.
bare() {
    sed -E 's/"([^"\\]|\\.)*"/""/g; s@//.*$@@' "$1" | awk '
        {
            line = $0; out = ""
            while (line != "") {
                if (inside) {
                    end = index(line, "*/")
                    if (!end) break
                    line = substr(line, end + 2); inside = 0
                } else {
                    start = index(line, "/*")
                    if (!start) { out = out line; break }
                    out = out substr(line, 1, start - 1); line = substr(line, start + 2); inside = 1
                }
            }
            print out
        }'
}

core_public="kelspan.h kelspan/status.h kelspan/arena.h kelspan/text.h kelspan/unit.h kelspan/record.h kelspan/answer.h"
third='^<(gsl/|lapacke|cblas|csv\.h|jansson|nettle/|check\.h)'

core=$(find lib/core -name '*.[ch]' | sort)
fit=$(find lib/fit -name '*.[ch]' 2>/dev/null | sort)
tools=$(find tools -name '*.[ch]' 2>/dev/null | sort)
public=$(find lib/include -name '*.h' | sort)
libraries=$(find lib/core lib/fit -name '*.[ch]' 2>/dev/null | sort)

echo "1..15"

# ---- who may include what ----

for f in $core; do
    includes "$f" | while IFS=: read -r file line target; do
        name=$(printf '%s' "$target" | tr -d '<>"')
        case $target in
        '<kelspan'*)
            case " $core_public " in
            *" $name "*) ;;
            *) echo "$file:$line: $target is no header of libkelspan" ;;
            esac ;;
        '<jansson.h>' | '<nettle/'*) ;;
        '<'*)
            if printf '%s' "$target" | grep -qE "$third"; then echo "$file:$line: $target"; fi ;;
        '"config.h"') ;;
        *) test -e "lib/core/$name" || echo "$file:$line: $target is not in lib/core" ;;
        esac
    done
done >>"$offences"
verdict "lib/core includes nothing of libkelspan-fit, GSL, LAPACKE or libcsv"

for f in $fit; do
    includes "$f" | while IFS=: read -r file line target; do
        name=$(printf '%s' "$target" | tr -d '<>"')
        case $target in
        '<jansson.h>' | '<nettle/'* | '<check.h>') echo "$file:$line: $target" ;;
        '<'*) ;;
        '"config.h"') ;;
        *) test -e "lib/fit/$name" || echo "$file:$line: $target is not in lib/fit" ;;
        esac
    done
done >>"$offences"
verdict "lib/fit includes no internal header of lib/core, and neither jansson nor nettle"

# gsl_errno.h is there for main alone, which switches the aborting handler off.
for f in $tools; do
    includes "$f" | while IFS=: read -r file line target; do
        name=$(printf '%s' "$target" | tr -d '<>"')
        case $target in
        '<gsl/gsl_errno.h>') test "$file" = tools/main.c || echo "$file:$line: $target belongs to tools/main.c" ;;
        '<'*) if printf '%s' "$target" | grep -qE "$third"; then echo "$file:$line: $target"; fi ;;
        '"config.h"') ;;
        *) test -e "tools/$name" || echo "$file:$line: $target is not in tools" ;;
        esac
    done
done >>"$offences"
verdict "tools include public headers and their own only"

for f in $public; do
    includes "$f" | while IFS=: read -r file line target; do
        case $target in
        '<kelspan'*) test -e "lib/include/$(printf '%s' "$target" | tr -d '<>')" || echo "$file:$line: $target" ;;
        '<'*/*) echo "$file:$line: $target" ;;
        '<'*) if printf '%s' "$target" | grep -qE "$third"; then echo "$file:$line: $target"; fi ;;
        *) echo "$file:$line: $target is not in angle brackets" ;;
        esac
    done
done >>"$offences"
for name in $core_public; do
    includes "lib/include/$name" | while IFS=: read -r file line target; do
        case $target in
        '<kelspan'*)
            case " $core_public " in
            *" $(printf '%s' "$target" | tr -d '<>') "*) ;;
            *) echo "$file:$line: $target is a header of libkelspan-fit" ;;
            esac ;;
        esac
    done
done >>"$offences"
verdict "public headers include the C library and each other only, and those of libkelspan none of libkelspan-fit"

# One .c file a third-party header, so that each has one place where it is used and could be exchanged.
for f in $libraries $tools; do
    includes "$f"
done | awk -F: -v third="$third" '
    $3 ~ third {
        if ($1 ~ /\.h$/) print $1 ":" $2 ": " $3 " in a header"
        else if (!(($3, $1) in seen)) { seen[$3, $1] = 1; files[$3] = files[$3] " " $1; n[$3]++ }
    }
    END { for (h in n) if (n[h] > 1) print h " is included by" files[h] }' | sort >>"$offences"
verdict "each third-party header is included by one .c file"

# ---- manners of a library ----

# Collects the lines of code in the libraries that match an expression.
forbid() {
    for f in $libraries; do
        bare "$f" | grep -nE "$1" | sed "s@^@$f:@"
    done >>"$offences"
}
# The same for calls of functions, whose names stand between bars. A member of that name is something else.
forbid_calls() { forbid "(^|[^A-Za-z0-9_.>])($1)[[:space:]]*\("; }

forbid_calls 'exit|_exit|quick_exit|abort|raise|signal|atexit'
verdict "libraries neither exit nor abort"
forbid_calls 'printf|fprintf|vprintf|vfprintf|puts|putchar|perror|dprintf'
forbid '(^|[^A-Za-z0-9_])(stdout|stderr)([^A-Za-z0-9_]|$)'
verdict "libraries print nothing"
forbid_calls 'getenv|secure_getenv|setenv|putenv|setlocale|system|popen|rand|srand|strtok|localtime|gmtime'
verdict "libraries look at no environment and change no state of the process"
forbid '^[[:space:]]*static[[:space:]]+[^(=;]*(=[^=]|;)'
# No state: what is const itself, a pointer that is const, a table of a const struct. A declared function has a
# bracket first.
sed -E -i -e '/:[[:space:]]*static[[:space:]]+const[[:space:]][^*=]*(=|;)/d' -e '/\*[[:space:]]*const[[:space:]]/d' \
    -e '/:[[:space:]]*static[[:space:]]+const[[:space:]]+struct/d' "$offences"
verdict "libraries hold no static mutable state"

# Numbers through printf follow the locale.
for f in $libraries; do
    awk '/^[[:space:]]*(\/\*|\*|\/\/)/ { next }
        /"[^"]*%[-+ #0-9.*]*[aefgAEFG][^"]*"/ { print FILENAME ":" FNR ": " $0 }' "$f"
done >>"$offences"
forbid_calls 'strtod|atof|sscanf|fscanf|strtof|strtold'
verdict "libraries read and write no number by way of the locale"

# Error-free sums and products are not what they say once a compiler may rearrange or contract them. Refused by the
# sources themselves, and asked for by no build file.
for f in lib/core/core.h lib/fit/problem.h lib/fit/twofold.h; do
    test -e "$f" || continue
    awk '/^#if defined __FAST_MATH__/ { guard = 1; next } guard && /^#error/ { found = 1 } { guard = 0 }
        END { exit !found }' "$f" || echo "$f does not refuse -ffast-math"
done >>"$offences"
grep -nE -e '-(Ofast|ffast-math|funsafe-math-optimizations|fassociative-math|freciprocal-math|ffinite-math-only)' \
    configure.ac Makefile.am $(find lib tools tests -name '*.am') >>"$offences"
if test -d lib/fit && command -v "${CC:-cc}" >/dev/null 2>&1; then
    "${CC:-cc}" -std=gnu17 -D_GNU_SOURCE -ffast-math -fsyntax-only -Ilib/include -Ilib/fit lib/fit/refine.c 2>/dev/null &&
        echo "lib/fit/refine.c compiles with -ffast-math" >>"$offences"
fi
verdict "no fast-math: arithmetic is IEEE's"

# ---- the house ----

{
    find lib tools tests man bootstrap .ci datasets configure.ac Makefile.am -type f \( -name '*.[ch]' -o -name '*.sh' \
        -o -name '*.bats' -o -name '*.bash' -o -name '*.[1-9]' -o -name '*.am' -o -name '*.ac' \
        -o -name bootstrap -o -name run -o -name '*.map' -o -name '*.sym' \) 2>/dev/null
    echo tests/sum-results
} | sort -u | while read -r f; do
    head -n 5 "$f" | grep -qE 'SPDX-License-Identifier: (Apache-2\.0|GPL-3\.0-or-later)' ||
        echo "$f has no SPDX line at its top"
done >>"$offences"
verdict "every source, script and manual page has its SPDX line"

# What a program that links libkelspan alone gets must not bring terms of the GPL.
{
    for f in $core $(find man/examples -name '0[12]-*.c') $(for h in $core_public; do echo "lib/include/$h"; done); do
        head -n 3 "$f" | grep -q 'SPDX-License-Identifier: Apache-2.0' || echo "$f should be Apache-2.0"
    done
    for f in $fit $tools; do
        head -n 3 "$f" | grep -q 'SPDX-License-Identifier: GPL-3.0-or-later' || echo "$f should be GPL-3.0-or-later"
    done
} >>"$offences"
verdict "licences follow the libraries"

# The same name in both libraries or in the tool would make a message or a comment ambiguous.
find lib/core lib/fit tools -name '*.c' 2>/dev/null | sed 's@.*/@@' | sort | uniq -d >>"$offences"
verdict "names of C files are unique"

# The version stands in two places, because a program that is compiled against the headers has no configure.
declared=$(sed -nE 's/^AC_INIT\(\[kelspan\], \[([^]]*)\].*/\1/p' configure.ac)
defined=$(sed -nE 's/^#define KEL_VERSION "([^"]*)".*/\1/p' lib/include/kelspan/status.h)
test -n "$declared" && test "$declared" = "$defined" ||
    echo "configure.ac says '$declared', kelspan/status.h says '$defined'" >>"$offences"
grep -qF "## $declared" NEWS.md || echo "NEWS.md has no heading for $declared" >>"$offences"
verdict "one version everywhere"

exit $broken

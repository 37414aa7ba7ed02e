#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# Line and branch coverage of the libraries and the tool, a line for each source file and one for all, from what the tests
# left in a tree that was configured with --enable-coverage:    coverage.sh [--missing] SOURCE
#
# A branch counts as taken when it was gone at least once; what any of a file's objects reached is reached. --missing
# lists the lines that were never reached, with their text. Run in the build tree; files outside the source tree, tests
# and headers are passed over.
set -u
LC_ALL=C
export LC_ALL
missing=
if test "${1:-}" = --missing; then
    missing=yes
    shift
fi
source=$(cd "${1:-.}" && pwd) || exit 2
gcov=${GCOV:-gcov}
command -v "$gcov" >/dev/null || { echo "coverage: $gcov is not installed" >&2; exit 1; }
build=$(pwd)
folder=$(mktemp -d) || exit 99
trap 'rm -rf "$folder"' EXIT

# gcov -t prints the source with counts: "count:line:text", "#####" where nothing came, "-" where there is no code,
# and below it "branch N taken COUNT" or "never executed".
find "$build/lib" "$build/tools" -name '*.gcda' | LC_ALL=C sort | while IFS= read -r data; do
    (cd "$build" && "$gcov" -t -b -c "$data" 2>/dev/null)
done >"$folder/text"
test -s "$folder/text" || { echo "coverage: no .gcda files: configure with --enable-coverage and run the tests" >&2; exit 1; }

awk -v root="$source/" -v missing="$missing" '
    function absolute(path) { return path ~ /^\// ? path : build "/" path }
    # Folders that lead up again are resolved, as in b/../src/lib.
    function plain(path) {
        while (match(path, /[^\/]+\/\.\.\//)) path = substr(path, 1, RSTART - 1) substr(path, RSTART + RLENGTH)
        gsub(/\/\.\//, "/", path)
        return path
    }
    /^ *-: *0:Source:/ {
        sub(/^ *-: *0:Source:/, "")
        file = plain(absolute($0))
        inside = index(file, root) == 1 && file ~ /\.c$/
        file = substr(file, length(root) + 1)
        inside = inside && file !~ /^tests\//
        if (inside) files[file] = 1
        next
    }
    !inside { next }
    /^branch/ {
        key = file "|" line "|" ++branch
        branches[key] = 1
        if ($0 !~ /never executed/ && $4 + 0 > 0) taken[key] = 1
        next
    }
    /^(call|function|unconditional|-----)/ { next }
    /^ *[^:]*: *[0-9]+:/ {
        split($0, part, ":")
        count = part[1]; gsub(/[ *]/, "", count)
        line = part[2] + 0
        branch = 0
        if (count == "-" || line == 0) next
        key = file "|" line
        code[key] = 1
        if (count !~ /^[#=]/) reached[key] = 1
        text[key] = substr($0, index($0, ":") + 1)
    }
    END {
        for (k in code) { split(k, p, "|"); lines[p[1]]++; hit[p[1]] += k in reached }
        for (k in branches) { split(k, p, "|"); ways[p[1]]++; gone[p[1]] += k in taken }
        for (f in files) {
            if (!lines[f]) continue
            all += lines[f]; all_hit += hit[f]; all_ways += ways[f]; all_gone += gone[f]
            printf "1 %s %d %d %d %d\n", f, hit[f], lines[f], gone[f], ways[f]
        }
        printf "2 total %d %d %d %d\n", all_hit, all, all_gone, all_ways
        if (missing)
            for (k in code) if (!(k in reached)) { split(k, p, "|"); printf "3 %s %06d %s\n", p[1], p[2], text[k] }
    }' build="$build" "$folder/text" | sort -k1,1n -k2,2 -k3,3n | awk '
    function share(a, b) { return b ? sprintf("%.1f %%", 100 * a / b) : "-" }
    NR == 1 { printf "%-36s %16s %10s %16s %10s\n", "file", "lines", "", "branches", "" }
    $1 < 3 { printf "%-36s %7d of %5d %10s %7d of %5d %10s\n", $2, $3, $4, share($3, $4), $5, $6, share($5, $6) }
    $1 == 3 { if (!said++) print "\nnever reached:"; line = $0; sub(/^3 [^ ]+ [0-9]+ */, "", line); print $2 ":" line }'

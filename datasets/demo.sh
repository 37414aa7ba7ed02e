#!/bin/sh
# SPDX-License-Identifier: GPL-3.0-or-later
#
# The story of an optical bench that goes from the workshop to 77 K, told with the tool itself.
#
#     datasets/demo.sh KELSPAN SOURCE-TREE OUTPUT-FOLDER
#
# Bench, alloys and numbers are invented. Every command below is shown as one would type it, then run. The tables are
# copied into the output folder first, so that the commands can be repeated there by hand.
set -eu
test $# -eq 3 || { echo "usage: datasets/demo.sh KELSPAN SOURCE-TREE OUTPUT-FOLDER" >&2; exit 2; }

mkdir -p "$3"
cp "$2"/datasets/*.csv "$3"
kelspan=$(cd "$(dirname "$1")" && pwd)/$(basename "$1")
cd "$3"
folder=$(pwd)
rm -f spacer.json bush.json cold-plate.json latch.json mirror.json

say() { printf '\n%s\n' "$*" | fold -s -w 100 | sed 's/ *$//'; }

# One command as typed, with its answer. Stops unless the exit status is the one that belongs to the story. What goes to
# stdout is put into a file if one is named.
kel_for() {
    expected=$1 file=
    shift
    if test "$1" = into; then
        file=$2
        shift 2
    fi
    printf '\n    $ kelspan'
    for word in "$@"; do
        case $word in
        *' '*) printf " '%s'" "$word" ;;
        *) printf ' %s' "$word" ;;
        esac
    done
    printf '%s\n' "${file:+ >$file}"
    status=0
    if test -n "$file"; then
        "$kelspan" "$@" >"$file" || status=$?
    else
        echo
        "$kelspan" "$@" 2>&1 || status=$?
    fi
    if test "$status" -ne "$expected"; then
        echo "demo: kelspan $1 ended with status $status instead of $expected" >&2
        exit 1
    fi
}
kel() { kel_for 0 "$@"; }

say "THE BENCH. Cold plate, spacer, bush, window ring, latch, strut and mirror go from 293 K to 77 K. Everybody asks \
the same question: how much does my part shrink, and how sure is that? All materials and values here are \
invented."

say "1. A WORKSHOP LIST. Semicolons, decimal commas, degF, three materials side by side, marks behind the values. \
Nothing is fitted before it is clear what was understood:"
kel read stock-list.csv --series 'NT-40 lot 3'

say "2. THE SPACER has a clean table of coefficients with their uncertainty. The fit chooses its degree, says how \
well it fits, row by row, and from where to where it is valid; -o keeps the record that everything below is \
answered from:"
kel fit spacer.csv -o spacer.json

say "3. HOW MUCH DOES A SPACER OF 250 mm SHRINK? The integral of the fitted curve between any two temperatures, with \
its standard uncertainty from the full covariance of the fit:"
kel integrate spacer.json --from 293K --to 77K --length 250mm

say "4. SINGLE VALUES, AND A TABLE for whoever wants one:"
kel value spacer.json 77K 20degC
kel tabulate spacer.json --from 60K --to 300K --step 40K --reference 20degC

say "5. OUTSIDE THE DATA. The spacer was measured from 20 K on. An answer down to 4 K is given, but never silently: \
it says how far it leans on nothing, and the exit status is 3, so that a script notices too:"
kel_for 3 integrate spacer.json --from 293K --to 4K --length 250mm
say "With --within-range such an answer is refused altogether (status 1):"
kel_for 1 integrate spacer.json --from 293K --to 4K --length 250mm --within-range

say "6. DOES THE BUSH STAY IN THE PLATE? The bush was measured as an expansion in %, the plate as mean coefficients \
from 20 degC; both become curves of the same kind. A seat of 40 mm in each, cooled to 77 K:"
kel into bush.txt fit bush.csv -o bush.json
kel integrate bush.json --from 20degC --to 77K --length 40mm
kel into cold-plate.txt fit cold-plate.csv -o cold-plate.json
kel integrate cold-plate.json --from 20degC --to 77K --length 40mm
say "The plate shrinks more than the bush: its bore closes upon it, and the fit gets tighter by the difference of the \
two changes."

say "7. THE LATCH changes its structure at -35 degC and its length steps there. The step is declared in the table and \
fitted with the rest. The residuals on both sides of it show no trace of a step, and an integral across it says \
that it was crossed:"
kel into latch.txt fit latch.csv -o latch.json
kel residuals latch.json
kel_for 3 integrate latch.json --from 20degC --to 77K --length 30mm

say "8. THE MIRROR comes with published coefficients instead of a table. They are adopted as they are, with the \
uncertainty that was stated for them:"
kel adopt mirror.csv -o mirror.json
kel integrate mirror.json --from 293K --to 77K --length 120mm

say "Tables, records and reports of this story are in $folder."

#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# Input that is too long, too large, endless or no text, files that cannot be read, streams that are closed, full or end
# early: one line on stderr, the right status, nothing half done, and soon.
load common

HEADER='temperature [K],coefficient [1e-6/K]'
PAIRS='from [K],to [K]'

# soon SECONDS STATUS TEXT ARGUMENT...: refused, and within that time (many times what it takes).
soon() {
    local limit=$1 want=$2 text=$3
    shift 3
    run --separate-stderr timeout "$limit" "$KELSPAN" "$@"
    test "$status" -eq "$want" || { echo "status $status: $stderr"; return 1; }
    has "$stderr" "$text" && same "$output" "" && same "$(lines "$stderr")" 1
}

zeros() { head -c "$1" /dev/zero; }

sanitized() { ldd "$KELSPAN" | grep -q asan; }

# --- lines, columns, sizes ---

@test "a line of over 1 MiB, wherever it stands" {
    { echo "$HEADER"; echo 100,10; zeros 1100000 | tr '\0' 7; echo; } >cell.csv
    soon 20 1 "cell.csv:3:1048577: the line is longer than 1048576 bytes" read cell.csv
    { printf '# note: '; zeros 1100000 | tr '\0' n; echo; echo "$HEADER"; echo 100,10; } >note.csv
    soon 20 1 "note.csv:1:1048577: the line is longer" fit note.csv -o note.json
    test ! -e note.json
    zeros 1100000 | tr '\0' , >header.csv
    soon 20 1 "header.csv:1:1048577: the line is longer" adopt header.csv -o header.json
    make_line_record
    { echo "$PAIRS"; zeros 1100000 | tr '\0' 1; } >pairs.csv
    kel 1 integrate line.json --pairs pairs.csv
    has "$stderr" "pairs.csv:2:1048577: the line is longer"
    same "$output" "from [K],to [K],integral [1],u [1],outside [K],reservations"
}

@test "a line of just 1 MiB is read, a byte more is not" {
    { printf '# note: '; zeros 1048568 | tr '\0' n; echo; echo "$HEADER"; printf '100,10\n200,12\n'; } >edge.csv
    kel 0 read edge.csv
    sed '1s/$/n/' edge.csv >over.csv
    soon 20 1 "over.csv:1:1048577: the line is longer" read over.csv
}

@test "an endless line from a pipe ends the reading, in little memory" {
    make_line_record
    for c in "read -" "fit -" "adopt - -o x.json" "value - 77K" "integrate line.json --pairs -" "show -" "residuals -"; do
        run --separate-stderr sh -c "yes | tr -d '\n' | timeout 20 '$KELSPAN' $c"
        same "$status" 1
        same "$stderr" "kelspan: stdin:1:1048577: the line is longer than 1048576 bytes"
        same "$output" ""
    done
    test ! -e x.json
}

@test "an endless record from a pipe ends the reading" {
    run --separate-stderr sh -c "{ printf '{'; yes ' '; } | timeout 20 '$KELSPAN' value - 77K"
    same "$status" 1
    has "$stderr" "larger than 16 MiB"
    same "$(lines "$stderr")" 1
}

@test "two million columns" {
    awk 'BEGIN { for (i = 0; i < 2000000; i++) printf ","; print "" }' >wide.csv
    soon 20 1 "wide.csv:1:1048577: the line is longer" read wide.csv
}

@test "as many columns as a line can hold: refused or read, and soon" {
    awk 'BEGIN { for (r = 0; r < 2; r++) { printf r ? "100" : "temperature [K]"; for (i = 0; i < 500000; i++) printf ","; print "" } }' >empty.csv
    soon 20 1 "empty.csv:1:1: no column of values" read empty.csv
    awk 'BEGIN { for (r = 0; r < 2; r++) { printf r ? "100" : "temperature [K]"
        for (i = 0; i < 30000; i++) printf r ? ",10" : ",coefficient: lot %d [1e-6/K]", i; print "" } }' >series.csv
    soon 20 1 "several series: 'lot 0', 'lot 1'" read series.csv
    run --separate-stderr timeout 20 "$KELSPAN" read series.csv --series 'lot 29999'
    same "$status" 0
    sed '1s/lot 29998/lot 7/' series.csv >twice.csv
    soon 20 1 "repeats the kind of another one" read twice.csv --series 'lot 7'
    awk 'BEGIN { for (r = 0; r < 2; r++) { printf r ? "100,10" : "T,alpha"
        for (i = 0; i < 30000; i++) printf r ? ",1" : ",word %d", i; print "" } }' >foreign.csv
    kel 0 read foreign.csv --column 'temperature [K]=T' --column 'coefficient [1e-6/K]=alpha'
    has "$stderr" "and 29988 more"
    test "${#stderr}" -lt 1000
}

@test "temperatures across the top, a hundred thousand of them" {
    awk 'BEGIN { for (r = 0; r < 2; r++) { printf r ? "coefficient [1e-6/K]" : "temperature [K]"
        for (i = 0; i < 100000; i++) printf r ? ",1%d" : ",%d", r ? i % 10 : 100 + i / 1000; print "" } }' >across.csv
    run --separate-stderr timeout 20 "$KELSPAN" read across.csv --transpose
    same "$status" 0
    has "$output" "100000"
}

@test "a record of just 16 MiB is looked at, a byte more is not" {
    make_line_record
    size=$(wc -c <line.json)
    { cat line.json; zeros $((16777216 - size)) | tr '\0' ' '; } >full.json
    kel 0 value full.json 200K
    { cat full.json; printf ' '; } >over.json
    refused 1 "larger than 16 MiB" value over.json 200K
    # What is no record need not be held to its limit.
    zeros 17000000 >zeros.bin
    refused 1 "zeros.bin:1:" value zeros.bin 200K
}

# --- numbers ---

@test "numbers beyond a double, and below it" {
    make_line_record
    printf '%s\n100,1e400\n' "$HEADER" >large.csv
    refused 1 "large.csv:2:5: 1e400 1e-6/K is beyond the range of a double" read large.csv
    printf '%s\n1e400,10\n' "$HEADER" >hot.csv
    refused 1 "hot.csv:2:1: 1e400 K is beyond the range of a double" fit hot.csv
    printf '%s\n100,1e400\n' "$PAIRS" >pairs.csv
    kel 1 integrate line.json --pairs pairs.csv
    has "$stderr" "pairs.csv:2:5:"
    refused 2 "beyond the range of a double" value line.json 1e400K
    refused 2 "beyond the range of a double" integrate line.json --from 100K --to 200K --length 1e400mm
    # Finite, but the curve continued so far gives no length.
    refused 1 "not positive and finite" value line.json 1e308K
    refused 1 "not positive and finite" integrate line.json --from 0K --to 1e300K
    kel 3 value line.json 1e-400K --json
    near "$(json rows.0.temperature_K)" 0 0
}

@test "numbers of 5,000 digits" {
    make_line_record
    digits=$(zeros 4999 | tr '\0' 3)
    printf '%s\n100,1.%s\n200,12\n' "$HEADER" "$digits" >cell.csv
    refused 1 "cell.csv:2:5:" fit cell.csv
    has "$stderr" "too long for a number"
    test "${#stderr}" -lt 200
    printf '%s\n1%s,10\n' "$HEADER" "$digits" >hot.csv
    refused 1 "hot.csv:2:1:" read hot.csv
    # The command line has no limit of its own: 150.333... K to the last bit.
    kel 0 value line.json "150.${digits}K" --json
    same "$(json rows.0.temperature_K)" 150.33333333333334
    refused 2 "beyond the range of a double" value line.json "${digits}K"
    test "${#stderr}" -lt 300
    sed "s/\"reference_temperature_K\": 200/\"reference_temperature_K\": 200.${digits}/" line.json >long.json
    refused 1 "long.json" value long.json 150K
}

# --- text that is none ---

@test "invalid UTF-8 in a table: in numbers refused, in words shown safely" {
    printf '%s\n100,1\xC3\n' "$HEADER" >number.csv
    refused 1 'number.csv:2:6: ' read number.csv
    has "$stderr" '1\xC3'
    printf '# material: \xFF\xFE\n%s\n100,10\n200,11\n' "$HEADER" >name.csv
    kel 0 read name.csv
    has "$output" '\xFF\xFE'
    printf '%s' "$output" | LC_ALL=C grep -q "$(printf '\xFF')" && return 1
    kel 0 fit name.csv -o name.json -q
    iconv -f UTF-8 -t UTF-8 name.json >/dev/null
    kel 0 value name.json 150K
    printf 'temperature [K],\xC3\x28 [1e-6/K]\n100,10\n' >head.csv
    refused 1 'head.csv:1:17: ' read head.csv
    has "$stderr" '\xC3('
}

@test "invalid UTF-8 in a record, and in a name of a file" {
    make_line_record
    sed "s/LN-1/LN\xFF1/" line.json >invalid.json
    refused 1 "invalid.json:" value invalid.json 200K
    has "$stderr" "no UTF-8"
    kel 1 value "$(printf 'no\xFFsuch.json')" 200K
    has "$stderr" 'no\xFFsuch.json'
}

# --- files ---

@test "a folder where a file is wanted, for each command and option" {
    make_line_record
    mkdir folder
    for c in "read folder" "fit folder" "fit line.csv folder" "adopt folder -o x.json" "show folder" "residuals folder" \
        "value folder 77K" "integrate folder --from 77K --to 100K" "integrate line.json --pairs folder" \
        "tabulate folder --from 77K --to 100K --step 1K"; do
        refused 1 "folder: reading failed: Is a directory" $c
    done
    refused 1 "folder" fit line.csv -o folder
    has "$stderr" "Is a directory"
    test -d folder
    test ! -e x.json
}

@test "a file that may not be read, a folder that may not be written" {
    test "$(id -u)" -eq 0 || skip "made for root, who becomes somebody else"
    command -v setpriv >/dev/null || skip "no setpriv"
    somebody="setpriv --reuid=65534 --regid=65534 --clear-groups"
    $somebody "$KELSPAN" --version >/dev/null 2>&1 || skip "somebody else cannot run $KELSPAN"
    make_line_record
    make_coefficients
    chmod 755 .
    chmod 644 line.csv
    cp line.csv secret.csv
    cp line.json secret.json
    chmod 600 secret.csv secret.json
    for c in "read secret.csv" "fit secret.csv" "fit line.csv secret.csv" "adopt secret.csv -o x.json" "show secret.json" \
        "residuals secret.json" "value secret.json 200K" "integrate secret.json --from 100K --to 200K" \
        "tabulate secret.json --from 100K --to 200K --step 50K"; do
        run --separate-stderr $somebody "$KELSPAN" $c
        same "$status" 1
        has "$stderr" "Permission denied"
        has "$stderr" "secret"
        same "$output" ""
        same "$(lines "$stderr")" 1
    done
    run --separate-stderr $somebody "$KELSPAN" fit line.csv -o new.json
    same "$status" 1
    has "$stderr" "cannot write 'new.json': Permission denied"
    same "$output" ""
    # Nothing temporary either.
    test -z "$(find . -name '.kelspan-*' -o -name new.json)"
}

@test "a file that ends while it is read, or is empty" {
    : >empty
    for c in "read empty" "fit empty" "adopt empty -o x.json" "show empty" "value empty 77K"; do
        refused 1 "empty" $c
    done
    refused 1 "stdin" read - </dev/null
}

# --- streams ---

commands() {
    make_line_record
    make_coefficients
    make_line_pairs
    all=("read line.csv" "read line.csv --as csv" "fit line.csv" "fit line.csv -o -" "adopt coefficients.csv -o -" "show line.json"
        "show line.json --powers" "show line.json --powers --csv" "residuals line.json" "value line.json 200K"
        "integrate line.json --from 100K --to 200K" "integrate line.json --pairs pairs.csv"
        "tabulate line.json --from 100K --to 200K --step 10K" help "help fit" "fit --help" --version --help)
    with_json=("read line.csv" "fit line.csv" "adopt coefficients.csv" "show line.json" "residuals line.json"
        "value line.json 200K" "integrate line.json --from 100K --to 200K" "tabulate line.json --from 100K --to 200K --step 10K" help)
}

make_line_pairs() { printf '%s\n100,200\n' "$PAIRS" >pairs.csv; }

# Status 1 and one line that says so, with this behind the command: fails_with REDIRECTION COMMAND
fails_with() {
    run --separate-stderr sh -c "'$KELSPAN' $2 $1"
    { test "$status" -eq 1 && has "$stderr" "stdout" && has "$stderr" "$3"; } || { echo "$2 $1: $status: $stderr"; return 1; }
}

@test "a closed stdout, for each command" {
    commands
    for c in "${all[@]}"; do
        fails_with '>&-' "$c" "Bad file descriptor"
    done
    for c in "${with_json[@]}"; do
        fails_with '>&-' "$c --json" "Bad file descriptor"
    done
}

@test "a full stdout, for each command" {
    commands
    for c in "${all[@]}"; do
        fails_with '>/dev/full' "$c" "No space left on device"
    done
    for c in "${with_json[@]}"; do
        fails_with '>/dev/full' "$c --json" "No space left on device"
        has "$stderr" '"error"'
    done
}

@test "a closed or full stderr leaves the status and the result" {
    make_line_record
    for to in '2>&-' '2>/dev/full'; do
        run sh -c "'$KELSPAN' value line.json 200K --json $to"
        same "$status" 0
        near "$(json rows.0.coefficient_per_K)" 12e-6 1e-17
        run sh -c "'$KELSPAN' value line.json 350K --json $to"
        same "$status" 3
        run sh -c "'$KELSPAN' value nowhere.json 350K $to"
        same "$status" 1
        same "$output" ""
        run sh -c "'$KELSPAN' value line.json 350 $to"
        same "$status" 2
        same "$output" ""
    done
}

@test "a pipe that closes early: the program ends, by the signal or with an error, and soon" {
    make_line_record
    { echo "$PAIRS"; yes 100,200 | head -n 200000; } >pairs.csv
    for c in "integrate line.json --pairs pairs.csv" "tabulate line.json --from 100K --to 300K --step 0.01K --csv"; do
        run --separate-stderr timeout 20 bash -c "'$KELSPAN' $c | head -n 1; echo \${PIPESTATUS[0]}"
        same "${lines[1]}" 141
        same "$stderr" ""
        run --separate-stderr timeout 20 bash -c "trap '' PIPE; '$KELSPAN' $c | head -n 1; echo \${PIPESTATUS[0]}"
        same "${lines[1]}" 1
        has "$stderr" "cannot write to stdout: Broken pipe"
    done
}

@test "an output file on a full device: status 1, one line, nothing on stdout, the device stays" {
    make_line
    make_coefficients
    for c in "fit line.csv" "adopt coefficients.csv"; do
        refused 1 "cannot write '/dev/full': No space left on device" $c -o /dev/full
        kel 1 $c -o /dev/full --json
        same "$output" ""
        has "$(json_error error)" "No space left on device"
    done
    test -c /dev/full
}

# --- a class of errors, a line ---

# class STATUS FILE TEXT ARGUMENT...: in words, and as an object that names the file.
class() {
    local want=$1 file=$2 text=$3
    shift 3
    refused "$want" "$text" "$@"
    kel "$want" "$@" --json
    same "$output" ""
    has "$(json_error error)" "$text"
    same "$(json_error file)" "$file"
    same "$(json_error '#')" 4
}

@test "each class of errors: status, words, object" {
    data=$here/../data
    make_line_record
    make_coefficients
    class 1 nowhere.json "No such file" value nowhere.json 200K
    class 1 "$data/bad-text-in-number.csv" "is not a number" fit "$data/bad-text-in-number.csv"
    class 1 "$data/bad-unknown-unit.csv" "furlong" fit "$data/bad-unknown-unit.csv"
    class 1 "$data/bad-negative-kelvin.csv" "K" fit "$data/bad-negative-kelvin.csv"
    class 1 "$data/bad-duplicate-header.csv" "repeats" read "$data/bad-duplicate-header.csv"
    class 1 "$data/bad-record-digest.json" "does not match its digest" value "$data/bad-record-digest.json" 200K
    class 1 "$data/bad-record-check-values.json" "check value" value "$data/bad-record-check-values.json" 200K
    class 1 "$data/bad-record-newer.json" "written by a newer kelspan" show "$data/bad-record-newer.json"
    class 1 "$data/bad-record-unknown-key.json" "is not a known key" residuals "$data/bad-record-unknown-key.json"
    class 1 "$data/bad-record-cut.json" "it ends too early" tabulate "$data/bad-record-cut.json" --from 100K --to 200K --step 50K
    class 1 "$data/bad-coefficients-gap.csv" "" adopt "$data/bad-coefficients-gap.csv" -o x.json
    class 2 null "needs a unit" value line.json 200
    printf '%s\n100,10\n100,11\n' "$HEADER" >same.csv
    refused 1 "degree" fit same.csv --degree 1
    refused 2 "below absolute zero" value line.json -1K
    test ! -e x.json
}

@test "lack of memory: status 1, one line, no file" {
    sanitized && skip "address space means nothing under the sanitizer"
    awk -v h="$HEADER" 'BEGIN { print h; for (i = 0; i < 400000; i++) printf "%.3f,%.2f\n", 100 + i / 4000, 10 + i / 40000 }' >long.csv
    base=
    for v in 20000 30000 40000 60000 80000 100000 150000 200000 300000 400000 600000; do
        if (ulimit -v $v && "$KELSPAN" --version) >/dev/null 2>&1; then base=$v; break; fi
    done
    test -n "$base" || skip "no limit of address space here"
    run --separate-stderr bash -c "ulimit -v $((base + 12000)); '$KELSPAN' fit long.csv -o long.json"
    same "$status" 1
    has "$stderr" "out of memory"
    same "$output" ""
    same "$(lines "$stderr")" 1
    test ! -e long.json
}

#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# Errors, warnings and reservations: their form, where they go, and the exit status.
load common

@test "an error of data names file, line and column" {
    make_line
    sed '5s/10.40/10.4x/' line.csv >bad.csv
    refused 1 "kelspan: bad.csv:5:" fit bad.csv
    printf '%s' "$stderr" | grep -qE '^kelspan: bad\.csv:5:[0-9]+: '
}

@test "with --json the error is one object" {
    make_line
    sed '5s/10.40/10.4x/' line.csv >bad.csv
    kel 1 fit bad.csv --json
    same "$output" ""
    same "$(json_error file)" bad.csv
    same "$(json_error line)" 5
    near "$(json_error column)" 5 4
    test -n "$(json_error error)"
    same "$(json_error '#')" 4
}

@test "stdin is named so in messages" {
    make_line
    sed '5s/10.40/10.4x/' line.csv >bad.csv
    kel_in bad.csv 1 fit -
    has "$stderr" "kelspan: stdin:5:"
}

@test "a missing file" {
    refused 1 "kelspan: nowhere.csv: No such file" read nowhere.csv
    refused 1 "kelspan: nowhere.json: No such file" value nowhere.json 77K
}

@test "a folder is no table and no record" {
    mkdir folder
    refused 1 "folder: " read folder
    refused 1 "folder: " value folder 77K
}

@test "control bytes in a name do not reach the terminal" {
    kel 1 read "$(printf 'a\033[31m.csv')"
    has "$stderr" 'a\x1B[31m.csv'
}

@test "warnings: one line for a kind and file, with count and first place; status 0" {
    make_line
    sed -e '6s/10.80/(10.80)/' -e '8s/11.60/(11.60)/' line.csv >marked.csv
    kel 0 fit marked.csv
    same "$(lines "$stderr")" 1
    has "$stderr" "kelspan: marked.csv:6: warning:"
    has "$stderr" "2 times"
}

@test "--quiet drops warnings" {
    make_line
    sed '6s/10.80/(10.80)/' line.csv >marked.csv
    kel 0 fit marked.csv --quiet
    same "$stderr" ""
    kel 0 fit marked.csv -q
    same "$stderr" ""
}

@test "with --json warnings stand in the result" {
    make_line
    sed '6s/10.80/(10.80)/' line.csv >marked.csv
    kel 0 fit marked.csv --json
    same "$stderr" ""
    test -n "$(json warnings.0.code)"
    test -n "$(json warnings.0.text)"
    same "$(json warnings.0.line)" 6
}

@test "a run that fails says its error and no warnings" {
    make_line
    sed '6s/10.80/(10.80)/' line.csv >marked.csv
    refused 1 "degree" fit marked.csv --degree 20
}

@test "a reservation: status 3, on stdout and once on stderr" {
    make_line_record
    kel 3 value line.json 350K 400K
    same "$(lines "$stderr")" 1
    has "$stderr" "kelspan: extrapolated: T = 350 K is outside the validity range 100 K to 300 K of line.json"
    has "$stderr" "2 answers"
    same "$(printf '%s\n' "$output" | grep -c extrapolated)" 2
}

@test "--quiet keeps reservations" {
    make_line_record
    kel 3 value line.json 350K --quiet
    has "$stderr" "extrapolated"
}

@test "with --json a reservation stands in the result, nothing on stderr" {
    make_line_record
    kel 3 value line.json 350K --json
    same "$stderr" ""
    same "$(json rows.0.reservations.0.code)" extrapolated
    has "$(json rows.0.reservations.0.text)" "100 K to 300 K"
    same "$(json reservations.0.code)" extrapolated
}

@test "--accept gives status 0 and keeps the note" {
    make_line_record
    kel 0 value line.json 350K --accept extrapolated
    has "$stderr" "extrapolated"
    has "$output" "extrapolated"
    kel 0 value line.json 350K --accept gap,extrapolated
    kel 0 value line.json 350K --accept gap --accept extrapolated
    kel 3 value line.json 350K --accept gap
}

@test "--accept knows its codes" {
    make_line_record
    kel 0 value line.json 200K --accept extrapolated,gap,transition,unreachable,unknown-uncertainty
    refused 2 "not everything" value line.json 200K --accept everything
    refused 2 "--accept knows" value line.json 200K --accept extrapolated,
}

@test "--within-range refuses: status 1 and nothing on stdout" {
    make_line_record
    refused 1 "T = 350 K is outside the validity range 100 K to 300 K of line.json" value line.json 200K 350K --within-range
    refused 1 "leaves the validity range" integrate line.json --from 200K --to 350K --within-range
    refused 1 "T = 310 K is outside" tabulate line.json --from 290K --to 320K --step 10K --within-range
    kel 0 value line.json 100K 300K --within-range
}

@test "--accept does not weaken --within-range" {
    make_line_record
    refused 1 "outside" value line.json 350K --within-range --accept extrapolated
}

@test "bounds compare exactly" {
    make_line_record
    kel 0 value line.json 100K 300K
    kel 3 value line.json 99.99999999999999K
    kel 3 value line.json 300.00000000000006K
}

@test "a gap inside the range" {
    make_gap
    kel 0 fit gap.csv --degree 1 -o gap.json
    kel 3 value gap.json 200K --json
    same "$(json rows.0.reservations.0.code)" gap
    same "$(json rows.0.extrapolated)" false
    kel 0 value gap.json 140K 240K 120K
    kel 0 value gap.json 200K --accept gap
    kel 3 integrate gap.json --from 120K --to 200K
    has "$output" "gap: 200 K lies in a gap without observations from 140 K to 240 K"
    kel 0 value gap.json 200K --accept gap --within-range
}

@test "a transition that is crossed" {
    make_step
    kel 0 fit step.csv --degree 0 -o step.json
    kel 3 integrate step.json --from 240K --to 260K --json
    same "$(json reservations.0.code)" transition
    has "$(json reservations.0.text)" "250 K"
    kel 0 integrate step.json --from 240K --to 260K --accept transition
    kel 0 integrate step.json --from 260K --to 300K
}

@test "an unknown uncertainty is reported and leaves the status" {
    make_coefficients
    kel 0 adopt coefficients.csv -o c.json
    kel 0 value c.json 200K --json
    same "$(json rows.0.coefficient_u_per_K)" null
    same "$(json rows.0.reservations.0.code)" unknown-uncertainty
    kel 0 value c.json 200K
    has "$output" "not known"
    has "$stderr" "unknown-uncertainty"
}

@test "a table where a record is wanted is fitted, and that is said" {
    make_line
    kel 0 value line.csv 200K
    has "$stderr" "line.csv: warning: this is a table: fitted with the defaults"
    kel 0 value line.csv 200K --json
    same "$(json warnings.0.code)" fitted-table
    near "$(json rows.0.coefficient_per_K)" 12e-6 1e-17
    kel_in line.csv 0 value - 200K --quiet
    same "$stderr" ""
}

@test "a record on stdin, with blanks before it" {
    make_line_record
    { printf ' \n\t'; cat line.json; } >blank.json
    kel_in blank.json 0 value - 200K --json
    near "$(json rows.0.coefficient_per_K)" 12e-6 1e-17
}

@test "a record cut short is refused" {
    make_line_record
    head -c 200 line.json >cut.json
    refused 1 "cut.json" value cut.json 200K
}

@test "a changed record is refused" {
    make_line_record
    sed 's/LN-1/LN-2/' line.json >other.json
    refused 1 "other.json" value other.json 200K
}

@test "a record over 16 MiB is refused" {
    { printf '{'; head -c 17000000 /dev/zero | tr '\0' ' '; } >large.json
    refused 1 "16 MiB" value large.json 200K
}

#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# kelspan fit: options, report, JSON, and where the record goes.
load common

@test "JSON has the keys that scripts rely on" {
    make_line
    kel 0 fit line.csv --degree 1 -o line.json --json
    same "$(json record)" line.json
    same "$(json form)" polynomial
    same "$(json degree)" 1
    same "$(json observations)" 11
    same "$(json parameters)" 2
    near "$(json degrees_of_freedom)" 9 0
    near "$(json residual_standard_deviation)" 0 1e-17
    same "$(json columns.0.table)" line.csv
    same "$(json columns.0.kind)" coefficient
    same "$(json columns.0.observations)" 11
    near "$(json columns.0.residual_standard_deviation)" 0 1e-17
    same "$(json chi2)" null
    near "$(json range_K.0)" 100 0
    near "$(json range_K.1)" 300 0
    same "$(json gaps_K.#)" 0
    near "$(json reference_temperature_K)" 200 0
    same "$(json base)" "reference length"
    same "$(json variance)" estimated
    same "$(json warnings.#)" 0
}

@test "residual standard deviation of known residuals" {
    # Eight residuals of 0.05 and a line: s = 0.05 sqrt(8/6).
    make_noisy
    kel 0 fit noisy.csv --degree 1 --json
    near "$(json residual_standard_deviation)" 5.773502691896258e-8 1e-20
    near "$(json degrees_of_freedom)" 6 0
}

@test "the report for people" {
    make_noisy
    kel 0 fit noisy.csv --degree 1
    has "$output" "polynomial of degree 1"
    has "$output" "0.0577e-6/K"
    has "$output" "200 to 340 K"
    has "$output" "293.15 K, assumed: no table states one"
    has "$output" "reference length"
    has "$output" "scatter of the fit"
    has "$output" "U = "
    has "$output" "(k = 2)"
    has "$output" "largest"
    has "$output" "Nothing was saved"
    same "$stderr" ""
    # Student's factor for 6 degrees of freedom is 2.447.
    near "$(value_of 'take k = ')" 2.447 0.005
}

@test "no table of residuals for a long table" {
    { echo "temperature [K],coefficient [1e-6/K]"; awk 'BEGIN { for (i = 0; i < 26; i++) printf "%d,%.2f\n", 100 + i, 10 + 0.1 * i }'; } >long.csv
    kel 0 fit long.csv --degree 1
    hasnt "$output" "Residuals"
    sed -i '$d' long.csv
    kel 0 fit long.csv --degree 1
    has "$output" "Residuals"
}

@test "--candidates shows the degrees that were compared" {
    make_noisy
    kel 0 fit noisy.csv --candidates
    has "$output" "Candidates"
    same "$(printf '%s\n' "$output" | grep -c ' chosen$')" 1
    kel 0 fit noisy.csv --candidates --degree 1
    has "$output" "none were compared"
    kel 0 fit noisy.csv --json
    same "$(json candidates.1.degree)" 1
    same "$(json candidates.1.chosen)" true
}

@test "--degree auto takes the lowest that serves" {
    make_line
    kel 0 fit line.csv --degree auto --json
    same "$(json degree)" 1
    make_noisy
    kel 0 fit noisy.csv --json
    same "$(json degree)" 1
}

@test "--degree that cannot be" {
    make_noisy
    refused 2 "--degree is auto or" fit noisy.csv --degree -1
    refused 2 "--degree is auto or" fit noisy.csv --degree two
    refused 2 "--degree is auto or" fit noisy.csv --degree 61
    refused 2 "--degree is auto or" fit noisy.csv --degree 1,
    refused 1 "" fit noisy.csv --degree 8
    kel 0 fit noisy.csv --degree 7
}

@test "--joins makes pieces, --continuity says how they meet" {
    make_noisy
    kel 0 fit noisy.csv --joins 270K --degree 1 --json
    same "$(json form)" piecewise
    same "$(json pieces.#)" 2
    near "$(json pieces.0.to_K)" 270 0
    same "$(json parameters)" 3
    for c in none:4 value:3 slope:2; do
        kel 0 fit noisy.csv --joins 270K --degree 1 --continuity ${c%:*} --json
        same "$(json parameters)" ${c#*:}
    done
    kel 0 fit noisy.csv --joins -13.15degC,300K --degree 1,2,1 --continuity value,slope --json
    same "$(json degree)" "[1,2,1]"
    same "$(json parameters)" 4
    near "$(json pieces.0.to_K)" 260 1e-12
}

@test "--form, --joins and --continuity that contradict each other" {
    make_noisy
    refused 2 "has no --joins" fit noisy.csv --form polynomial --joins 270K
    refused 2 "--form is" fit noisy.csv --form rational
    refused 2 "--continuity needs --joins" fit noisy.csv --continuity slope
    refused 2 "--continuity lists 2, --joins 1" fit noisy.csv --joins 270K --continuity slope,value
    refused 2 "--continuity is value" fit noisy.csv --joins 270K --continuity smooth
    refused 2 "270 needs a unit" fit noisy.csv --joins 270
    kel 2 fit noisy.csv --form piecewise
    kel 0 fit noisy.csv --form polynomial --degree 1
    kel 0 fit noisy.csv --form piecewise --joins 270K --degree 1
}

@test "--reference moves the reference temperature" {
    make_line
    kel 0 fit line.csv --degree 1 --reference 68degF --json
    near "$(json reference_temperature_K)" 293.15 0
    refused 2 "--reference" fit line.csv --reference 20
}

@test "--base" {
    make_line
    kel 0 fit line.csv --degree 1 --base current --json
    same "$(json base)" "current length"
    kel 0 fit line.csv --degree 1 --base 'current length' --json
    same "$(json base)" "current length"
    refused 2 "--base is" fit line.csv --base both
}

@test "--range keeps the rows inside" {
    make_line
    kel 0 fit line.csv --degree 1 --range 120K:200K --json
    same "$(json observations)" 5
    near "$(json range_K.0)" 120 0
    near "$(json range_K.1)" 200 0
    kel 0 fit line.csv --degree 1 --range -153.15degC:200K --json
    near "$(json range_K.1)" 200 0
    refused 2 "--range is LO:HI" fit line.csv --range 120K
    refused 2 "the lower end comes first" fit line.csv --range 200K:120K
    refused 2 "--range" fit line.csv --range 120:200
}

@test "a stated shared error is covered and printed" {
    make_line
    sed -i '1i # uncertainty: 1 % shared' line.csv
    kel 0 fit line.csv --degree 1
    has "$output" "stated shared error"
    kel 0 fit line.csv --degree 1 --json
    has "$(json covers)" shared
}

@test "stated u gives chi2 and both scalings" {
    make_noisy
    sed -e '1s/$/,uncertainty [1e-6\/K]/' -e '2,$s/$/,0.05/' noisy.csv >given.csv
    kel 0 fit given.csv --degree 1 --json
    # Eight residuals of one u each; the resolution of 0.01 belongs to u^2 only where u is estimated or a percentage.
    same "$(json variance)" given
    near "$(json chi2)" 8 0.1
    near "$(json other_scaling)" 1.1547 0.01
    kel 0 fit given.csv --degree 1
    has "$output" "chi2/nu"
    has "$output" "scaling of U"
}

@test "a fitted step is reported with its U" {
    make_step
    kel 0 fit step.csv --degree 0
    has "$output" "250 K, fitted step"
    kel 0 fit step.csv --degree 0 --json
    near "$(json transitions.0.length)" 100e-6 1e-15
    same "$(json transitions.0.step)" fitted
    test "$(json transitions.0.length_u)" != null
}

@test "two tables of different kinds in one fit" {
    make_line
    {
        echo "# material: LN-1"
        echo "# reference temperature: 200 K"
        echo "temperature [K],expansion [1e-6]"
        awk 'BEGIN { for (t = 320; t <= 400; t += 20) printf "%d,%.2f\n", t, 8 * (t - 200) + 0.01 * (t * t - 40000) }'
    } >expansion.csv
    kel 0 fit line.csv expansion.csv --degree 1 --json
    same "$(json observations)" 16
    same "$(json columns.#)" 2
    same "$(json columns.1.kind)" expansion
    same "$(json residual_standard_deviation)" null
    near "$(json range_K.1)" 400 0
}

@test "-o - puts the record on stdout and the report on stderr" {
    make_line
    kel 0 fit line.csv --degree 1 -o line.json
    kel 0 fit line.csv --degree 1 -o -
    printf '%s\n' "$output" >piped.json
    cmp line.json piped.json
    has "$stderr" "polynomial of degree 1"
    kel 0 fit line.csv --degree 1 -o - --quiet
    same "$stderr" ""
    refused 2 "no --json" fit line.csv -o - --json
}

@test "the record answers" {
    make_line_record
    kel 0 integrate line.json --from 100K --to 300K --json
    near "$(json integral)" 2400e-6 1e-17
}

@test "same input, same bytes" {
    make_noisy
    kel 0 fit noisy.csv -o a.json
    kel 0 fit noisy.csv -o b.json
    cmp a.json b.json
}

@test "-o never overwrites an input" {
    make_line
    cp line.csv before.csv
    refused 2 "would overwrite the input line.csv" fit line.csv -o line.csv
    ln line.csv hard.csv
    refused 2 "would overwrite" fit line.csv -o hard.csv
    cmp line.csv before.csv
}

@test "-o that fails: status 1, nothing on stdout, the old file stays" {
    make_line_record
    cp line.json before.json
    refused 1 "nowhere/x.json" fit line.csv -o nowhere/x.json
    refused 1 "/dev/full" fit line.csv -o /dev/full
    test -c /dev/full
    refused 1 "" fit line.csv --degree 20 -o line.json
    cmp line.json before.json
}

@test "--gap sets the limit of gaps in the record" {
    make_gap
    kel 0 fit gap.csv --degree 1 --json
    same "$(json gaps_K.#)" 1
    kel 0 fit gap.csv --degree 1 --gap 150K --json
    same "$(json gaps_K.#)" 0
}

@test "--leave-out and its reason are kept in the record" {
    make_line
    kel 0 fit line.csv --degree 1 --leave-out 'line.csv:6=slipped rod' -o l.json --json
    same "$(json observations)" 10
    kel 0 residuals l.json --json
    has "$output" "slipped rod"
}

@test "--coefficient-unit and --temperature-unit in the report" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 --coefficient-unit 1e-6/degF --temperature-unit degF
    has "$output" "-99.67 to 152.33 degF"
    has "$output" "0.0321e-6/degF"
}

@test "a single row" {
    printf 'temperature [K],coefficient [1e-6/K]\n200,12.0\n' >one.csv
    kel 0 fit one.csv --json
    same "$(json degree)" 0
    near "$(json range_K.0)" 200 0
    near "$(json range_K.1)" 200 0
}

@test "fit needs a table" {
    refused 2 "fit needs a table" fit
    : >empty.csv
    refused 1 "empty.csv" fit empty.csv
}

@test "--range: rows outside are listed with their lines and the reason" {
    make_line
    kel 0 fit line.csv --degree 1 --range 130K:270K
    has "$output" "11, 4 left out"
    has "$output" "line 4, 5, 13, 14: outside the range asked for"
    has "$output" "7 values"
    kel 0 fit line.csv --degree 1 --range 130K:270K --leave-out 'line.csv:8=slipped' --json
    same "$(json left_out_rows.#)" 5
    same "$(json left_out_rows.0.line)" 4
    same "$(json left_out_rows.0.reason)" "outside the range asked for"
    same "$(json left_out_rows.2.reason)" "slipped"
    same "$(json observations)" 6
}

@test "options that the tables cannot follow: wrong usage" {
    make_noisy
    refused 2 "3 degrees for 2 pieces" fit noisy.csv --joins 270K --degree 1,2,3
    refused 2 "the lower temperature comes first" fit noisy.csv --joins 300K,270K
    refused 2 "the lower temperature comes first" fit noisy.csv --joins 270K,270K
    refused 2 "a piecewise form needs joins" fit noisy.csv --form piecewise
}

@test "-o /dev/stdout: the record on stdout, also where that is a file, the report on stderr" {
    make_line
    kel 0 fit line.csv --degree 1 -o - --quiet
    record=$output
    kel 0 fit line.csv --degree 1 -o /dev/stdout --quiet
    same "$output" "$record"
    echo before >whole.txt
    "$KELSPAN" fit line.csv --degree 1 -o /dev/stdout --quiet >>whole.txt
    same "$(cat whole.txt)" "before
$record"
    echo before >whole.txt
    "$KELSPAN" fit line.csv --degree 1 -o /dev/stderr --quiet 2>>whole.txt >report.txt
    same "$(cat whole.txt)" "before
$record"
    has "$(cat report.txt)" "validity range"
}

@test "a record that cannot be saved: its name once" {
    make_line
    refused 1 "kelspan: cannot write '/dev/full': No space left on device" fit line.csv -o /dev/full
    kel 1 fit line.csv -o /dev/full --json
    same "$(json_error file)" /dev/full
}

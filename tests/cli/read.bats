#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# kelspan read: what was understood of tables, and the table in the product's own layout.
load common

@test "text tells kind, unit, rows, reference, range, uncertainty" {
    make_line
    kel 0 read line.csv
    has "$output" "LN-1"
    has "$output" "coefficient [1e-6/K], 11 values"
    has "$output" "200 K"
    has "$output" "100 to 300 K"
    has "$output" "none stated"
}

@test "--temperature-unit in text" {
    make_line
    kel 0 read line.csv --temperature-unit degC
    has "$output" "-173.15 to 26.85 degC"
    refused 2 "--temperature-unit" read line.csv --temperature-unit mm
}

@test "JSON has the keys that scripts rely on" {
    make_line
    kel 0 read line.csv --json
    same "$(json tables.#)" 1
    same "$(json tables.0.table)" line.csv
    same "$(json tables.0.material)" LN-1
    same "$(json tables.0.columns.0.kind)" coefficient
    same "$(json tables.0.columns.0.unit)" 1e-6/K
    near "$(json tables.0.columns.0.resolution)" 1e-8 1e-23
    same "$(json tables.0.rows)" 11
    same "$(json tables.0.left_out)" 0
    near "$(json tables.0.reference_temperature_K)" 200 0
    same "$(json tables.0.base)" "reference length"
    near "$(json tables.0.range_K.0)" 100 0
    near "$(json tables.0.range_K.1)" 300 0
    same "$(json tables.0.uncertainty.values_with_independent_u)" 0
    same "$(json tables.0.warnings.#)" 0
    same "$(json warnings.#)" 0
}

@test "several tables, in their order" {
    make_line
    make_noisy
    kel 0 read noisy.csv line.csv --json
    same "$(json tables.#)" 2
    same "$(json tables.0.table)" noisy.csv
    same "$(json tables.1.table)" line.csv
    same "$(json tables.0.reference_temperature_K)" null
}

@test "a table on stdin" {
    make_line
    kel_in line.csv 0 read - --json
    same "$(json tables.0.rows)" 11
}

@test "gaps, left-out rows and their reasons" {
    make_gap
    sed -i '4s/10.00/(10.00)/' gap.csv
    kel 0 read gap.csv --json
    same "$(json tables.0.left_out)" 1
    same "$(json tables.0.left_out_rows.0.line)" 4
    test -n "$(json tables.0.left_out_rows.0.reason)"
    near "$(json tables.0.gaps_K.0.0)" 140 0
    near "$(json tables.0.gaps_K.0.1)" 240 0
    kel 0 read gap.csv
    has "$output" "line 4"
    has "$output" "gap 140 to 240 K"
}

@test "--gap sets another limit" {
    make_gap
    kel 0 read gap.csv --gap 200K --json
    same "$(json tables.0.gaps_K.#)" 0
    make_line
    kel 0 read line.csv --gap 19K --json
    same "$(json tables.0.gaps_K.#)" 10
    refused 2 "--gap must be above 0" read line.csv --gap 0K
    refused 2 "--gap" read line.csv --gap 5
}

@test "--include-marked takes rows with a status mark" {
    make_line
    sed -i '6s/10.80/(10.80)/' line.csv
    kel 0 read line.csv --json
    same "$(json tables.0.left_out)" 1
    kel 0 read line.csv --include-marked --json
    same "$(json tables.0.left_out)" 0
    same "$(json tables.0.marked_cells)" 1
}

@test "--leave-out leaves a row out with its reason" {
    make_line
    kel 0 read line.csv --leave-out 'line.csv:6=slipped rod' --json
    same "$(json tables.0.left_out_rows.0.line)" 6
    has "$(json tables.0.left_out_rows.0.reason)" "slipped rod"
}

@test "--set fills in metadata" {
    make_noisy
    kel 0 read noisy.csv --set 'reference temperature: 20 degC' --set 'material: NZ-9' --json
    near "$(json tables.0.reference_temperature_K)" 293.15 0
    same "$(json tables.0.material)" NZ-9
    refused 2 "no such key: 1" read noisy.csv --set 'no such key: 1'
    refused 2 "the setting 'no colon'" read noisy.csv --set 'no colon'
}

@test "--column names the columns of a foreign file" {
    printf 'place;temp;cte val\nA;100;10\nB;200;12\n' >foreign.csv
    refused 1 "foreign.csv" read foreign.csv
    kel 0 read foreign.csv --column 'temperature [K]=temp' --column 'coefficient [1e-6/K]=3' --quiet --json
    same "$(json tables.0.rows)" 2
    near "$(json tables.0.range_K.1)" 200 0
}

@test "--header none and --header N" {
    printf '100,10\n200,12\n' >bare.csv
    kel 0 read bare.csv --header none --column 'temperature [K]=1' --column 'coefficient [1e-6/K]=2' --json
    same "$(json tables.0.rows)" 2
    printf 'some title,\ntemperature [K],coefficient [1e-6/K]\n100,10\n' >titled.csv
    kel 0 read titled.csv --header 2 --json
    same "$(json tables.0.rows)" 1
    refused 2 "--header is none or a line" read titled.csv --header 0
    refused 2 "--header is none or a line" read titled.csv --header two
}

@test "--delimiter" {
    printf 'temperature [K]\tcoefficient [1e-6/K]\n100\t10\n' >tabs.csv
    kel 0 read tabs.csv --delimiter tab --json
    same "$(json tables.0.rows)" 1
    printf '  T [K]   coefficient [1e-6/K]\n  100     10\n  200     12\n' >blanks.txt
    kel 0 read blanks.txt --delimiter blanks --json
    same "$(json tables.0.rows)" 2
    make_line
    kel 1 read line.csv --delimiter semicolon
    refused 2 "--delimiter is" read line.csv --delimiter pipe
}

@test "--transpose: temperatures across the top" {
    printf 'temperature [K],100,200,300\ncoefficient [1e-6/K],10,12,14\n' >across.csv
    kel 0 read across.csv --transpose --json
    near "$(json tables.0.range_K.1)" 300 0
}

@test "--series picks one, and without it several are an error that lists them" {
    printf 'temperature [K],coefficient: QA [1e-6/K],coefficient: QB [1e-6/K]\n100,10,20\n200,12,22\n' >two.csv
    kel 1 read two.csv
    has "$stderr" QA
    has "$stderr" QB
    kel 0 read two.csv --series QB --json
    same "$(json tables.0.columns.0.label)" QB
}

@test "--kind picks a column of one measurement, all takes them as independent" {
    {
        echo "# reference temperature: 200 K"
        echo "temperature [K],coefficient [1e-6/K],expansion [1e-6]"
        awk 'BEGIN { for (t = 210; t <= 300; t += 10) printf "%d,%.2f,%.1f\n", t, 8 + 0.02 * t, 8 * (t - 200) + 0.01 * (t * t - 40000) }'
    } >side.csv
    kel 0 read side.csv --json
    same "$(json tables.0.columns.0.kind)" expansion
    kel 0 read side.csv --kind coefficient --json
    same "$(json tables.0.columns.0.kind)" coefficient
    kel 0 read side.csv --kind all --json
    same "$(json tables.0.columns.#)" 2
    refused 2 "--kind is" read side.csv --kind secant
}

@test "--as csv writes the table, and reading that gives the same bytes" {
    make_line
    kel 0 read line.csv --as csv
    printf '%s\n' "$output" >own.csv
    has "$output" "temperature [K],coefficient [1e-6/K]"
    has "$output" "300,14.00"
    kel 0 read own.csv --as csv -o again.csv
    same "$output" ""
    cmp own.csv again.csv
}

@test "--as csv: wrong usages" {
    make_line
    make_noisy
    refused 2 "takes one table" read line.csv noisy.csv --as csv
    refused 2 "--as csv is the one layout" read line.csv --as xml
    refused 2 "exclude" read line.csv --as csv --json
    refused 2 "-o needs --as csv" read line.csv -o x.csv
    refused 2 "needs a table" read
}

@test "-o never overwrites the input" {
    make_line
    cp line.csv before.csv
    refused 2 "would overwrite the input line.csv" read line.csv --as csv -o line.csv
    ln -s line.csv link.csv
    refused 2 "would overwrite" read line.csv --as csv -o ./link.csv
    cmp line.csv before.csv
}

@test "-o on a full device fails and leaves the device" {
    make_line
    refused 1 "/dev/full" read line.csv --as csv -o /dev/full
    test -c /dev/full
}

@test "a reference temperature that no table states is said to be assumed" {
    make_noisy
    kel 0 read noisy.csv
    has "$output" "none stated: 293.15 K is assumed"
    kel 0 read noisy.csv --set 'reference temperature: 300 K'
    hasnt "$output" "assumed"
}

@test "a record is no table" {
    make_line_record
    refused 1 "line.json: is a record, not a table" read line.json
    refused 1 "line.json: is a record, not a table" fit line.json
}

@test "--leave-out that meets no table, and malformed options: wrong usage" {
    make_line
    refused 2 "--leave-out lime.csv:6=slipped names none of the tables" read line.csv --leave-out 'lime.csv:6=slipped'
    refused 2 "FILE:LINE=REASON" read line.csv --leave-out 'line.csv:6'
    refused 2 "FILE:LINE=REASON" fit line.csv --leave-out 'line.csv=slipped'
    refused 2 "QUANTITY [UNIT]" read line.csv --column 'coefficient [1e-6/K]'
    refused 2 "volume" read line.csv --column 'volume [K]=2'
    refused 2 "furlong" read line.csv --column 'coefficient [1/furlong]=2'
    refused 2 "the setting" value line.csv 200K --set 'material LN-9'
}

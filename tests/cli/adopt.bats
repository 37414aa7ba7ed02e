#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# kelspan adopt: a record from published coefficients.
load common

@test "JSON has the keys that scripts rely on" {
    make_coefficients
    kel 0 adopt coefficients.csv -o c.json --json
    same "$(json record)" c.json
    same "$(json form)" adopted
    same "$(json degree)" 1
    same "$(json observations)" 0
    same "$(json residual_standard_deviation)" null
    same "$(json columns.#)" 0
    same "$(json chi2)" null
    near "$(json range_K.0)" 100 0
    near "$(json range_K.1)" 300 0
    near "$(json reference_temperature_K)" 200 0
    same "$(json base)" "reference length"
    same "$(json warnings.#)" 0
}

@test "the record answers with the published curve" {
    make_coefficients
    kel 0 adopt coefficients.csv -o c.json
    kel 0 integrate c.json --from 100K --to 300K --json
    near "$(json integral)" 2800e-6 1e-17
    same "$(json integral_u)" null
}

@test "a stated uncertainty becomes that of the answers" {
    make_coefficients
    sed -i '1i # uncertainty: 2 %' coefficients.csv
    kel 0 adopt coefficients.csv -o c.json --json
    same "$(json variance)" stated
    kel 0 integrate c.json --from 100K --to 300K --json
    near "$(json integral_u)" 56e-6 1e-17
    kel 0 adopt coefficients.csv
    has "$output" "the coefficients' stated uncertainty"
}

@test "the report for people" {
    make_coefficients
    kel 0 adopt coefficients.csv
    has "$output" "adopted of degree 1"
    has "$output" "100 to 300 K"
    has "$output" "not known"
    has "$output" "Nothing was saved"
    kel 0 adopt coefficients.csv -o c.json --temperature-unit degC --coefficient-unit ppm/degF
    has "$output" "-173.15 to 26.85 degC"
    has "$output" "ppm/degF"
    has "$output" "saved in c.json"
}

@test "--set fills in metadata" {
    make_coefficients
    grep -v 'reference temperature' coefficients.csv >bare.csv
    kel 0 adopt bare.csv --set 'reference temperature: 20 degC' --json
    near "$(json reference_temperature_K)" 293.15 0
}

@test "-o - and stdin" {
    make_coefficients
    kel 0 adopt coefficients.csv -o c.json
    kel 0 adopt coefficients.csv -o -
    printf '%s\n' "$output" >piped.json
    cmp c.json piped.json
    has "$stderr" "adopted of degree 1"
    kel_in coefficients.csv 0 adopt - --json
    same "$(json form)" adopted
    refused 2 "no --json" adopt coefficients.csv -o - --json
}

@test "an expansion that is not zero at its reference is shifted, and that is said" {
    cat >expansion.csv <<'END'
# curve: expansion [1e-5]
# variable: T [K]
# reference temperature: 200 K
from [K],to [K],power 0,power 1
100,300,-199.5,1
END
    kel 0 adopt expansion.csv -o e.json
    same "$(lines "$stderr")" 1
    has "$stderr" "warning"
    kel 0 value e.json 200K 300K --quantity expansion --json
    near "$(json rows.0.expansion)" 0 0
    near "$(json rows.1.expansion)" 100e-5 1e-17
}

@test "pieces in the order of temperature" {
    cat >two.csv <<'END'
# curve: coefficient [1e-6/K]
# variable: T [degC]
# reference temperature: 20 degC
from [degC],to [degC],power 0,power 1
-100,0,10,0.01
0,100,10,0.02
END
    kel 0 adopt two.csv --json
    same "$(json pieces.#)" 2
    near "$(json range_K.0)" 173.15 1e-12
    kel 0 adopt two.csv -o two.json
    kel 0 value two.json 50degC -50degC --json
    near "$(json rows.0.coefficient_per_K)" 11e-6 1e-17
    near "$(json rows.1.coefficient_per_K)" 9.5e-6 1e-17
}

@test "errors name their place, nothing is written" {
    make_coefficients
    sed 's/0\.02/0.0x2/' coefficients.csv >bad.csv
    refused 1 "bad.csv:6:" adopt bad.csv -o bad.json
    test ! -e bad.json
    kel 1 adopt bad.csv --json
    same "$(json_error line)" 6
}

@test "wrong usage" {
    make_coefficients
    refused 2 "one file of coefficients" adopt
    refused 2 "one file of coefficients" adopt coefficients.csv coefficients.csv
    refused 2 "would overwrite" adopt coefficients.csv -o coefficients.csv
    make_line_record
    refused 1 "a record already" adopt line.json
}

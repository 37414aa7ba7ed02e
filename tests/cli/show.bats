#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# kelspan show: what a record holds.
load common

@test "JSON has the keys that scripts rely on" {
    make_line_record
    kel 0 show line.json --json
    same "$(json base)" "reference length"
    near "$(json reference_temperature_K)" 200 0
    near "$(json range_K.0)" 100 0
    near "$(json range_K.1)" 300 0
    same "$(json pieces.#)" 1
    near "$(json pieces.0.from_K)" 100 0
    near "$(json pieces.0.to_K)" 300 0
    near "$(json pieces.0.chebyshev.0)" 12e-6 1e-17
    near "$(json pieces.0.chebyshev.1)" 2e-6 1e-17
    same "$(json steps.#)" 0
    same "$(json modes.0.kind)" fit
    hasnt "$output" powers
    same "$(json sources.0.material)" LN-1
}

@test "--powers in JSON: coefficients of T in kelvin, lowest first, with u" {
    make_line_record
    kel 0 show line.json --powers --json
    near "$(json pieces.0.powers_per_K.0)" 8e-6 1e-16
    near "$(json pieces.0.powers_per_K.1)" 2e-8 1e-18
    # Rounding of the printed digits alone: u = 1e-8/sqrt 12 a row; of the slope u/sqrt(sum (T - 200)^2).
    near "$(json pieces.0.powers_u.1)" "$(awk 'BEGIN { print 1e-8 / sqrt(12) / sqrt(44000) }')" 1e-16
}

@test "--powers without a known uncertainty: null" {
    make_coefficients
    kel 0 adopt coefficients.csv -o c.json
    kel 0 show c.json --powers --json
    same "$(json modes.#)" 0
    same "$(json pieces.0.powers_u)" "[null,null]"
    kel 0 show c.json --powers
    has "$output" "not known"
}

@test "--powers in a unit of choice" {
    make_line_record
    kel 0 show line.json --powers --temperature-unit degC
    # alpha = 8 + 0.02 (t + 273.15) = 13.463 + 0.02 t
    has "$output" "13.463"
    has "$output" "T in degC"
    kel 0 show line.json --powers --temperature-unit degF --coefficient-unit 1e-6/degF
    # (8 + 0.02 (t + 459.67)/1.8)/1.8 = 7.28191... + 0.0061728... t
    has "$output" "7.28191358"
    has "$output" "0.00617283950"
}

@test "--powers --csv is a file that adopt reads back" {
    make_line_record
    for u in "" "--temperature-unit degC" "--temperature-unit degF --coefficient-unit ppm/degF"; do
        kel 0 show line.json --powers --csv $u
        printf '%s\n' "$output" >back.csv
        kel 0 adopt back.csv -o back.json --quiet
        kel 0 value back.json 100K 250K --accept extrapolated --json
        near "$(json rows.0.coefficient_per_K)" 10e-6 1e-19
        near "$(json rows.1.coefficient_per_K)" 13e-6 1e-19
        near "$(json rows.1.expansion)" 625e-6 1e-17
    done
}

@test "text" {
    make_line_record
    kel 0 show line.json
    has "$output" "polynomial of degree 1"
    has "$output" "line.csv: LN-1"
    has "$output" "100 to 300 K"
    has "$output" "digest"
    kel 0 show line.json --temperature-unit degC
    has "$output" "-173.15 to 26.85 degC"
}

@test "steps and transitions" {
    make_step
    kel 0 fit step.csv --degree 0 -o step.json
    kel 0 show step.json --json
    same "$(json steps.0.kind)" fitted
    near "$(json steps.0.at_K)" 250 0
    near "$(json steps.0.length)" 100e-6 1e-15
    same "$(json pieces.#)" 2
    kel 0 show step.json
    has "$output" "250 K, fitted step"
}

@test "shared error and lot spread are modes of their own" {
    make_line
    sed -i -e '1i # uncertainty: 1 % shared' -e '1i # lot spread: 2 %' line.csv
    kel 0 fit line.csv --degree 1 -o line.json
    kel 0 show line.json --json
    has "$output" '"shared"'
    has "$output" '"lot"'
    kel 0 show line.json
    has "$output" "scatter of the fit, stated shared error, lot spread"
}

@test "wrong usage" {
    make_line_record
    refused 2 "one record" show
    refused 2 "one record" show line.json line.json
    refused 2 "--csv needs --powers" show line.json --csv
}

@test "a table is fitted with the defaults, its reading options are taken" {
    printf 'temperature [K];coefficient: QA [1e-6/K];coefficient: QB [1e-6/K]\n200;10;20\n300;12;22\n400;14;24\n' >two.csv
    kel 0 show two.csv --series QB --json
    near "$(json pieces.0.chebyshev.0)" 22e-6 1e-17
    same "$(json warnings.0.code)" fitted-table
}

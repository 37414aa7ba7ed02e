#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# kelspan value: answers at temperatures.
load common

@test "JSON has the keys that scripts rely on" {
    make_line_record
    kel 0 value line.json 250K --json
    near "$(json rows.0.temperature_K)" 250 0
    near "$(json rows.0.coefficient_per_K)" 13e-6 1e-19
    near "$(json rows.0.mean_coefficient_per_K)" 12.5e-6 1e-19
    near "$(json rows.0.expansion)" 625e-6 1e-18
    near "$(json rows.0.length_ratio)" 1.000625 1e-15
    for k in coefficient_u_per_K mean_coefficient_u_per_K expansion_u length_ratio_u; do
        test "$(json rows.0.$k)" != null
    done
    same "$(json rows.0.extrapolated)" false
    same "$(json rows.0.extrapolated_quantities)" "[]"
    same "$(json rows.0.reservations)" "[]"
    same "$(json warnings)" "[]"
}

@test "at the reference temperature: expansion 0 with u 0, the mean is the coefficient" {
    make_line_record
    kel 0 value line.json 200K --json
    near "$(json rows.0.expansion)" 0 0
    near "$(json rows.0.expansion_u)" 0 0
    near "$(json rows.0.length_ratio)" 1 0
    near "$(json rows.0.mean_coefficient_per_K)" 12e-6 1e-19
}

@test "several temperatures, also as a list" {
    make_line_record
    kel 0 value line.json 100K,-100degC 300K --json
    same "$(json rows.#)" 3
    near "$(json rows.1.temperature_K)" 173.15 0
    near "$(json rows.2.temperature_K)" 300 0
}

@test "text: units of the question" {
    make_line_record
    kel 0 value line.json -100degC
    has "$output" "[degC]"
    has "$output" "-100"
    has "$output" "[1e-6/K]"
    kel 0 value line.json -100degF
    has "$output" "[degF]"
    has "$output" "[1e-6/degF]"
    kel 0 value line.json -100degF --temperature-unit K --coefficient-unit um/m-K
    has "$output" "199.8167"
    hasnt "$output" "degF"
}

@test "text: digits that U supports, and what it covers" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 -o n.json
    kel 0 value n.json 270K
    # u of the mean of eight: 0.0577/sqrt 8 = 0.0204; U = 0.041
    has "$output" "11.400"
    has "$output" "0.041"
    has "$output" "U (k = 2) covers: scatter of the fit"
    near "$(value_of 'take k = ')" 2.447 0.005
}

@test "--csv: header in the product's grammar, all digits, reservations by their codes" {
    make_line_record
    kel 3 value line.json 250K 350K --csv
    same "$(printf '%s\n' "$output" | grep -v '^#' | head -n 1)" \
        "temperature [K],coefficient [1/K],uncertainty [1/K],mean coefficient [1/K],uncertainty [1/K],expansion [1],uncertainty [1],reservations,source"
    row=$(printf '%s\n' "$output" | grep '^250,')
    near "$(printf '%s' "$row" | cut -d, -f2)" 13e-6 1e-19
    near "$(printf '%s' "$row" | cut -d, -f6)" 625e-6 1e-18
    same "$(printf '%s' "$row" | cut -d, -f8)" ""
    same "$(printf '%s\n' "$output" | grep '^350,' | cut -d, -f8)" extrapolated
    has "$output" "# reference temperature: 200 K"
}

@test "--csv follows the units asked for" {
    make_line_record
    kel 0 value line.json 250K --csv --temperature-unit degC --coefficient-unit 1e-6/K
    has "$output" "temperature [degC],coefficient [1e-6/K],uncertainty [1e-6/K]"
    has "$output" "-23.15,13"
}

@test "--csv: an unknown uncertainty is an empty cell" {
    make_coefficients
    kel 0 adopt coefficients.csv -o c.json
    kel 0 value c.json 250K --csv
    same "$(printf '%s\n' "$output" | grep '^250,' | cut -d, -f3)" ""
    same "$(printf '%s\n' "$output" | grep '^250,' | cut -d, -f8)" unknown-uncertainty
}

@test "other quantities that lean on the curve outside are named" {
    make_line
    sed -i 's/^# reference temperature: 200 K/# reference temperature: 50 K/' line.csv
    kel 0 fit line.csv --degree 1 -o cold.json --quiet
    kel 0 value cold.json 200K --json
    same "$(json rows.0.extrapolated)" false
    same "$(json rows.0.extrapolated_quantities)" '["mean_coefficient_per_K","expansion","length_ratio"]'
    kel 0 value cold.json 200K
    has "$output" "extrapolated: mean coefficient, expansion, length ratio"
}

@test "--quantity: flags and status follow the one asked for" {
    make_line
    sed -i 's/^# reference temperature: 200 K/# reference temperature: 50 K/' line.csv
    kel 0 fit line.csv --degree 1 -o cold.json --quiet
    for q in mean expansion ratio; do
        kel 3 value cold.json 200K --quantity $q --json
        same "$(json rows.0.extrapolated)" true
        has "$(json rows.0.reservations.0.text)" "the reference temperature 50 K is outside the validity range"
        hasnt "$(json rows.0.extrapolated_quantities)" '"coefficient_per_K"'
    done
    kel 0 value cold.json 200K --quantity coefficient
    refused 1 "reference temperature 50 K is outside" value cold.json 200K --quantity expansion --within-range
    refused 2 "--quantity is" value cold.json 200K --quantity strain
}

@test "--reference: answers from another temperature" {
    make_line_record
    kel 0 value line.json 250K --reference 100K --json
    near "$(json reference_temperature_K)" 100 0
    # e(250) = 625e-6, e(100) = -1100e-6 from 200 K
    near "$(json rows.0.expansion)" "$(awk 'BEGIN { printf "%.17g", (625e-6 + 1100e-6) / (1 - 1100e-6) }')" 1e-17
    near "$(json rows.0.coefficient_per_K)" "$(awk 'BEGIN { printf "%.17g", 13e-6 / (1 - 1100e-6) }')" 1e-19
    refused 2 "--reference" value line.json 250K --reference 100
}

@test "--base: the coefficient of the current length" {
    make_line_record
    kel 0 value line.json 250K --base current --json
    same "$(json base)" "current length"
    near "$(json rows.0.coefficient_per_K)" "$(awk 'BEGIN { printf "%.17g", 13e-6 / 1.000625 }')" 1e-19
    near "$(json rows.0.expansion)" 625e-6 1e-18
    refused 2 "--base is" value line.json 250K --base other
}

@test "temperatures need a unit, and cannot be below 0 K" {
    make_line_record
    refused 2 "250 needs a unit" value line.json 250
    refused 2 "temperature:" value line.json 250mm
    refused 2 "temperature:" value line.json -300degC
    refused 2 "temperature:" value line.json nanK
    refused 2 "temperature:" value line.json 200K,
    kel 3 value line.json 0K
}

@test "wrong usage" {
    make_line_record
    refused 2 "value needs a record" value
    refused 2 "value needs temperatures" value line.json
}

@test "CSV: quantities beside the main one that are extrapolated stand in its source column" {
    make_line_record
    kel 0 value line.json 150K --reference 50K --csv --accept extrapolated
    has "$output" ",extrapolated: mean coefficient+expansion"
    printf '%s\n' "$output" >back.csv
    kel 0 read back.csv --kind all --quiet
    kel 0 value line.json 150K --csv --accept extrapolated
    hasnt "$output" "extrapolated"
}

@test "an assumed reference temperature is said" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 -o n.json
    kel 0 value n.json 270K
    has "$output" "none stated: 293.15 K is assumed"
    kel 0 value n.json 270K --reference 280K
    hasnt "$output" "assumed"
}

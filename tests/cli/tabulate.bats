#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# kelspan tabulate: answers at even steps.
load common

@test "JSON has the keys that scripts rely on" {
    make_line_record
    kel 0 tabulate line.json --from 100K --to 300K --step 50K --json
    same "$(json rows.#)" 5
    near "$(json rows.3.temperature_K)" 250 0
    near "$(json rows.3.coefficient_per_K)" 13e-6 1e-19
    near "$(json rows.3.mean_coefficient_per_K)" 12.5e-6 1e-19
    near "$(json rows.3.expansion)" 625e-6 1e-18
    near "$(json rows.3.length_ratio)" 1.000625 1e-15
    same "$(json rows.3.extrapolated)" false
    same "$(json rows.3.reservations)" "[]"
    same "$(json warnings)" "[]"
}

@test "the last step lands on --to where the steps meet it, and stops before it where not" {
    make_line_record
    kel 0 tabulate line.json --from 100K --to 300K --step 0.1K --json
    same "$(json rows.#)" 2001
    near "$(json rows.2000.temperature_K)" 300 0
    near "$(json rows.3.temperature_K)" 100.3 0
    kel 0 tabulate line.json --from 100K --to 300K --step 70K --json
    same "$(json rows.#)" 3
    near "$(json rows.2.temperature_K)" 240 0
    kel 0 tabulate line.json --from 200K --to 200K --step 1K --json
    same "$(json rows.#)" 1
}

@test "downwards" {
    make_line_record
    kel 0 tabulate line.json --from 300K --to 100K --step 100K --json
    same "$(json rows.#)" 3
    near "$(json rows.1.temperature_K)" 200 0
    near "$(json rows.2.temperature_K)" 100 0
}

@test "steps in other units" {
    make_line_record
    kel 0 tabulate line.json --from -100degC --to 20degC --step 10degC --json
    same "$(json rows.#)" 13
    near "$(json rows.12.temperature_K)" 293.15 0
    near "$(json rows.7.temperature_K)" 243.15 0
    kel 0 tabulate line.json --from -99.67degF --to 300K --step 18degF --json
    same "$(json rows.#)" 11
    near "$(json rows.1.temperature_K)" 210 1e-12
    near "$(json rows.10.temperature_K)" 300 0
}

@test "text in the units of the question" {
    make_line_record
    kel 0 tabulate line.json --from -100degC --to 20degC --step 40degC
    has "$output" "[degC]"
    same "$(printf '%s\n' "$output" | awk '$1 == "-60" || $1 == "-20" || $1 == "20" || $1 == "-100"' | wc -l)" 4
    kel 0 tabulate line.json --from -100degF --to 80degF --step 10degF
    has "$output" "[1e-6/degF]"
    kel 0 tabulate line.json --from -100degF --to 80degF --step 90degF --temperature-unit K --coefficient-unit ppm/K
    has "$output" "[K]"
    has "$output" "249.8167"
}

@test "--csv: the product's grammar" {
    make_line_record
    kel 0 tabulate line.json --from 100K --to 300K --step 50K --csv
    same "$(printf '%s\n' "$output" | grep -v '^#' | head -n 1)" \
        "temperature [K],coefficient [1/K],uncertainty [1/K],mean coefficient [1/K],uncertainty [1/K],expansion [1],uncertainty [1],reservations,source"
    same "$(printf '%s\n' "$output" | grep -vc '^#')" 6
    has "$output" "# reference temperature: 200 K"
    has "$output" "# base: reference length"
    has "$output" "# material: LN-1"
    near "$(printf '%s\n' "$output" | grep '^250,' | cut -d, -f4)" 12.5e-6 1e-19
}

@test "--reference and --base" {
    make_line_record
    kel 0 tabulate line.json --from 100K --to 300K --step 100K --reference 100K --json
    near "$(json rows.0.expansion)" 0 0
    near "$(json rows.2.expansion)" "$(awk 'BEGIN { printf "%.17g", 2400e-6 / (1 - 1100e-6) }')" 1e-17
    kel 0 tabulate line.json --from 100K --to 300K --step 100K --base current --json
    near "$(json rows.2.coefficient_per_K)" "$(awk 'BEGIN { printf "%.17g", 14e-6 / 1.0013 }')" 1e-19
    same "$(json base)" "current length"
}

@test "reservations stand beside their rows" {
    make_line_record
    kel 3 tabulate line.json --from 280K --to 320K --step 20K --csv
    same "$(printf '%s\n' "$output" | grep '^300,' | cut -d, -f8)" ""
    same "$(printf '%s\n' "$output" | grep '^320,' | cut -d, -f8)" extrapolated
    same "$(lines "$stderr")" 1
    kel 3 tabulate line.json --from 280K --to 320K --step 20K --json
    same "$(json rows.2.extrapolated)" true
    same "$(json rows.2.reservations.0.code)" extrapolated
    same "$stderr" ""
    kel 0 tabulate line.json --from 280K --to 320K --step 20K --accept extrapolated
}

@test "--quantity: the one that flags follow" {
    make_line
    sed -i 's/^# reference temperature: 200 K/# reference temperature: 50 K/' line.csv
    kel 0 fit line.csv --degree 1 -o cold.json --quiet
    kel 0 tabulate cold.json --from 100K --to 200K --step 50K
    kel 3 tabulate cold.json --from 100K --to 200K --step 50K --quantity expansion
}

@test "more rows than are aligned at once" {
    make_line_record
    kel 0 tabulate line.json --from 100K --to 300K --step 0.1K
    same "$(printf '%s\n' "$output" | grep -c '^ *[0-9]')" 2001
    same "$(printf '%s\n' "$output" | grep -c 'coefficient')" 1
}

@test "wrong usage" {
    make_line_record
    refused 2 "needs --from T, --to T and --step D" tabulate line.json --from 100K --to 200K
    refused 2 "--step must be above 0" tabulate line.json --from 100K --to 200K --step 0K
    refused 2 "--step must be above 0" tabulate line.json --from 100K --to 200K --step -5K
    refused 2 "--step" tabulate line.json --from 100K --to 200K --step 5
    refused 2 "more than 10000000 rows" tabulate line.json --from 100K --to 300K --step 1e-6K
    refused 2 "one record" tabulate --from 100K --to 200K --step 1K
}

@test "an assumed reference temperature is said" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 -o n.json
    kel 0 tabulate n.json --from 200K --to 300K --step 50K
    has "$output" "none stated: 293.15 K is assumed"
}

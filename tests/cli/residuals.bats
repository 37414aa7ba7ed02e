#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# kelspan residuals: observations, fitted values, what was left out.
load common

@test "JSON has the keys that scripts rely on" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 -o n.json
    kel 0 residuals n.json --json
    same "$(json rows.#)" 8
    same "$(json rows.1.table)" noisy.csv
    same "$(json rows.1.line)" 3
    same "$(json rows.1.kind)" coefficient
    near "$(json rows.1.temperature_K)" 220 0
    near "$(json rows.1.observed)" 10.35e-6 1e-20
    near "$(json rows.1.fitted)" 10.4e-6 1e-18
    near "$(json rows.1.residual)" -0.05e-6 1e-18
    near "$(json rows.1.shared_term)" 0 0
    near "$(json rows.1.u)" 5.773502691896258e-8 1e-11
    same "$(json rows.1.left_out)" null
}

@test "intervals have from_K and to_K" {
    make_step
    kel 0 fit step.csv --degree 0 -o step.json
    kel 0 residuals step.json --json
    near "$(json rows.0.from_K)" 200 0
    near "$(json rows.0.to_K)" 100 0
    same "$(json rows.0.kind)" expansion
}

@test "left-out rows are listed with their reason" {
    make_line
    sed -i '6s/10.80/(10.80)/' line.csv
    kel 0 fit line.csv --degree 1 --leave-out 'line.csv:8=slipped rod' -o line.json
    kel 0 residuals line.json
    has "$output" "left out: "
    has "$output" "slipped rod"
    kel 0 residuals line.json --json
    has "$(json rows.4.left_out)" "slipped rod"
}

@test "text is aligned, in the units asked for" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 -o n.json
    kel 0 residuals n.json
    has "$output" "[1e-6/K]"
    has "$output" "10.4000"
    has "$output" "-0.0500"
    kel 0 residuals n.json --coefficient-unit 1e-6/degF --temperature-unit degC
    has "$output" "[1e-6/degF]"
    has "$output" "[degC]"
    has "$output" "-73.15"
}

@test "--csv" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 -o n.json
    kel 0 residuals n.json --csv
    same "$(printf '%s\n' "$output" | head -n 1)" \
        "table,line,kind,from [K],to [K],observed,fitted,residual,shared term,u,unit,left out"
    same "$(lines "$output")" 9
    row=$(printf '%s\n' "$output" | sed -n 3p)
    near "$(printf '%s' "$row" | cut -d, -f8)" -0.05e-6 1e-18
    same "$(printf '%s' "$row" | cut -d, -f11)" "1/K"
}

@test "a reason with a comma stands in quotes" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 --leave-out 'noisy.csv:4=slipped, "twice"' -o n.json
    kel 0 residuals n.json --csv
    has "$output" ',"slipped, ""twice"""'
}

@test "a shared error has its term beside the residual" {
    make_line
    {
        echo "# uncertainty: 5 % shared"
        echo "# reference temperature: 200 K"
        echo "temperature [K],coefficient [1e-6/K]"
        awk 'BEGIN { for (t = 100; t <= 300; t += 20) printf "%d,%.4f\n", t, 1.03 * (10 + 0.02 * (t - 100)) }'
    } >scaled.csv
    kel 0 fit line.csv scaled.csv --degree 1 -o both.json --quiet
    kel 0 residuals both.json --json
    same "$(json rows.0.table)" line.csv
    near "$(json rows.0.shared_term)" 0 0
    # 3 % of 10e-6 at 100 K, but for the little by which a prior of 5 % holds it back.
    same "$(json rows.11.table)" scaled.csv
    near "$(json rows.11.shared_term)" 0.3e-6 0.002e-6
    kel 0 residuals both.json
    has "$output" "shared"
    has "$output" "scaled.csv"
}

@test "an adopted record has none, and says why" {
    make_coefficients
    kel 0 adopt coefficients.csv -o c.json
    refused 1 "adopted from published coefficients" residuals c.json
    kel 1 residuals c.json --json
    has "$(json_error error)" "adopted"
}

@test "wrong usage" {
    make_line_record
    refused 2 "one record" residuals
    refused 2 "one record" residuals line.json line.json
    refused 2 "exclude" residuals line.json --csv --json
}

@test "an assumed reference temperature is said" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 -o n.json
    kel 0 residuals n.json
    has "$output" "none stated: 293.15 K is assumed"
}

#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# kelspan integrate: one interval, and streams of intervals.
load common

@test "JSON has the keys that scripts rely on" {
    make_line_record
    kel 0 integrate line.json --from 250K --to 100K --length 250mm --json
    near "$(json from_K)" 250 0
    near "$(json to_K)" 100 0
    # e(250) = 625e-6, e(100) = -1100e-6
    near "$(json integral)" -1725e-6 1e-18
    ratio=$(awk 'BEGIN { printf "%.17g", (1 - 1100e-6) / (1 + 625e-6) }')
    near "$(json length_ratio)" "$ratio" 1e-15
    near "$(json length_m)" 0.25 0
    near "$(json length_to_m)" "$(awk -v r=$ratio 'BEGIN { printf "%.17g", 0.25 * r }')" 1e-16
    near "$(json change_m)" "$(awk 'BEGIN { printf "%.17g", -0.25 * 1725e-6 / 1.000625 }')" 1e-18
    near "$(json mean_coefficient_per_K)" 11.5e-6 1e-19
    for k in integral_u length_ratio_u change_u_m mean_coefficient_u_per_K covers.fit; do
        test "$(json $k)" != null
    done
    near "$(json covers.shared)" 0 0
    near "$(json covers.lot)" 0 0
    u=$(json integral_u)
    near "$(json covers.fit)" "$(awk -v u=$u 'BEGIN { printf "%.17g", u * u }')" 1e-25
    same "$(json extrapolated)" false
    same "$(json extrapolated_quantities)" "[]"
    near "$(json outside_K)" 0 0
    same "$(json reservations)" "[]"
    same "$(json warnings)" "[]"
}

@test "without a length there is no change" {
    make_line_record
    kel 0 integrate line.json --from 100K --to 250K --json
    for k in length_m length_to_m change_m change_u_m; do
        same "$(json $k)" null
    done
}

@test "--length-at: the length is known at a third temperature" {
    make_line_record
    kel 0 integrate line.json --from 100K --to 300K --length 1m --length-at 200K --json
    near "$(json length_m)" 0.9989 1e-16
    near "$(json length_to_m)" 1.0013 1e-15
    near "$(json change_m)" 2400e-6 1e-18
    refused 2 "--length-at needs --length" integrate line.json --from 100K --to 300K --length-at 200K
}

@test "parts of the uncertainty" {
    make_line
    sed -i -e '1i # uncertainty: 1 % shared' -e '1i # lot spread: 2 %' line.csv
    kel 0 fit line.csv --degree 1 -o line.json
    kel 0 integrate line.json --from 100K --to 300K --json
    near "$(json covers.shared)" "$(awk 'BEGIN { print (24e-6)^2 }')" 2e-12
    near "$(json covers.lot)" "$(awk 'BEGIN { print (48e-6)^2 }')" 2e-12
    kel 0 integrate line.json --from 100K --to 300K
    has "$output" "lot spread (80 % of u^2)"
    has "$output" "stated shared error (20 % of u^2)"
}

@test "text answers in the units of the question" {
    make_line_record
    kel 0 integrate line.json --from 20degC --to -150degC --length 250mm
    has "$output" "from 20 degC to -150 degC"
    has "$output" "250 mm at 20 degC"
    has "$output" " um   U = "
    near "$(value_of 'change in length')" "$(awk 'BEGIN { a = 8 * 93.15 + 0.01 * (293.15^2 - 40000); b = 8 * (123.15 - 200) + 0.01 * (123.15^2 - 40000)
        print 250e3 * (b - a) / (1e6 + a) }')" 0.06
    kel 0 integrate line.json --from 68degF --to -200degF --length 12.5in
    has "$output" "12.5 in at 68 degF"
    has "$output" " mil   U = "
    has "$output" "e-6/degF"
    kel 0 integrate line.json --from 100K --to 300K --length 30m
    has "$output" " mm   U = "
}

@test "unit options in text" {
    make_line_record
    kel 0 integrate line.json --from 100K --to 300K --length 250mm --length-unit in --temperature-unit degC --coefficient-unit ppm/degC
    has "$output" "from -173.15 degC to 26.85 degC"
    has "$output" " in   U = "
    has "$output" "ppm/"
    refused 2 "--length-unit" integrate line.json --from 100K --to 300K --length-unit K
}

@test "outside the range: how far, and the reservation beside the number" {
    make_line_record
    kel 3 integrate line.json --from 250K --to 360K --json
    near "$(json outside_K)" 60 0
    same "$(json extrapolated)" true
    has "$(json reservations.0.text)" "250 K to 360 K leaves the validity range 100 K to 300 K of line.json"
    same "$(json extrapolated_quantities)" '["length_ratio","mean_coefficient_per_K"]'
    kel 3 integrate line.json --from 250K --to 360K
    has "$output" "60 K of the interval lie outside"
    has "$output" "reservation"
    kel 3 integrate line.json --from 400degF --to 500degF
    has "$output" "100 degF of the interval lie outside"
}

@test "a change of a length leans on the reference temperature too" {
    make_line
    sed -i 's/^# reference temperature: 200 K/# reference temperature: 50 K/' line.csv
    kel 0 fit line.csv --degree 1 -o cold.json --quiet
    kel 0 integrate cold.json --from 150K --to 250K
    kel 3 integrate cold.json --from 150K --to 250K --length 1m --json
    has "$(json reservations.0.text)" "the reference temperature 50 K is outside"
    hasnt "$(json extrapolated_quantities)" integral
}

@test "a transition that is crossed, with its step" {
    make_step
    kel 0 fit step.csv --degree 0 -o step.json
    kel 3 integrate step.json --from 240K --to 260K --json
    near "$(json integral)" 400e-6 1e-15
    kel 3 integrate step.json --from 240K --to 260K
    has "$output" "250 K crossed, fitted step 100"
    # A step at T belongs to e(T): crossed by lo < T <= hi.
    kel 3 integrate step.json --from 240K --to 250K --json
    near "$(json integral)" 200e-6 1e-15
    kel 0 integrate step.json --from 250K --to 260K --json
    near "$(json integral)" 200e-6 1e-15
}

@test "a caution below 123 K and above 343 K" {
    make_line_record
    kel 0 integrate line.json --from 200K --to 110K
    has "$output" "is not a procedure"
    kel 3 integrate line.json --from 290K --to 350K
    has "$output" "is not a procedure"
    kel 0 integrate line.json --from 200K --to 300K
    hasnt "$output" "procedure"
}

@test "an interval of nothing" {
    make_line_record
    kel 0 integrate line.json --from 200K --to 200K --length 1m --json
    near "$(json integral)" 0 0
    near "$(json change_m)" 0 0
    near "$(json mean_coefficient_per_K)" 12e-6 1e-19
}

@test "wrong usage" {
    make_line_record
    refused 2 "needs --from T and --to T" integrate line.json
    refused 2 "needs --from T and --to T" integrate line.json --from 100K
    refused 2 "one record" integrate --from 100K --to 200K
    refused 2 "--from" integrate line.json --from 100 --to 200K
    refused 2 "--length" integrate line.json --from 100K --to 200K --length 250
    refused 2 "--length must be above 0" integrate line.json --from 100K --to 200K --length 0mm
    refused 2 "unknown or ambiguous option --csv" integrate line.json --from 100K --to 200K --csv
}

# ---- pairs ----

@test "--pairs: a row out for each row in, exact header" {
    make_line_record
    printf 'from [K],to [K]\n100,300\n# a comment\n\n250,100\n' >pairs.csv
    kel 0 integrate line.json --pairs pairs.csv
    same "$(printf '%s\n' "$output" | head -n 1)" "from [K],to [K],integral [1],u [1],outside [K],reservations"
    same "$(lines "$output")" 3
    row=$(printf '%s\n' "$output" | sed -n 2p)
    same "$(printf '%s' "$row" | cut -d, -f1,2)" 100,300
    near "$(printf '%s' "$row" | cut -d, -f3)" 2400e-6 1e-18
    same "$(printf '%s' "$row" | cut -d, -f5,6)" "0,"
    near "$(printf '%s\n' "$output" | sed -n 3p | cut -d, -f3)" -1725e-6 1e-18
}

@test "--pairs on stdin, in other units, with lengths, columns in any order" {
    make_line_record
    printf 'Length (mm) ; TO [degC];from [degF]\n250;-173.15;-9.67\n' >pairs.csv
    kel_in pairs.csv 0 integrate line.json --pairs -
    same "$(printf '%s\n' "$output" | head -n 1)" \
        "from [K],to [K],integral [1],u [1],outside [K],change [m],u change [m],reservations"
    row=$(printf '%s\n' "$output" | sed -n 2p)
    near "$(printf '%s' "$row" | cut -d, -f1)" 250 1e-12
    near "$(printf '%s' "$row" | cut -d, -f2)" 100 1e-12
    near "$(printf '%s' "$row" | cut -d, -f3)" -1725e-6 1e-17
    near "$(printf '%s' "$row" | cut -d, -f6)" "$(awk 'BEGIN { printf "%.17g", -0.25 * 1725e-6 / 1.000625 }')" 1e-17
}

@test "--pairs: reservations by their codes, status 3, once on stderr with count and first place" {
    make_step
    kel 0 fit step.csv --degree 0 -o step.json
    printf 'from [K],to [K]\n300,350\n240,500\n300,450\n' >pairs.csv
    kel 3 integrate step.json --pairs pairs.csv
    same "$(printf '%s\n' "$output" | sed -n 2p | cut -d, -f6)" ""
    same "$(printf '%s\n' "$output" | sed -n 3p | cut -d, -f6)" extrapolated+transition
    same "$(printf '%s\n' "$output" | sed -n 3p | cut -d, -f5)" 100
    same "$(printf '%s\n' "$output" | sed -n 4p | cut -d, -f6)" extrapolated
    same "$(lines "$stderr")" 2
    has "$stderr" "pairs.csv:3: extrapolated: "
    has "$stderr" "2 answers"
    kel 0 integrate step.json --pairs pairs.csv --accept extrapolated,transition
}

@test "--pairs: an unknown uncertainty is an empty cell" {
    make_coefficients
    kel 0 adopt coefficients.csv -o c.json
    printf 'from [K],to [K]\n100,300\n' >pairs.csv
    kel 0 integrate c.json --pairs pairs.csv
    same "$(printf '%s\n' "$output" | sed -n 2p | cut -d, -f4,6)" ",unknown-uncertainty"
}

@test "--pairs stops before a bad row: status 1, the line is named, the rows before it stand" {
    make_line_record
    for bad in "2x,300" "100" "100,300,5" ",300" "-5,300" "100,nan" '100,"300'; do
        printf 'from [K],to [K]\n100,300\n150,250\n%s\n100,300\n' "$bad" >pairs.csv
        kel 1 integrate line.json --pairs pairs.csv
        same "$(lines "$output")" 3
        has "$stderr" "kelspan: pairs.csv:4:"
        same "$(lines "$stderr")" 1
    done
}

@test "--pairs with --within-range stops before an outside row" {
    make_line_record
    printf 'from [K],to [K]\n100,300\n150,450\n100,200\n' >pairs.csv
    kel 1 integrate line.json --pairs pairs.csv --within-range
    same "$(lines "$output")" 2
    has "$stderr" "pairs.csv:3:"
    has "$stderr" "leaves the validity range"
    printf 'from [K],to [K]\n100,300\n150,450\n100,2x\n' >pairs.csv
    kel 1 integrate line.json --pairs pairs.csv --within-range
    has "$stderr" "pairs.csv:3:"
    same "$(lines "$stderr")" 1
}

@test "--pairs: bad headers" {
    make_line_record
    for bad in 'from,to' 'from [K],to' 'from [K],to [mm]' 'from [K],to [K],depth [mm]' 'from [K],from [K]' 'from [K]' '100,300'; do
        printf '%s\n100,300\n' "$bad" >pairs.csv
        refused 1 "pairs.csv:1:" integrate line.json --pairs pairs.csv
    done
    : >empty.csv
    refused 1 "empty.csv" integrate line.json --pairs empty.csv
    printf 'from [K],to [K]\n' >none.csv
    kel 0 integrate line.json --pairs none.csv
    same "$(lines "$output")" 1
}

@test "--pairs: wrong usages" {
    make_line_record
    printf 'from [K],to [K]\n100,300\n' >pairs.csv
    refused 2 "no --json" integrate line.json --pairs pairs.csv --json
    refused 2 "--pairs brings" integrate line.json --pairs pairs.csv --from 100K
    refused 2 "--pairs brings" integrate line.json --pairs pairs.csv --length 1m
    refused 2 "cannot both come from stdin" integrate - --pairs -
    refused 1 "nowhere.csv" integrate line.json --pairs nowhere.csv
}

@test "--pairs: more rows than a batch, order kept" {
    make_line_record
    awk 'BEGIN { print "from [K],to [K]"; for (i = 0; i < 10000; i++) printf "%.2f,200\n", 100 + i / 100 }' >pairs.csv
    kel 0 integrate line.json --pairs pairs.csv
    printf '%s\n' "$output" | awk -F, 'NR > 1 { f = 100 + (NR - 2) / 100; want = (8 * (200 - f) + 0.01 * (40000 - f * f)) * 1e-6
        if ($1 - f > 1e-9 || f - $1 > 1e-9 || $3 - want > 1e-17 || want - $3 > 1e-17) { print NR, $0, want; bad = 1; exit } }
        END { exit bad || NR != 10001 }'
}

@test "--pairs: a full device is an error" {
    make_line_record
    printf 'from [K],to [K]\n100,300\n' >pairs.csv
    run --separate-stderr sh -c "'$KELSPAN' integrate line.json --pairs pairs.csv >/dev/full"
    same "$status" 1
    has "$stderr" "cannot write to stdout"
}

@test "--pairs: constant memory" {
    make_line_record
    # Half a million rows would take 20 MB if they were kept; the program may have 60 MB of address space beyond its code.
    awk 'BEGIN { print "from [K],to [K]"; for (i = 0; i < 500000; i++) print "100,300" }' >pairs.csv
    peak() { ( ulimit -v $1; "$KELSPAN" integrate line.json --pairs pairs.csv | tail -n 1 ); }
    if "$KELSPAN" --version >/dev/null && ldd "$KELSPAN" | grep -q asan; then skip "address space means nothing under the sanitizer"; fi
    base=$(for v in 60000 80000 100000 150000 200000 300000 400000 600000; do
        if ( ulimit -v $v; "$KELSPAN" value line.json 200K >/dev/null 2>&1 ); then echo $v; break; fi; done)
    has "$(peak $((base + 10000)))" "100,300,"
}

@test "an assumed reference temperature is said" {
    make_noisy
    kel 0 fit noisy.csv --degree 1 -o n.json
    kel 0 integrate n.json --from 220K --to 300K
    has "$output" "none stated: 293.15 K is assumed"
    make_line_record
    kel 0 integrate line.json --from 220K --to 300K
    hasnt "$output" "assumed"
}

@test "--pairs: a length that is not above 0 ends the stream at its place" {
    make_line_record
    for l in -250 0; do
        printf 'from [K],to [K],length [mm]\n200,100,250\n200,120,%s\n200,140,250\n' $l >pairs.csv
        kel 1 integrate line.json --pairs pairs.csv
        has "$stderr" "pairs.csv:3:9: the length must be above 0 m"
        same "$(lines "$output")" 2
    done
}

@test "a fitted step has the digits that its U supports" {
    {
        printf '# reference temperature: 200 K\n# transition: 250 K step\ntemperature [K],expansion [1e-6]\n'
        awk 'BEGIN { split("3 -3 -3 3 3 -3 -3 3", s, " ")
            for (i = 1; i <= 8; i++) { t = 85 + 15 * i; printf "%d,%d\n", t, 10 * (t - 200) + s[i] }
            for (i = 1; i <= 8; i++) { t = 245 + 15 * i; printf "%d,%d\n", t, 600 + 20 * (t - 250) + s[i] } }'
    } >rough.csv
    kel 0 fit rough.csv --degree 1 -o rough.json
    step=$(printf '%s\n' "$output" | sed -n 's/.*fitted step \([-0-9.]*e-6\).*/\1/p')
    kel 3 integrate rough.json --from 200K --to 300K
    has "$output" "crossed, fitted step $step"
}

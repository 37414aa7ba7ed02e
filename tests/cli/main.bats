#!/usr/bin/env bats
# SPDX-License-Identifier: GPL-3.0-or-later
# The program as a whole: dispatch, help, options, streams.
load common

@test "--version names the program and its version" {
    kel 0 --version
    has "$output" "kelspan 0."
    same "$stderr" ""
}

@test "no command: wrong usage, one line" {
    refused 2 "kelspan help"
}

@test "an unknown command names the near one" {
    refused 2 "the nearest is integrate" integrat
    refused 2 "the nearest is fit" fti
    refused 2 "the nearest is tabulate" tab
}

@test "an unknown command far from all names none" {
    refused 2 "there is no command 'xylophone'" xylophone
    hasnt "$stderr" "nearest"
}

@test "an unknown option before the command" {
    refused 2 "--frobnicate" --frobnicate fit
}

@test "help lists every command, --help the same" {
    kel 0 help
    all=$output
    for c in read fit adopt show residuals value integrate tabulate; do
        has "$output" "    $c "
    done
    kel 0 --help
    same "$output" "$all"
}

@test "help of each command, also by --help, names its options" {
    for c in read fit adopt show residuals value integrate tabulate help; do
        kel 0 help $c
        has "$output" "kelspan $c"
        has "$output" "--json"
        shown=$output
        kel 0 $c --help
        same "$output" "$shown"
    done
}

@test "help of an unknown command" {
    refused 2 "there is no command" help juggle
    refused 2 "the nearest is tabulate" help tabulat
    refused 2 "takes one command" help fit read
}

@test "help --json lists commands and options" {
    kel 0 help --json
    same "$(json commands.0.name)" read
    has "$(json commands.1.options)" '"degree"'
}

@test "wrong usage says where help is, in one line" {
    refused 2 "try: kelspan help fit" fit --degre=x --nothing
    refused 2 "unknown or ambiguous option --nothing" fit --nothing
    refused 2 "unknown or ambiguous option -x" fit -x
    refused 2 "option -o needs a value" fit a.csv -o
    refused 2 "option --degree needs a value" fit a.csv --degree
    refused 2 "option --quiet takes no value" fit a.csv --quiet=yes
    refused 2 "--degree is given twice" fit a.csv --degree 1 --degree 2
}

@test "wrong usage with --json is an object with null places" {
    kel 2 fit --json --nothing
    same "$output" ""
    has "$(json_error error)" "--nothing"
    same "$(json_error file)" null
    same "$(json_error line)" null
    same "$(json_error column)" null
}

@test "options stand anywhere behind the command" {
    make_line_record
    kel 0 integrate --from 100K line.json --to 300K --json
    first=$output
    kel 0 integrate --json line.json --to=300K --from=100K
    same "$output" "$first"
    kel 0 integrate --from 100K --to 300K --json -- line.json
    same "$output" "$first"
}

@test "an argument of '-' and a digit or point is an operand" {
    make_line_record
    kel 0 value line.json -100degC -.5degF --json
    near "$(json rows.0.temperature_K)" 173.15 0
    near "$(json rows.1.temperature_K)" 255.0944444444444 1e-12
    kel 0 value --json line.json -- -100degC
    near "$(json rows.0.temperature_K)" 173.15 0
    kel 0 integrate line.json --from -100degC --to -1e1degC --json
    near "$(json to_K)" 263.15 0
    refused 1 "No such file" value -5x 77K
}

@test "--json and --csv exclude each other" {
    make_line_record
    refused 2 "exclude" value line.json 200K --json --csv
}

@test "a full device: status 1 and one line, for each command that prints" {
    make_line_record
    make_coefficients
    for c in "read line.csv" "fit line.csv" "adopt coefficients.csv" "show line.json" "residuals line.json" \
        "value line.json 200K" "integrate line.json --from 100K --to 200K" "tabulate line.json --from 100K --to 200K --step 10K" \
        "help" "--version"; do
        run --separate-stderr sh -c "'$KELSPAN' $c >/dev/full"
        same "$status" 1
        has "$stderr" "cannot write to stdout"
        same "$(lines "$stderr")" 1
    done
}

@test "a closed stdout: status 1 and one line" {
    make_line_record
    for c in "value line.json 200K" "show line.json --json" "fit line.csv --json"; do
        run --separate-stderr sh -c "'$KELSPAN' $c >&-"
        same "$status" 1
        same "$(lines "$stderr")" 1
    done
}

@test "a closed stdout does not let a result land in a file that is opened" {
    make_line_record
    cp line.json before.json
    run --separate-stderr sh -c "'$KELSPAN' value line.json 200K >&-"
    same "$status" 1
    cmp line.json before.json
}

@test "a closed stdin is a failure to read, not a hang" {
    run --separate-stderr sh -c "'$KELSPAN' read - <&-"
    same "$status" 1
    same "$(lines "$stderr")" 1
}

@test "numbers do not follow the locale" {
    make_line_record
    kel 0 value line.json 210.5K --json
    first=$output
    for l in $(locale -a | grep -iE '^(de|fr|nl|pl|sv)_' | head -n 2); do
        LC_ALL=$l kel 0 value line.json 210.5K --json
        same "$output" "$first"
    done
    LC_ALL=de_DE.UTF-8 kel 0 value line.json 210.5K --json
    same "$output" "$first"
}

@test "help of help names a page that exists" {
    kel 0 help help
    has "$output" "kelspan(1)"
}

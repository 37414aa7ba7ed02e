# SPDX-License-Identifier: GPL-3.0-or-later
# What the command-line tests share. KELSPAN names the program, JSON_GET the helper that prints a value of a JSON text by its
# path. Each test runs in a folder of its own; the tables are invented, and lie on curves whose integrals are known.
bats_require_minimum_version 1.5.0

setup() {
    here=$BATS_TEST_DIRNAME
    KELSPAN=${KELSPAN:-$here/../../tools/kelspan}
    JSON_GET=${JSON_GET:-${KEL_BUILD_DIR:-$here/../..}/tests/support/json_get}
    export LC_ALL=C OPENBLAS_NUM_THREADS=1
    cd "$BATS_TEST_TMPDIR" || return 1
}

# kel STATUS ARGUMENT...: runs the program, asks for the exit status, leaves $output and $stderr.
kel() {
    local want=$1
    shift
    run --separate-stderr "$KELSPAN" "$@"
    if test "$status" -ne "$want"; then
        echo "kelspan $*: status $status, not $want"
        echo "stdout: $output"
        echo "stderr: $stderr"
        return 1
    fi
}

# kel with something on stdin: kel_in FILE STATUS ARGUMENT...
kel_in() {
    local from=$1
    shift
    kel "$@" <"$from"
}

# json PATH: a value of the last answer.
json() { printf '%s' "$output" | "$JSON_GET" "$1"; }
# json_error PATH: a value of the error object on stderr.
json_error() { printf '%s' "$stderr" | "$JSON_GET" "$1"; }

# near GOT WANT TOLERANCE: absolute distance, all numbers.
near() {
    awk -v a="$1" -v b="$2" -v tol="$3" 'BEGIN {
        if (a !~ /^[-+]?[0-9.]/ || !((a - b <= tol) && (b - a <= tol))) {
            printf "%s is not within %s of %s\n", a, tol, b
            exit 1
        }
    }'
}

# has TEXT PART: the part stands in the text.
has() {
    case $1 in
    *"$2"*) ;;
    *)
        echo "'$2' is not in: $1"
        return 1
        ;;
    esac
}

hasnt() {
    case $1 in
    *"$2"*)
        echo "'$2' is in: $1"
        return 1
        ;;
    esac
}

# same GOT WANT
same() {
    test "$1" = "$2" || {
        echo "got:  $1"
        echo "want: $2"
        return 1
    }
}

# lines TEXT: how many.
lines() { printf '%s' "$1" | awk 'END { print NR }'; }

# value_of LABEL: the first number behind a label in the text of the last answer.
value_of() {
    printf '%s\n' "$output" | awk -v label="$1" 'index($0, label) { s = substr($0, index($0, label) + length(label));
        if (match(s, /[-+]?[0-9]+(\.[0-9]+)?(e[-+]?[0-9]+)?/)) { print substr(s, RSTART, RLENGTH); exit } }'
}

# refused STATUS TEXT ARGUMENT...: an error of one line on stderr that holds the text, and nothing on stdout.
refused() {
    local want=$1 text=$2
    shift 2
    kel "$want" "$@" && has "$stderr" "$text" && same "$output" "" && same "$(lines "$stderr")" 1
}

# line.csv: alpha = 10 + 0.02 (T - 100) in 1e-6/K, from 100 K to 300 K every 20 K. Its integral from a to b is
# [8 (b - a) + 0.01 (b^2 - a^2)] 1e-6.
make_line() {
    {
        echo "# material: LN-1"
        echo "# reference temperature: 200 K"
        echo "temperature [K],coefficient [1e-6/K]"
        awk 'BEGIN { for (t = 100; t <= 300; t += 20) printf "%d,%.2f\n", t, 10 + 0.02 * (t - 100) }'
    } >line.csv
}

# line.json: the record of it.
make_line_record() {
    make_line
    kel 0 fit line.csv --degree 1 -o line.json
}

# noisy.csv: alpha = 10 + 0.02 (T - 200) from 200 K to 340 K with residuals of +0.05 and -0.05 that add to nothing and tilt nothing.
make_noisy() {
    {
        echo "temperature [K],coefficient [1e-6/K]"
        awk 'BEGIN { split("1 -1 1 -1 -1 1 -1 1", s, " ");
            for (i = 0; i < 8; i++) printf "%d,%.2f\n", 200 + 20 * i, 10 + 0.4 * i + 0.05 * s[i + 1] }'
    } >noisy.csv
}

# gap.csv: the line without the rows between 140 K and 240 K.
make_gap() {
    make_line
    grep -vE '^(160|180|200|220),' line.csv >gap.csv
}

# step.csv: expansion from 200 K, alpha 10e-6 below 250 K and 20e-6 above, where the length steps by 100e-6.
make_step() {
    {
        echo "# reference temperature: 200 K"
        echo "# transition: 250 K step"
        echo "temperature [K],expansion [1e-6]"
        awk 'BEGIN { for (t = 100; t <= 240; t += 20) if (t != 200) printf "%d,%d\n", t, 10 * (t - 200)
            for (t = 260; t <= 400; t += 20) printf "%d,%d\n", t, 500 + 100 + 20 * (t - 250) }'
    } >step.csv
}

# coefficients.csv: alpha = 10e-6 + 2e-8 T from 100 K to 300 K, without a stated uncertainty.
make_coefficients() {
    cat >coefficients.csv <<'END'
# material: PC-3
# curve: coefficient [1e-6/K]
# variable: T [K]
# reference temperature: 200 K
from [K],to [K],power 0,power 1
100,300,10,0.02
END
}

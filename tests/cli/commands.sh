#!/bin/sh
# The commands as a user types them.  usage: commands.sh PROGRAM SOURCE_ROOT
set -u
program=$1
root=$2
. "$root/tests/cli/tap.sh"
scratch=$(mktemp -d)
trap 'rm -rf "$scratch"' EXIT

check "help is an answer" exits 0 "$program" --help
check "help names the exit codes" says "exit codes" "$program" --help
check "the version is told" says "groundrules 0." "$program" --version
check "no command is a wrong command line" exits 2 "$program"
check "an unknown command is a wrong command line" exits 2 "$program" biuld x
check "and the nearest one is named" says "did you mean build" "$program" biuld x
check "an unknown option names the nearest" says "did you mean --quiet" "$program" check --quite x
check "an option of another command is refused" exits 2 "$program" check --json x
check "jobs must be a number" exits 2 "$program" build --jobs many x
check "a missing study is a system error" exits 5 "$program" check "$scratch/none.json"
check "the minimal study has nothing wrong" exits 0 "$program" check "$root/studies/minimal.json"
check "the demo study has nothing wrong" exits 0 "$program" check "$root/studies/family.json"

check "models are listed" says coupled-traces "$program" models
check "an unknown model names the nearest" says "did you mean trace" "$program" models trase
check "docs/models.md is what the declarations say" sh -c "'$program' models --markdown | diff - '$root/docs/models.md'"

point="height=1.6mm width=0.3mm gap=0.3mm thickness=35um dk=4.3"
check "a point is answered" exits 0 "$program" evaluate coupled-traces $point
check "an unknown input names the nearest" says "did you mean height" "$program" evaluate trace hieght=1mm
check "a missing unit is refused" exits 3 "$program" evaluate trace height=1.6 width=0.3mm
check "a wrong unit is refused" exits 3 "$program" evaluate trace height=1.6V width=0.3mm
check "not yet is said" says "not yet" "$program" evaluate coupled-traces height=1.6mm width=0.3mm gap=1mm frequency=2GHz
check "an input given twice is refused" exits 3 "$program" evaluate trace height=1.6mm height=1mm width=0.3mm
check "all wrong words are told in one run" says "'widht'" "$program" evaluate trace height=-1mm widht=2mm
check "a board comes from a study" exits 0 "$program" evaluate --study "$root/studies/family.json" stackup=near trace width=0.35mm
check "an unknown board names the nearest" says "did you mean near" "$program" evaluate --study "$root/studies/family.json" stackup=naer trace width=0.35mm
check "answers lost to a full disk are an error" sh -c "'$program' models > /dev/full; [ \$? -eq 5 ]"

"$program" evaluate --json coupled-traces $point source=30ohm load=open > "$scratch/point.json"
check "JSON answers are JSON with numbers, units, errors and flags" python3 - "$scratch/point.json" <<'P'
import json, math, sys
answer = json.load(open(sys.argv[1]))
assert list(answer) == ["model", "inputs", "outputs", "units", "errors", "flags"], list(answer)
assert answer["inputs"]["height"] == 1.6e-3 and answer["inputs"]["between"] == "nothing"
assert answer["inputs"]["load"] == "open"
# Independent reference value (boundary and finite elements agree to 2e-6): 184.031 and 67.705 ohm.
assert abs(answer["outputs"]["even_impedance"] / 184.031 - 1) < 1e-3
assert abs(answer["outputs"]["odd_impedance"] / 67.705 - 1) < 1e-3
assert answer["units"]["mutual_capacitance"] == "F/m"
assert set(answer["outputs"]) == set(answer["errors"]) == set(answer["units"])
P
finish

#!/bin/sh
# The schema against an independent validator (python3-jsonschema).  usage: schema.sh PROGRAM SOURCE_ROOT
set -u
program=$1
root=$2
. "$root/tests/cli/tap.sh"
scratch=$(mktemp -d)
trap 'rm -rf "$scratch"' EXIT
"$program" schema >"$scratch/schema.json"
cat >"$scratch/validate.py" <<'P'
import json, sys
import jsonschema

def stripped(text):
    out, i, quoted = [], 0, False
    while i < len(text):
        c = text[i]
        if quoted:
            out.append(c)
            if c == "\\":
                i += 1
                out.append(text[i])
            elif c == '"':
                quoted = False
        elif c == '"':
            quoted = True
            out.append(c)
        elif text.startswith("//", i):
            while i < len(text) and text[i] != "\n":
                i += 1
            continue
        elif text.startswith("/*", i):
            i = text.index("*/", i) + 2
            continue
        else:
            out.append(c)
        i += 1
    return "".join(out)

schema = json.load(open(sys.argv[1]))
jsonschema.Draft202012Validator.check_schema(schema)
study = json.loads(stripped(open(sys.argv[2], encoding="utf-8").read()))
for change in sys.argv[3:]:
    exec(change)
jsonschema.Draft202012Validator(schema).validate(study)
P
valid() { /usr/bin/python3 "$scratch/validate.py" "$scratch/schema.json" "$@"; }
invalid() { ! valid "$@" 2>/dev/null; }
check "the demo study is valid" valid "$root/studies/family.json"
check "the minimal study is valid" valid "$root/studies/minimal.json"
check "the study that uses every key is valid" valid "$root/tests/study/whole.json"
check "an unknown key is invalid" invalid "$root/studies/minimal.json" 'study["chapter"] = []'
check "an unknown key deep inside is invalid" invalid "$root/studies/minimal.json" 'study["stackups"]["two-layer"]["layers"][0]["cooper"] = "35 um"'
check "a missing key is invalid" invalid "$root/studies/minimal.json" 'del study["document"]["title"]'
check "a wrong word is invalid" invalid "$root/studies/minimal.json" 'study["chapters"][0]["rules"][0]["strength"] = "maybe"'
check "a number for a value with a unit is invalid" invalid "$root/studies/minimal.json" 'study["stackups"]["two-layer"]["layers"][0]["copper"] = 35'
check "schema takes no words" exits 2 "$program" schema study.json
finish

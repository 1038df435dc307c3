#!/bin/sh
# What `check` says about broken studies: bad/<reason>.json beside its exact answer, bad/<reason>.expected.
# usage: bad.sh PROGRAM SOURCE_ROOT [--write]
# --write makes the answers anew; read the difference before it is committed.
set -u
program=$(realpath "$1")
root=$2
. "$root/tests/cli/tap.sh"
scratch=$(mktemp -d)
trap 'rm -rf "$scratch"' EXIT
cd "$root/tests/study/bad" || exit 1

if [ "${3-}" = --write ]; then
    for study in *.json; do
        "$program" check "$study" >"${study%.json}.expected" 2>&1
    done
    exit 0
fi

# The exit code is the one that docs/commands.md gives for a study that cannot be accepted, and nothing goes to
# standard output.
answers() {
    "$program" check "$1.json" >"$scratch/out" 2>"$scratch/said"
    code=$?
    [ $code -eq 3 ] || { echo "exit code $code, wanted 3"; return 1; }
    [ ! -s "$scratch/out" ] || { echo "standard output:"; cat "$scratch/out"; return 1; }
    diff "$1.expected" "$scratch/said"
}
for study in *.json; do
    reason=${study%.json}
    check "$(echo "$reason" | tr - ' ') is told" answers "$reason"
done

no_answer_without_study() {
    for expected in *.expected; do
        [ -f "${expected%.expected}.json" ] || { echo "$expected has no study"; return 1; }
    done
}
check "every answer has its study" no_answer_without_study

# Too large to keep: made here.
documented() { grep -q '| 3 | the study or a value cannot be accepted |' "$root/docs/commands.md"; }
check "the exit code is documented" documented
head -c 4194305 /dev/zero | tr '\0' ' ' >"$scratch/large.json"
check "a file that is too large is refused" exits 3 "$program" check "$scratch/large.json"
check "and its size and the limit are told" says "4194305 bytes; at most 4194304" "$program" check "$scratch/large.json"
{ echo '{"document": ['; yes '1,' | head -n 100000; echo '1]}'; } >"$scratch/many.json"
check "a file of too many values is refused" exits 3 "$program" check "$scratch/many.json"
check "and the limit is told" says "more than 100000 keys and values" "$program" check "$scratch/many.json"
{ echo '{'; seq -f '"key-%g": 1,' 40000; echo '"document": {}}'; } >"$scratch/keys.json"
check "a file of forty thousand unknown keys is answered" exits 3 "$program" check --quiet "$scratch/keys.json"
mkfifo "$scratch/pipe"
sed 's|"document"|"previous": "pipe", "document"|' "$root/studies/minimal.json" >"$scratch/previous.json"
check "an earlier issue that is a pipe is refused" says 'is no rules.json' "$program" check "$scratch/previous.json"
check "a study that is a folder is a system error" exits 5 "$program" check "$scratch"
finish

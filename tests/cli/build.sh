#!/bin/sh
# The demo guideline from end to end.  usage: build.sh PROGRAM SOURCE_ROOT
# BUILT_TWICE names another study for the comparison of one thread with two, where the demo takes long.
set -u
program=$1
root=$2
. "$root/tests/cli/tap.sh"
scratch=$(mktemp -d)
trap 'rm -rf "$scratch"' EXIT
demo=$root/studies/family.json

check "the demo is built on two threads" exits 0 "$program" build "$demo" -o "$scratch/two" --jobs 2 --quiet
twice=$scratch/two
if [ -n "${BUILT_TWICE:-}" ]; then
    twice=$scratch/other
    check "another study is built on two threads" exits 0 "$program" build "$root/$BUILT_TWICE" -o "$twice" --jobs 2 --quiet
fi
check "and again on one" exits 0 "$program" build "$root/${BUILT_TWICE:-studies/family.json}" -o "$scratch/one" --jobs 1 --quiet
check "one and two threads give the same bytes" diff -r "$scratch/one" "$twice"
check "a run in a pipe is silent on standard error" sh -c "[ -z \"\$('$program' build '$root/studies/minimal.json' -o '$scratch/minimal' 2>&1 >/dev/null)\" ]"
pdf=$scratch/two/guideline.pdf

check "every font is embedded and a subset" sh -c "pdffonts '$pdf' | tail -n +3 | awk '{ok = 0; for (i = 3; i <= NF; i++) if (\$i == \"yes\" && \$(i+1) == \"yes\") ok = 1; if (!ok) {print; bad = 1}} END {exit bad || NR == 0}'"
check "only Lato is used" sh -c "! pdffonts '$pdf' | tail -n +3 | grep -v Lato"
pdftotext -layout "$pdf" "$scratch/text"
for word in SP-1 LN-1 EQ-1 HT-1 GS-1 WD-1 'Pemberwick' 'creepage' 'mm'; do
    check "the text can be searched for $word" grep -q -- "$word" "$scratch/text"
done
check "the PDF is sound" qpdf --check "$pdf"
check "it has an outline" sh -c "qpdf --json --json-key=outlines '$pdf' | grep -q title"
check "it has a title" sh -c "pdfinfo '$pdf' | grep -q '^Title: .*[a-z]'"
check "its pages have one size" sh -c "[ \$(pdfinfo -f 1 -l 99 '$pdf' | grep '^Page .*size:' | sed 's/.*size://' | sort -u | wc -l) -eq 1 ]"
check "every figure is well-formed SVG" sh -c "ls '$scratch'/two/figures/*.svg >/dev/null && xmllint --noout '$scratch'/two/figures/*.svg"
check "the manifest vouches for every file" python3 - "$scratch/two" <<'P'
import hashlib, json, os, sys
folder = sys.argv[1]
manifest = json.load(open(os.path.join(folder, "rules.json")))
listed = {f["name"]: f["sha256"] for f in manifest["files"]}
found = {os.path.relpath(os.path.join(d, n), folder) for d, _, names in os.walk(folder) for n in names} - {"rules.json"}
assert found == set(listed), found ^ set(listed)
for name, digest in listed.items():
    assert hashlib.sha256(open(os.path.join(folder, name), "rb").read()).hexdigest() == digest, name
P

check "a folder below a file cannot be written" exits 5 "$program" build "$root/studies/minimal.json" -o /dev/null/x --quiet
check "/dev/full is no folder" exits 5 "$program" build "$root/studies/minimal.json" -o /dev/full --quiet
sed 's/"length": /"bit_time": "10 ns", &/' "$root/studies/minimal.json" > "$scratch/rhythm.json"
check "a study with a bit time is built" exits 0 "$program" build "$scratch/rhythm.json" -o "$scratch/rhythm" --quiet
for study in minimal rhythm; do
    pdftotext -layout "$scratch/$study/guideline.pdf" "$scratch/$study.text"
done
check "a rule on a single edge says so beside a bit time" grep -q "for a single edge: sequences" "$scratch/rhythm.text"
check "and only there" sh -c "! grep -q 'for a single edge: sequences' '$scratch/minimal.text'"
cp -r "$scratch/minimal" "$scratch/before"
check "a full disk is told" sh -c "ulimit -f 8; '$program' build '$root/studies/minimal.json' -o '$scratch/minimal' --quiet; [ \$? -eq 5 ]"
check "and leaves the previous document untouched" diff -r "$scratch/before" "$scratch/minimal"
sed 's/"gap"/"gpa"/' "$root/studies/minimal.json" > "$scratch/wrong.json"
check "a wrong study is refused" exits 3 "$program" build "$scratch/wrong.json" -o "$scratch/minimal" --quiet
check "and leaves the previous document untouched too" diff -r "$scratch/before" "$scratch/minimal"
("$program" build "$demo" -o "$scratch/stopped" --quiet & child=$!; sleep 0.3; kill -TERM $child; wait $child) 2>/dev/null
check "an interrupted build leaves nothing half-written" sh -c "[ ! -e '$scratch/stopped' ] || diff -rq '$scratch/two' '$scratch/stopped'"
finish

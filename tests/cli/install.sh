#!/bin/sh
# What `meson install` puts in place works without the source tree.  usage: install.sh BUILD_ROOT SOURCE_ROOT
set -u
build=$(realpath "$1")
root=$2
. "$root/tests/cli/tap.sh"
scratch=$(mktemp -d)
trap 'rm -rf "$scratch"' EXIT
check "it installs" exits 0 meson install -C "$build" --no-rebuild --quiet --destdir "$scratch/to"
program=$(find "$scratch/to" -name groundrules -path '*/bin/*')
study=$(find "$scratch/to" -name minimal.json)
cd "$scratch" || exit 1
check "the installed program writes the installed study's guideline" exits 0 "$program" build "$study" -o "$scratch/out" --quiet
check "with Lato found afterwards" sh -c "pdffonts '$scratch/out/guideline.pdf' | grep -q Lato"
check "the manual is installed" sh -c "find '$scratch/to' -name 'groundrules.1*' | grep -q man1"
complete_words() {
    PATH=$(dirname "$program"):$PATH bash -c '
        . "$1"; shift
        COMP_WORDS=("$@"); COMP_CWORD=$(($# - 1))
        compopt() { :; }
        _groundrules; printf "%s\n" "${COMPREPLY[@]}"' bash "$(find "$scratch/to" -path '*completions/groundrules')" "$@"
}
completes() { wanted=$1; shift; complete_words "$@" | grep -qx -- "$wanted"; }
check "commands complete" completes schema groundrules sch
check "models complete" completes coupled-traces groundrules evaluate coupled-t
check "inputs of the model complete" completes height= groundrules evaluate trace he
finish

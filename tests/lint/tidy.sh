#!/bin/sh
# Files (but tables of reference values) stay small, formatted by one rule, and the top level holds what it may.  usage: tidy.sh SOURCE_ROOT
set -u
root=$1
echo 1..3

long=$(find "$root/src" "$root/include" "$root/tests" -name '*.[ch]' ! -name '*_reference.h' -exec wc -l {} + | awk '$2 != "total" && $1 > 600 {print "# " $1 " lines: " $2}')
if [ -z "$long" ]; then echo 'ok 1 - no file over 600 lines'; else echo "$long"; echo 'not ok 1 - files over 600 lines'; fi

extra=$(cd "$root" && ls | grep -vxE 'README\.md|DEVELOPERS\.md|LICENSE|meson\.build|src|include|tests|studies|fonts|docs|build.*|out' || true)
if [ -z "$extra" ]; then echo 'ok 2 - the top level holds what it may'; else echo "# $extra"; echo 'not ok 2 - top level'; fi

# Sources are prose for people: no tabs, no trailing blanks, no line over 120 characters.
bad=$(grep -rnP '\t| +$|^.{121,}' "$root/src" "$root/include" --include='*.[ch]' | head -5 || true)
if [ -z "$bad" ]; then echo 'ok 3 - no tabs, trailing blanks or overlong lines'; else echo "$bad" | sed 's/^/# /'; echo 'not ok 3 - tidy lines'; fi

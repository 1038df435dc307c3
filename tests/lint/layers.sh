#!/bin/sh
# Arrows point one way: what each folder may include of our own headers, and where each outside library lives.
# usage: layers.sh SOURCE_ROOT
set -u
root=$1
failed=0
count=0

stage_of() { # public header -> folder that owns it
    case $1 in
    arena | error | output | quantity | text) echo base ;;
    section | section_loss | inductance) echo field ;;
    coupling | line) echo line ;;
    model | sketch) echo model ;;
    study) echo study ;;
    guideline) echo rule ;;
    document | scene) echo report ;;
    *) echo unknown ;;
    esac
}

allowed_of() { # folder -> folders whose public headers it may include
    case $1 in
    base) echo 'base' ;;
    field) echo 'base field' ;;
    line) echo 'base line' ;;
    model) echo 'base field line model' ;;
    study) echo 'base model study' ;;
    rule) echo 'base model study rule' ;;
    report) echo 'base model study rule report' ;;
    cli) echo 'base model study rule report' ;;
    esac
}

home_of() { # outside header -> folders that may include it
    case $1 in
    lapacke.h) echo 'field line' ;;
    cblas.h) echo 'field line cli' ;;
    cjson/* | cJSON.h) echo 'study' ;;
    cairo* | pango/* | hb* | fontconfig/*) echo 'report' ;;
    glib*) echo 'rule report' ;;
    pthread.h | omp.h) echo 'field model rule' ;;
    *) echo any ;;
    esac
}

complain() {
    echo "# $1"
    failed=1
}

for folder in base field line model study rule report cli; do
    allowed=$(allowed_of "$folder")
    for file in "$root"/src/"$folder"/*.[ch]; do
        [ -f "$file" ] || continue
        count=$((count + 1))
        name=${file#"$root"/}
        for header in $(sed -n 's/^ *# *include *[<"]\([^>"]*\)[>"].*/\1/p' "$file"); do
            case $header in
            groundrules/*)
                stage=$(stage_of "$(basename "$header" .h)")
                case " $allowed " in *" $stage "*) ;; *) complain "$name includes $header ($stage)" ;; esac
                ;;
            */*.h)
                home=$(home_of "$header")
                case " $home " in *" any "*)
                    case $header in "$folder"/* | sys/*) ;; *) complain "$name includes $header" ;; esac ;;
                *" $folder "*) ;; *) complain "$name includes $header" ;; esac
                ;;
            *)
                home=$(home_of "$header")
                case " $home " in *" any "* | *" $folder "*) ;; *) complain "$name includes $header" ;; esac
                ;;
            esac
        done
    done
done

echo 1..1
[ "$count" -gt 20 ] || complain "only $count files seen: wrong root?"
if [ $failed -eq 0 ]; then echo "ok 1 - $count files keep to their layers"; else echo "not ok 1 - layers"; fi

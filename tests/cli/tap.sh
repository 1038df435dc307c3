# Shared by the shell tests: numbered TAP lines from sentences.  Source it, then: check "sentence" command...
tap_number=0
check() {
    tap_sentence=$1
    shift
    tap_number=$((tap_number + 1))
    if tap_output=$("$@" 2>&1); then
        echo "ok $tap_number - $tap_sentence"
    else
        printf '%s\n' "$tap_output" | sed 's/^/# /'
        echo "not ok $tap_number - $tap_sentence"
    fi
}
# exits CODE COMMAND...: succeeds when the command ends with that code
exits() {
    wanted=$1
    shift
    "$@"
    got=$?
    [ "$got" -eq "$wanted" ] || { echo "exit code $got, wanted $wanted"; return 1; }
}
# says TEXT COMMAND...: succeeds when standard output or error holds the text
says() {
    wanted=$1
    shift
    said=$("$@" 2>&1)
    case $said in *"$wanted"*) ;; *) echo "said: $said"; echo "wanted: $wanted"; return 1 ;; esac
}
finish() {
    echo "1..$tap_number"
}

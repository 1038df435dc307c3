# Completion for bash: commands, options, models and the inputs of the model already typed.
_groundrules() {
    local word=${COMP_WORDS[COMP_CWORD]} before=${COMP_WORDS[COMP_CWORD - 1]} command=${COMP_WORDS[1]} model
    COMPREPLY=()
    if [ "$COMP_CWORD" -eq 1 ]; then
        mapfile -t COMPREPLY < <(compgen -W "build check evaluate models schema --help --version" -- "$word")
        return
    fi
    case $before in
    -o | --output) mapfile -t COMPREPLY < <(compgen -d -- "$word"); return ;;
    --study) mapfile -t COMPREPLY < <(compgen -f -X '!*.json' -- "$word"); return ;;
    -j | --jobs) return ;;
    esac
    case $command in
    build | check)
        if [[ $word == -* ]]; then
            local options="--quiet"
            [ "$command" = build ] && options="--output --jobs --quiet --strict"
            mapfile -t COMPREPLY < <(compgen -W "$options" -- "$word")
        else
            mapfile -t COMPREPLY < <(compgen -f -X '!*.json' -- "$word"; compgen -d -- "$word")
        fi
        ;;
    models) mapfile -t COMPREPLY < <(compgen -W "$(groundrules models | cut -d' ' -f1) --markdown" -- "$word") ;;
    evaluate)
        if [[ $word == -* ]]; then
            mapfile -t COMPREPLY < <(compgen -W "--json --study" -- "$word")
            return
        fi
        for model in $(groundrules models | cut -d' ' -f1); do
            if [[ " ${COMP_WORDS[*]:2} " == *" $model "* ]]; then
                mapfile -t COMPREPLY < <(compgen -W "$(groundrules models "$model" | sed -n '/^inputs/,/^outputs/{/not yet:/!s/^  \([a-z_]*\) .*/\1=/p;}')" -- "$word")
                compopt -o nospace
                return
            fi
        done
        mapfile -t COMPREPLY < <(compgen -W "$(groundrules models | cut -d' ' -f1)" -- "$word")
        ;;
    esac
}
complete -F _groundrules groundrules

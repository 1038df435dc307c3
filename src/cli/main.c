#include "commands.h"

#include "groundrules/text.h"

#include <cblas.h>
#include <locale.h>
#include <stdio.h>
#include <string.h>

static const char help[] =
    "groundrules: layout rules for ground and spacing on printed circuit boards, from solved "
    "fields\n"
    "\n"
    "usage: groundrules build STUDY [-o DIR]        write the guideline: PDF, SVG, CSV, "
    "rules.json\n"
    "       groundrules check STUDY                 say all that is wrong with a study, compute "
    "nothing\n"
    "       groundrules evaluate MODEL name=value…  answer one point\n"
    "       groundrules models [NAME]               what can be asked\n"
    "       groundrules schema                      JSON Schema of a study, for editors\n"
    "\n"
    "  -o, --output DIR   folder of the guideline (standard: the study's name beside the study)\n"
    "  -j, --jobs N       threads (standard: all cores); the result does not depend on it\n"
    "  -q, --quiet        no progress, no summary\n"
    "      --strict       build: exit code 6 when a rule cannot be met\n"
    "      --json         evaluate: answer as JSON, SI units, full precision\n"
    "      --study FILE   evaluate: with stackup=ID, take the board from a study\n"
    "      --help, --version\n"
    "\n"
    "exit codes: 0 done, 1 internal error, 2 wrong command line, 3 wrong study or value,\n"
    "            4 no answer from the numbers, 5 files, disk or fonts, 6 a rule not met "
    "(--strict)\n";

struct command {
    const char *name;
    enum exit_code (*run)(int argc, char **argv);
};

static const struct command commands[] = {
    {"build", command_build},
    {"check", command_check},
    {"evaluate", command_evaluate},
    {"models", command_models},
    {"schema", command_schema},
};
enum { COMMANDS = sizeof commands / sizeof *commands };

static bool asks_for(int argc, char **argv, const char *option) {
    for (int i = 1; i < argc && strcmp(argv[i], "--") != 0; i++)
        if (strcmp(argv[i], option) == 0)
            return true;
    return false;
}

/* Answers on standard output count only once they are written: a full disk is an error too. */
static enum exit_code finish(enum exit_code code) {
    struct error error = {0};
    if (fflush(stdout) == 0 && ferror(stdout) == 0)
        return code;
    error_set(&error, ERROR_SYSTEM, "standard output cannot be written");
    return report_error(&error);
}

static enum exit_code unknown(const char *name) {
    const char *names[COMMANDS];
    for (size_t i = 0; i < COMMANDS; i++)
        names[i] = commands[i].name;
    const char *nearest = text_nearest(name, names, COMMANDS);
    struct error error = {0};
    if (nearest != NULL)
        error_set(&error, ERROR_USAGE, "unknown command '%s'; did you mean %s?", name, nearest);
    else
        error_set(&error, ERROR_USAGE,
                  "unknown command '%s'; there are build, check, evaluate, models, schema", name);
    return report_error(&error);
}

int main(int argc, char **argv) {
    /* Numbers are written with a point whatever the locale; only characters follow it. */
    setlocale(LC_ALL, "C");
    /* The sweep engine has the threads; two levels of them would only get in each other's way. */
    openblas_set_num_threads(1);
    if (asks_for(argc, argv, "--help") || asks_for(argc, argv, "-h")) {
        fputs(help, stdout);
        return (int)finish(EXIT_DONE);
    }
    if (asks_for(argc, argv, "--version")) {
        puts("groundrules " GROUNDRULES_VERSION);
        return (int)finish(EXIT_DONE);
    }
    if (argc < 2) {
        fputs(help, stderr);
        return EXIT_USAGE;
    }
    for (size_t i = 0; i < COMMANDS; i++)
        if (strcmp(argv[1], commands[i].name) == 0)
            return (int)finish(commands[i].run(argc - 2, argv + 2));
    return (int)unknown(argv[1]);
}

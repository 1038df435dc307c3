#ifndef CLI_EXIT_CODE_H
#define CLI_EXIT_CODE_H

#include "groundrules/error.h"

/* Documented in docs/commands.md and --help. */
enum exit_code {
    EXIT_DONE = 0,
    EXIT_INTERNAL = 1, /* a promise inside the program was broken: please report */
    EXIT_USAGE = 2,    /* the command line */
    EXIT_STUDY = 3,    /* the study or a value cannot be accepted */
    EXIT_COMPUTE = 4,  /* the numbers gave no answer, or memory ran out */
    EXIT_SYSTEM = 5,   /* files, folders, disk, fonts */
    EXIT_NOT_MET =
        6, /* `build --strict`: a rule cannot be met or lies below the fab's capability */
};

enum exit_code exit_code_of(const struct error *error);

/* "groundrules: message" on standard error; the exit code that goes with it. */
enum exit_code report_error(const struct error *error);

#endif

#include "exit_code.h"

#include <stdio.h>

enum exit_code exit_code_of(const struct error *error) {
    switch (error->kind) {
    case ERROR_NONE:
        return EXIT_DONE;
    case ERROR_USAGE:
        return EXIT_USAGE;
    case ERROR_INPUT:
    case ERROR_NOT_YET:
        return EXIT_STUDY;
    case ERROR_SINGULAR:
    case ERROR_MEMORY:
        return EXIT_COMPUTE;
    case ERROR_SYSTEM:
        return EXIT_SYSTEM;
    case ERROR_INTERNAL:
        break;
    }
    return EXIT_INTERNAL;
}

enum exit_code report_error(const struct error *error) {
    fprintf(stderr, "groundrules: %s\n", error->message);
    return exit_code_of(error);
}

#ifndef CLI_OPTIONS_H
#define CLI_OPTIONS_H

#include "groundrules/error.h"

#include <stddef.h>

/* What stands on the command line after the command: options in any place, the rest in order. */
struct options {
    const char *output; /* -o, --output */
    const char *study;  /* --study */
    int jobs;           /* -j, --jobs; 0 = all cores */
    bool quiet, json, strict, markdown;
    const char **words; /* points into argv; the words that are no options */
    size_t word_count;
};

/* `allowed` names the options that the command takes: letters of "ojqJsS" (output, jobs, quiet,
 * json, strict, study).  `words` has room for argc entries.  ERROR_USAGE otherwise. */
bool options_read(int argc, char **argv, const char *allowed, const char **words,
                  struct options *options, struct error *error);

#endif

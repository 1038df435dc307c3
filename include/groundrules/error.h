#ifndef GROUNDRULES_ERROR_H
#define GROUNDRULES_ERROR_H

#include <stdbool.h>

/* One error by value: the first wins, callers going up add where they were, only src/cli prints.
 *
 *     if (!(width > 0))
 *         return error_set(error, ERROR_INPUT, "width is %g m, must be above 0", width);
 *     if (!load_bar(j, &bar, error))
 *         return error_in(error, "bars[%zu]", i);     -> "bars[3]: width is -1 m, ..."
 */

enum error_kind {
    ERROR_NONE = 0,
    ERROR_USAGE,    /* the command line */
    ERROR_INPUT,    /* a value, name or study that cannot be accepted */
    ERROR_NOT_YET,  /* known, but this version does not compute it */
    ERROR_SINGULAR, /* the numbers gave no answer: singular matrix, no convergence */
    ERROR_MEMORY,
    ERROR_SYSTEM,   /* files, folders, disk, fonts */
    ERROR_INTERNAL, /* a promise inside the program was broken */
};

struct error {
    enum error_kind kind;
    char message[600];
};

/* Records kind and message unless `error` already holds one (then nothing changes).
 * `error` may be NULL.  Always returns false, so that `return error_set(...)` reads well. */
bool error_set(struct error *error, enum error_kind kind, const char *format, ...)
    __attribute__((format(printf, 3, 4)));

/* Puts "context: " before the message that is there; nothing if there is none.  Returns false. */
bool error_in(struct error *error, const char *format, ...) __attribute__((format(printf, 2, 3)));

#endif

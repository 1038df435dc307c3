#ifndef CLI_PROGRESS_H
#define CLI_PROGRESS_H

#include <stdbool.h>
#include <stddef.h>

/* One line on standard error that is rewritten in place; only when that is a terminal and not
 * `quiet`. */
struct progress {
    bool shown;
    double last; /* s, when it was last drawn */
};

struct progress progress_start(bool quiet);
/* A guideline_progress; `context` is a struct progress. */
void progress_update(void *context, const char *what, size_t done, size_t total);
void progress_end(struct progress *progress);

#endif

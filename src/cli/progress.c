#include "progress.h"

#include <stdio.h>
#include <time.h>
#include <unistd.h>

static double now(void) {
    struct timespec time;
    clock_gettime(CLOCK_MONOTONIC, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

struct progress progress_start(bool quiet) {
    return (struct progress){.shown = !quiet && isatty(STDERR_FILENO) == 1, .last = 0.0};
}

void progress_update(void *context, const char *what, size_t done, size_t total) {
    struct progress *progress = context;
    double time = progress->shown ? now() : 0.0;
    if (!progress->shown || (done < total && time - progress->last < 0.1))
        return;
    progress->last = time;
    fprintf(stderr, "\r\033[K%s  %zu of %zu", what, done, total);
    fflush(stderr);
}

void progress_end(struct progress *progress) {
    if (progress->shown)
        fputs("\r\033[K", stderr);
}

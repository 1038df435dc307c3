#ifndef GROUNDRULES_TEXT_H
#define GROUNDRULES_TEXT_H

#include "groundrules/arena.h"

/* Text that grows in an arena.  The first failure (memory) sticks: later calls do nothing, text_end
 * then gives NULL and `error` says why. */

struct text {
    struct arena *arena;
    struct error *error;
    char *bytes; /* not terminated before text_end */
    size_t length, capacity;
    bool failed;
};

struct text text_start(struct arena *arena, struct error *error);

void text_add(struct text *text, const char *more);
void text_add_length(struct text *text, const char *more, size_t length);
void text_format(struct text *text, const char *format, ...) __attribute__((format(printf, 2, 3)));
/* One Unicode scalar value as UTF-8. */
void text_add_character(struct text *text, unsigned long character);

/* The zero-terminated text, "" when nothing was added; owned by the arena. */
char *text_end(struct text *text);

/* Of `names` the one that `word` most likely means: the smallest number of letters to insert, leave
 * out, change or swap with their neighbour (optimal string alignment distance), where upper and
 * lower case and the signs - _ and space count as the same.  At most one change for every three
 * letters; NULL when nothing is that near.  Ties go to the earlier name. */
const char *text_nearest(const char *word, const char *const *names, size_t count);

#endif

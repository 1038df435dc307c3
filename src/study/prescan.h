#ifndef STUDY_PRESCAN_H
#define STUDY_PRESCAN_H

#include "source.h"

/* One pass over the bytes before the JSON library sees them: it is stricter than the library
 * (UTF-8, number syntax, control characters, escapes, depth, size, nothing after the end) and
 * remembers where every key and value starts, which the library does not. */

enum { PRESCAN_MOST_VALUES = 100000 };

struct prescan {
    char *text;     /* zero-terminated copy with comments blanked */
    size_t *starts; /* of every key and value in document order */
    size_t count;
};

/* False: a finding was added (the text is no JSON that can be read on), or memory ran out. */
bool prescan(const struct source *source, struct arena *arena, struct findings *findings,
             struct prescan *result, struct error *error);

#endif

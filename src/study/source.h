#ifndef STUDY_SOURCE_H
#define STUDY_SOURCE_H

#include "groundrules/study.h"

/* The text of a study and what was found wrong with it. */

struct source {
    const char *text;
    size_t length;
    size_t *line_starts; /* offsets */
    size_t line_count;
};

bool source_index(struct source *source, const char *text, size_t length, struct arena *arena,
                  struct error *error);

/* Line and column from 1; the column counts characters. */
void source_position(const struct source *source, size_t offset, unsigned *line, unsigned *column);

/* Control characters become "?": messages and paths may be printed on a terminal. */
void source_disarm(char *message);

/* Problems gather while reading goes on; the same message at the same place is kept once. */
struct found {
    size_t offset;
    const char *path, *message;
};

struct findings {
    const struct source *source;
    struct arena *arena;
    struct error *error; /* memory only */
    struct found *items;
    size_t count, capacity, left_out;
};

void findings_add(struct findings *findings, size_t offset, const char *path, const char *format,
                  ...) __attribute__((format(printf, 4, 5)));
void findings_add_text(struct findings *findings, size_t offset, const char *path, char *message);

/* In the order of the file. */
bool findings_report(struct findings *findings, struct study_problems *problems);

#endif

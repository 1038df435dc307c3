#ifndef TESTS_STUDY_READING_H
#define TESTS_STUDY_READING_H

#include "check.h"
#include "groundrules/study.h"

#include <stdlib.h>
#include <string.h>

/* One text read as a study; freed with reading_end. */
struct reading {
    struct arena *arena;
    struct study study;
    struct study_problems problems;
    struct error error;
    bool ok;
};

static inline struct reading read_study_length(const char *text, size_t length) {
    struct reading reading = {0};
    reading.arena = arena_create(&reading.error);
    if (reading.arena != NULL)
        reading.ok = study_read_text("test.json", text, length, reading.arena, &reading.study,
                                     &reading.problems, &reading.error);
    return reading;
}

static inline struct reading read_study(const char *text) {
    return read_study_length(text, strlen(text));
}

/* A study that must be sound; prints what is wrong when it is not. */
static inline struct reading read_sound(const char *text) {
    struct reading reading = read_study(text);
    for (size_t i = 0; i < reading.problems.count; i++)
        print_error("%u:%u: %s: %s\n", reading.problems.items[i].line,
                    reading.problems.items[i].column, reading.problems.items[i].path,
                    reading.problems.items[i].message);
    if (reading.error.kind != ERROR_NONE)
        print_error("%s\n", reading.error.message);
    assert_true(reading.ok);
    return reading;
}

static inline void reading_end(struct reading *reading) {
    arena_free(reading->arena);
    reading->arena = NULL;
}

/* A whole file, zero-terminated; the caller frees it. */
static inline char *read_bytes(const char *path, size_t *length) {
    FILE *file = fopen(path, "rb");
    char *bytes = NULL;
    if (file == NULL)
        return NULL;
    if (fseek(file, 0, SEEK_END) == 0) {
        long size = ftell(file);
        rewind(file);
        bytes = size < 0 ? NULL : malloc((size_t)size + 1);
        if (bytes != NULL) {
            *length = fread(bytes, 1, (size_t)size, file);
            bytes[*length] = '\0';
        }
    }
    fclose(file);
    return bytes;
}

#endif

#include "source.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

bool source_index(struct source *source, const char *text, size_t length, struct arena *arena,
                  struct error *error) {
    size_t lines = 1;
    for (size_t i = 0; i < length; i++)
        lines += text[i] == '\n';
    size_t *starts = arena_new(arena, lines, size_t, error);
    if (starts == NULL)
        return false;
    size_t line = 1;
    for (size_t i = 0; i < length; i++)
        if (text[i] == '\n')
            starts[line++] = i + 1;
    *source = (struct source){text, length, starts, lines};
    return true;
}

void source_position(const struct source *source, size_t offset, unsigned *line, unsigned *column) {
    size_t low = 0;
    size_t high = source->line_count;
    while (high - low > 1) {
        size_t middle = low + (high - low) / 2;
        if (source->line_starts[middle] <= offset)
            low = middle;
        else
            high = middle;
    }
    *line = (unsigned)low + 1;
    *column = 1;
    for (size_t i = source->line_starts[low]; i < offset && i < source->length; i++)
        *column += ((unsigned char)source->text[i] & 0xC0) != 0x80;
}

static bool make_room(struct findings *findings) {
    if (findings->count < findings->capacity)
        return true;
    size_t capacity = findings->capacity == 0 ? 16 : 2 * findings->capacity;
    struct found *items = arena_new(findings->arena, capacity, struct found, findings->error);
    if (items == NULL)
        return false;
    if (findings->count > 0)
        memcpy(items, findings->items, findings->count * sizeof *items);
    findings->items = items;
    findings->capacity = capacity;
    return true;
}

/* Bytes 0x00-0x1F, 0x7F and the characters U+0080 to U+009F. */
void source_disarm(char *message) {
    for (char *at = message; *at != '\0'; at++) {
        unsigned char byte = (unsigned char)*at;
        if (byte < 0x20 || byte == 0x7F)
            *at = '?';
        else if (byte == 0xC2 && (unsigned char)at[1] >= 0x80 && (unsigned char)at[1] <= 0x9F)
            at[0] = at[1] = '?';
    }
}

/* Reading stops early on hopeless files, so the number kept while reading only has to be bounded.
 */
enum { MOST_KEPT = 4 * STUDY_MOST_PROBLEMS };

void findings_add_text(struct findings *findings, size_t offset, const char *path, char *message) {
    source_disarm(message);
    for (size_t i = 0; i < findings->count; i++)
        if (findings->items[i].offset == offset && strcmp(findings->items[i].message, message) == 0)
            return;
    if (findings->count >= MOST_KEPT)
        findings->left_out++;
    else if (make_room(findings))
        findings->items[findings->count++] = (struct found){offset, path, message};
}

void findings_add(struct findings *findings, size_t offset, const char *path, const char *format,
                  ...) {
    va_list arguments;
    va_start(arguments, format);
    va_list again;
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    char *message =
        length < 0 ? NULL : arena_new(findings->arena, (size_t)length + 1, char, findings->error);
    if (message != NULL) {
        vsnprintf(message, (size_t)length + 1, format, again);
        findings_add_text(findings, offset, path, message);
    }
    va_end(again);
    va_end(arguments);
}

static int by_place(const void *a, const void *b) {
    const struct found *one = a;
    const struct found *two = b;
    if (one->offset != two->offset)
        return one->offset < two->offset ? -1 : 1;
    return strcmp(one->message, two->message);
}

bool findings_report(struct findings *findings, struct study_problems *problems) {
    size_t count = findings->count < STUDY_MOST_PROBLEMS ? findings->count : STUDY_MOST_PROBLEMS;
    struct study_problem *items =
        arena_new(findings->arena, count, struct study_problem, findings->error);
    if (items == NULL)
        return false;
    if (findings->count > 1)
        qsort(findings->items, findings->count, sizeof findings->items[0], by_place);
    for (size_t i = 0; i < count; i++) {
        const struct found *found = &findings->items[i];
        items[i].path = found->path;
        items[i].message = found->message;
        source_position(findings->source, found->offset, &items[i].line, &items[i].column);
    }
    *problems = (struct study_problems){items, count, findings->left_out + findings->count - count};
    return true;
}

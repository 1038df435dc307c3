#include "groundrules/text.h"

#include <stdint.h>
#include <stdio.h>
#include <string.h>

struct text text_start(struct arena *arena, struct error *error) {
    return (struct text){.arena = arena, .error = error};
}

static bool make_room(struct text *text, size_t more) {
    if (text->failed)
        return false;
    size_t needed = 0;
    size_t doubled = text->capacity < 64 ? 64 : text->capacity;
    if (__builtin_add_overflow(text->length, more, &needed) || needed >= SIZE_MAX / 4) {
        text->failed = true;
        return error_set(text->error, ERROR_MEMORY, "out of memory (a text of %zu bytes)", more);
    }
    if (needed < text->capacity)
        return true;
    while (doubled <= needed)
        doubled *= 2;
    char *bytes = arena_new(text->arena, doubled, char, text->error);
    text->failed = bytes == NULL;
    if (bytes == NULL)
        return false;
    if (text->length > 0)
        memcpy(bytes, text->bytes, text->length);
    text->bytes = bytes;
    text->capacity = doubled;
    return true;
}

void text_add_length(struct text *text, const char *more, size_t length) {
    if (length == 0 || !make_room(text, length))
        return;
    memcpy(text->bytes + text->length, more, length);
    text->length += length;
}

void text_add(struct text *text, const char *more) {
    text_add_length(text, more, strlen(more));
}

void text_format(struct text *text, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    va_list again;
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    if (length > 0 && make_room(text, (size_t)length + 1)) {
        vsnprintf(text->bytes + text->length, (size_t)length + 1, format, again);
        text->length += (size_t)length;
    }
    va_end(again);
    va_end(arguments);
}

void text_add_character(struct text *text, unsigned long character) {
    char bytes[4];
    size_t length = 0;
    if (character < 0x80) {
        bytes[length++] = (char)character;
    } else if (character < 0x800) {
        bytes[length++] = (char)(0xC0 | character >> 6);
        bytes[length++] = (char)(0x80 | (character & 0x3F));
    } else if (character < 0x10000) {
        bytes[length++] = (char)(0xE0 | character >> 12);
        bytes[length++] = (char)(0x80 | (character >> 6 & 0x3F));
        bytes[length++] = (char)(0x80 | (character & 0x3F));
    } else {
        bytes[length++] = (char)(0xF0 | (character >> 18 & 0x07));
        bytes[length++] = (char)(0x80 | (character >> 12 & 0x3F));
        bytes[length++] = (char)(0x80 | (character >> 6 & 0x3F));
        bytes[length++] = (char)(0x80 | (character & 0x3F));
    }
    text_add_length(text, bytes, length);
}

char *text_end(struct text *text) {
    if (!make_room(text, 1))
        return NULL;
    text->bytes[text->length] = '\0';
    return text->bytes;
}

enum { MOST_LETTERS = 64 };

static char fold(char letter) {
    if (letter >= 'A' && letter <= 'Z')
        return (char)(letter - 'A' + 'a');
    return letter == '_' || letter == ' ' ? '-' : letter;
}

static size_t least(size_t a, size_t b) {
    return a < b ? a : b;
}

/* Both at most MOST_LETTERS long. */
static size_t distance(const char *a, size_t a_length, const char *b, size_t b_length) {
    size_t rows[3][MOST_LETTERS + 1];
    size_t *before = rows[0];
    size_t *last = rows[1];
    size_t *row = rows[2];
    for (size_t j = 0; j <= b_length; j++)
        last[j] = j;
    for (size_t i = 1; i <= a_length; i++) {
        row[0] = i;
        for (size_t j = 1; j <= b_length; j++) {
            size_t change = fold(a[i - 1]) == fold(b[j - 1]) ? 0 : 1;
            row[j] = least(least(last[j] + 1, row[j - 1] + 1), last[j - 1] + change);
            if (i > 1 && j > 1 && fold(a[i - 1]) == fold(b[j - 2]) &&
                fold(a[i - 2]) == fold(b[j - 1]))
                row[j] = least(row[j], before[j - 2] + 1);
        }
        size_t *spare = before;
        before = last;
        last = row;
        row = spare;
    }
    return last[b_length];
}

const char *text_nearest(const char *word, const char *const *names, size_t count) {
    const char *nearest = NULL;
    size_t smallest = SIZE_MAX;
    size_t length = strlen(word);
    for (size_t i = 0; i < count && length <= MOST_LETTERS; i++) {
        size_t name_length = strlen(names[i]);
        if (name_length > MOST_LETTERS)
            continue;
        size_t changes = distance(word, length, names[i], name_length);
        size_t longer = length > name_length ? length : name_length;
        if (3 * changes <= longer && changes < smallest) {
            smallest = changes;
            nearest = names[i];
        }
    }
    return nearest;
}

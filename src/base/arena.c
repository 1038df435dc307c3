#include "groundrules/arena.h"

#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { ALIGNMENT = 64, FIRST_BLOCK = 1 << 16, MOST_BLOCKS = 48 };

/* Blocks double in size, so 48 of them cover any address space; a rewind keeps them for reuse. */
struct arena {
    unsigned char *blocks[MOST_BLOCKS];
    size_t sizes[MOST_BLOCKS];
    size_t current;
    size_t used;
};

static size_t calls_left_before_failure; /* 0: off; 1: every call fails */

void arena_fail_after(size_t calls) {
    calls_left_before_failure = calls;
}

static bool made_to_fail(void) {
    if (calls_left_before_failure == 0)
        return false;
    if (calls_left_before_failure == 1)
        return true;
    calls_left_before_failure--;
    return false;
}

struct arena *arena_create(struct error *error) {
    struct arena *arena = made_to_fail() ? NULL : calloc(1, sizeof *arena);
    if (arena == NULL)
        error_set(error, ERROR_MEMORY, "out of memory");
    return arena;
}

void arena_free(struct arena *arena) {
    if (arena == NULL)
        return;
    for (size_t i = 0; i < MOST_BLOCKS; i++)
        free(arena->blocks[i]);
    free(arena);
}

static bool block_has_room(const struct arena *arena, size_t block, size_t used, size_t bytes) {
    return arena->blocks[block] != NULL && arena->sizes[block] - used >= bytes;
}

static bool add_block(struct arena *arena, size_t block, size_t bytes) {
    size_t size = block == 0 ? FIRST_BLOCK : arena->sizes[block - 1];
    if (block > 0 && size <= SIZE_MAX / 2)
        size *= 2;
    if (size < bytes)
        size = bytes;
    if (size > SIZE_MAX - ALIGNMENT)
        return false;
    size = (size + ALIGNMENT - 1) / ALIGNMENT * ALIGNMENT;
    unsigned char *memory = aligned_alloc(ALIGNMENT, size);
    if (memory == NULL)
        return false;
    free(arena->blocks[block]);
    arena->blocks[block] = memory;
    arena->sizes[block] = size;
    return true;
}

void *arena_take_unset(struct arena *arena, size_t count, size_t size, struct error *error) {
    size_t bytes = 0;
    if (__builtin_mul_overflow(count, size, &bytes) || bytes > SIZE_MAX - ALIGNMENT ||
        made_to_fail()) {
        error_set(error, ERROR_MEMORY, "out of memory (%zu x %zu bytes)", count, size);
        return NULL;
    }
    bytes = (bytes + ALIGNMENT - 1) / ALIGNMENT * ALIGNMENT;
    while (!block_has_room(arena, arena->current, arena->used, bytes)) {
        size_t next = arena->blocks[arena->current] == NULL ? arena->current : arena->current + 1;
        bool reusable = next < MOST_BLOCKS && block_has_room(arena, next, 0, bytes);
        if (next >= MOST_BLOCKS || (!reusable && !add_block(arena, next, bytes))) {
            error_set(error, ERROR_MEMORY, "out of memory (%zu x %zu bytes)", count, size);
            return NULL;
        }
        arena->current = next;
        arena->used = 0;
    }
    void *memory = arena->blocks[arena->current] + arena->used;
    arena->used += bytes;
    return memory;
}

void *arena_take(struct arena *arena, size_t count, size_t size, struct error *error) {
    void *memory = arena_take_unset(arena, count, size, error);
    return memory == NULL ? NULL : memset(memory, 0, count * size);
}

char *arena_copy_length(struct arena *arena, const char *text, size_t length, struct error *error) {
    char *copy = length == SIZE_MAX ? NULL : arena_new(arena, length + 1, char, error);
    if (copy != NULL)
        memcpy(copy, text, length);
    return copy;
}

char *arena_copy(struct arena *arena, const char *text, struct error *error) {
    return arena_copy_length(arena, text, strlen(text), error);
}

char *arena_print(struct arena *arena, struct error *error, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    va_list again;
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    char *text = length < 0 ? NULL : arena_new(arena, (size_t)length + 1, char, error);
    if (text != NULL)
        vsnprintf(text, (size_t)length + 1, format, again);
    va_end(again);
    va_end(arguments);
    return text;
}

struct arena_mark arena_mark(const struct arena *arena) {
    return (struct arena_mark){arena->current, arena->used};
}

void arena_rewind(struct arena *arena, struct arena_mark mark) {
    arena->current = mark.block;
    arena->used = mark.used;
}

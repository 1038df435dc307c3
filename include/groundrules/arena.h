#ifndef GROUNDRULES_ARENA_H
#define GROUNDRULES_ARENA_H

#include "groundrules/error.h"

#include <stdarg.h>
#include <stddef.h>

/* One lifetime, one arena.  Everything taken from it is zeroed, aligned to 64 bytes for arrays of
 * doubles, and lives until arena_free or a rewind to an earlier mark.  Not for use by two threads.
 */

struct arena;

/* NULL (and ERROR_MEMORY) when there is no memory.  arena_free takes NULL. */
struct arena *arena_create(struct error *error);
void arena_free(struct arena *arena);

/* `count` elements of `size` bytes, zeroed; the product is checked.  A count of 0 gives a pointer
 * that must not be read.  NULL and ERROR_MEMORY when it cannot be had. */
void *arena_take(struct arena *arena, size_t count, size_t size, struct error *error);
#define arena_new(arena, count, type, error)                                                       \
    ((type *)arena_take((arena), (count), sizeof(type), (error)))
/* The same, but not zeroed: for large arrays that are written before they are read. */
void *arena_take_unset(struct arena *arena, size_t count, size_t size, struct error *error);
#define arena_new_unset(arena, count, type, error)                                                 \
    ((type *)arena_take_unset((arena), (count), sizeof(type), (error)))

/* Copies of text, zero-terminated. */
char *arena_copy(struct arena *arena, const char *text, struct error *error);
char *arena_copy_length(struct arena *arena, const char *text, size_t length, struct error *error);
char *arena_print(struct arena *arena, struct error *error, const char *format, ...)
    __attribute__((format(printf, 3, 4)));

/* Scratch use: mark, take, rewind.  All that was taken after the mark is given back to the arena
 * (the memory itself is kept for reuse). */
struct arena_mark {
    size_t block;
    size_t used;
};
struct arena_mark arena_mark(const struct arena *arena);
void arena_rewind(struct arena *arena, struct arena_mark mark);

/* For tests: the n-th call from now (1 = the next) and all later ones fail as if memory had run
 * out; 0 ends it. Per process, not for use with threads running. */
void arena_fail_after(size_t calls);

#endif

#ifndef FIELD_KEEP_H
#define FIELD_KEEP_H

#include "groundrules/arena.h"

/* Tables that live as long as the process: made once under a lock, read without one.  The content
 * depends on the key alone, never on who made it. */
typedef void *keep_maker(const void *key, struct arena *arena, struct error *error);

/* What *slot holds; made by `make` when it is still empty.  NULL when making failed (the slot stays
 * empty, a later call tries again).  Makers must not call keep_get. */
void *keep_get(void *_Atomic *slot, keep_maker *make, const void *key, struct error *error);

#endif

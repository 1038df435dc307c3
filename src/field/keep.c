#include "keep.h"

#include <pthread.h>
#include <stdatomic.h>

static pthread_mutex_t lock = PTHREAD_MUTEX_INITIALIZER;
static struct arena *kept;

void *keep_get(void *_Atomic *slot, keep_maker *make, const void *key, struct error *error) {
    void *made = atomic_load_explicit(slot, memory_order_acquire);
    if (made != NULL)
        return made;
    pthread_mutex_lock(&lock);
    made = atomic_load_explicit(slot, memory_order_relaxed);
    if (made == NULL && kept == NULL)
        kept = arena_create(error);
    if (made == NULL && kept != NULL) {
        struct arena_mark mark = arena_mark(kept);
        made = make(key, kept, error);
        if (made == NULL)
            arena_rewind(kept, mark);
        else
            atomic_store_explicit(slot, made, memory_order_release);
    }
    pthread_mutex_unlock(&lock);
    return made;
}

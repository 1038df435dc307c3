#include "groundrules/model.h"

#include <math.h>
#include <pthread.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

/* Problems are compared after rounding to a tenth of a picometre with the first conductor at x = 0,
 * and the rounded problem is the one solved: so the answer does not depend on which of two nearly
 * equal ones came first. */
static const double GRAIN = 1e-13;

struct memo_key {
    int64_t height, dk;
    int64_t plane, plane_end;
    int64_t mask, mask_dk, mask_flat;
    int64_t cover, cover_dk;
    int64_t count;
    int64_t conductors[SECTION_MOST_CONDUCTORS][4];
};

struct memo_entry {
    struct memo_key key;
    struct memo_entry *next;
    bool done;
    struct error error;
    struct section_solution solution;
};

enum { BUCKETS = 1 << 14 };

struct model_memo {
    pthread_mutex_t lock;
    pthread_cond_t solved;
    struct model_memo_counts counts;
    struct memo_entry *buckets[BUCKETS];
};

struct model_memo *model_memo_create(struct error *error) {
    struct model_memo *memo = calloc(1, sizeof *memo);
    if (memo == NULL) {
        error_set(error, ERROR_MEMORY, "out of memory");
        return NULL;
    }
    if (pthread_mutex_init(&memo->lock, NULL) != 0) {
        free(memo);
        error_set(error, ERROR_SYSTEM, "no lock can be made");
        return NULL;
    }
    if (pthread_cond_init(&memo->solved, NULL) != 0) {
        pthread_mutex_destroy(&memo->lock);
        free(memo);
        error_set(error, ERROR_SYSTEM, "no condition can be made");
        return NULL;
    }
    return memo;
}

void model_memo_free(struct model_memo *memo) {
    if (memo == NULL)
        return;
    for (size_t i = 0; i < BUCKETS; i++)
        for (struct memo_entry *entry = memo->buckets[i], *next; entry != NULL; entry = next) {
            next = entry->next;
            free(entry);
        }
    pthread_cond_destroy(&memo->solved);
    pthread_mutex_destroy(&memo->lock);
    free(memo);
}

static int64_t grains(double length) {
    return (int64_t)llround(length / GRAIN);
}

static int64_t fine(double dk) {
    return (int64_t)llround(dk * 1e12);
}

/* What a missing part would be made of does not tell sections apart. */
static struct memo_key key_of(const struct section_problem *problem) {
    struct memo_key key;
    memset(&key, 0, sizeof key);
    key.height = grains(problem->height);
    key.dk = fine(problem->dk);
    key.plane = problem->plane;
    if (problem->plane == SECTION_PLANE_ENDS)
        key.plane_end = grains(problem->plane_end - problem->conductors[0].left);
    key.mask = grains(problem->mask);
    if (problem->mask > 0) {
        key.mask_dk = fine(problem->mask_dk);
        key.mask_flat = problem->mask_flat;
    }
    key.cover = grains(problem->cover);
    if (problem->cover > 0)
        key.cover_dk = fine(problem->cover_dk);
    key.count = (int64_t)problem->count;
    for (size_t i = 0; i < problem->count; i++) {
        const struct section_conductor *conductor = &problem->conductors[i];
        key.conductors[i][0] = grains(conductor->left - problem->conductors[0].left);
        key.conductors[i][1] = grains(conductor->width);
        key.conductors[i][2] = grains(conductor->thickness);
        key.conductors[i][3] = grains(conductor->etch);
    }
    return key;
}

static struct section_problem problem_of(const struct memo_key *key) {
    struct section_problem problem = {.height = (double)key->height * GRAIN,
                                      .dk = (double)key->dk * 1e-12,
                                      .plane = (enum section_plane)key->plane,
                                      .plane_end = (double)key->plane_end * GRAIN,
                                      .mask = (double)key->mask * GRAIN,
                                      .mask_dk = key->mask > 0 ? (double)key->mask_dk * 1e-12 : 1,
                                      .mask_flat = key->mask_flat != 0,
                                      .cover = (double)key->cover * GRAIN,
                                      .cover_dk =
                                          key->cover > 0 ? (double)key->cover_dk * 1e-12 : 1,
                                      .count = (size_t)key->count};
    for (size_t i = 0; i < problem.count; i++)
        problem.conductors[i] = (struct section_conductor){
            (double)key->conductors[i][0] * GRAIN, (double)key->conductors[i][1] * GRAIN,
            (double)key->conductors[i][2] * GRAIN, (double)key->conductors[i][3] * GRAIN};
    return problem;
}

static size_t bucket_of(const struct memo_key *key) {
    const unsigned char *bytes = (const unsigned char *)key;
    uint64_t hash = 14695981039346656037u; /* FNV-1a */
    for (size_t i = 0; i < sizeof *key; i++)
        hash = (hash ^ bytes[i]) * 1099511628211u;
    return (size_t)((hash ^ (hash >> 29)) % BUCKETS);
}

/* Under the lock.  NULL: out of memory.  *fresh: the caller has to solve it. */
static struct memo_entry *enter(struct model_memo *memo, const struct memo_key *key, bool *fresh) {
    struct memo_entry **bucket = &memo->buckets[bucket_of(key)];
    memo->counts.asked++;
    *fresh = false;
    for (struct memo_entry *entry = *bucket; entry != NULL; entry = entry->next)
        if (memcmp(&entry->key, key, sizeof *key) == 0)
            return entry;
    struct memo_entry *entry = calloc(1, sizeof *entry);
    if (entry == NULL)
        return NULL;
    entry->key = *key;
    entry->next = *bucket;
    *bucket = entry;
    memo->counts.solved++;
    *fresh = true;
    return entry;
}

bool model_memo_section(struct model_memo *memo, const struct section_problem *problem,
                        struct section_solution *solution, struct error *error) {
    struct memo_key key = key_of(problem);
    bool fresh = false;
    pthread_mutex_lock(&memo->lock);
    struct memo_entry *entry = enter(memo, &key, &fresh);
    if (fresh) {
        pthread_mutex_unlock(&memo->lock);
        struct section_problem rounded = problem_of(&key);
        section_solve(&rounded, &entry->solution, &entry->error);
        pthread_mutex_lock(&memo->lock);
        entry->done = true;
        pthread_cond_broadcast(&memo->solved);
    }
    while (entry != NULL && !entry->done)
        pthread_cond_wait(&memo->solved, &memo->lock);
    pthread_mutex_unlock(&memo->lock);
    if (entry == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    if (entry->error.kind != ERROR_NONE)
        return error_set(error, entry->error.kind, "%s", entry->error.message);
    *solution = entry->solution;
    return true;
}

struct model_memo_counts model_memo_counts(const struct model_memo *memo) {
    return memo->counts;
}

#include "worker.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Cases that differ only in their edge, or go to and fro between two ends of an axis, find their
 * response again. */
enum { KEPT = 4 };

struct kept_response {
    struct arena *arena;
    struct line_problem problem; /* padding and unused entries zeroed, so that memcmp compares */
    double shortest_edge;
    bool lasting;
    struct line_response *response; /* NULL: none yet */
    size_t used;                    /* when, in calls */
};

struct model_worker {
    struct kept_response kept[KEPT];
    size_t calls;
    double expected; /* s, the shortest edge that is to be asked for; 0 = not said */
};

struct model_worker *model_worker_create(struct error *error) {
    struct model_worker *worker = calloc(1, sizeof *worker);
    if (worker == NULL) {
        error_set(error, ERROR_MEMORY, "out of memory");
        return NULL;
    }
    for (size_t i = 0; i < KEPT; i++) {
        worker->kept[i].arena = arena_create(error);
        if (worker->kept[i].arena == NULL) {
            model_worker_free(worker);
            return NULL;
        }
    }
    return worker;
}

void model_worker_free(struct model_worker *worker) {
    if (worker == NULL)
        return;
    for (size_t i = 0; i < KEPT; i++)
        arena_free(worker->kept[i].arena);
    free(worker);
}

/* Edges share a response within a factor of four; the class is a power of four of a picosecond, so
 * it depends on the edge alone and never on what was asked before. */
static double shortest_edge_of_class(double edge) {
    double class = floor(log2(edge / 1e-12) / 2.0);
    double shortest = ldexp(1e-12, 2 * (int)class);
    return shortest <= edge ? shortest : shortest / 4.0;
}

void model_worker_expect(struct model_worker *worker, double shortest_edge) {
    worker->expected = shortest_edge;
}

/* Where the edges to come are known they share a response within a factor of sixteen. */
static double shortest_edge_for(const struct model_worker *worker, double edge) {
    if (!(worker->expected > 0.0 && edge >= worker->expected))
        return shortest_edge_of_class(edge);
    double shortest = worker->expected * exp2(4.0 * floor(log2(edge / worker->expected) / 4.0));
    return shortest <= edge ? shortest : edge;
}

/* The one that answers this problem, else the one that was not used for longest. */
static struct kept_response *kept_for(struct model_worker *worker,
                                      const struct line_problem *problem, double shortest,
                                      bool lasting) {
    struct kept_response *oldest = &worker->kept[0];
    for (size_t i = 0; i < KEPT; i++) {
        struct kept_response *kept = &worker->kept[i];
        if (kept->response != NULL && kept->shortest_edge == shortest && kept->lasting == lasting &&
            memcmp(&kept->problem, problem, sizeof *problem) == 0)
            return kept;
        if (kept->used < oldest->used)
            oldest = kept;
    }
    oldest->response = NULL;
    return oldest;
}

const struct line_response *worker_response(struct model_worker *worker,
                                            const struct line_problem *problem, double edge,
                                            bool lasting, struct error *error) {
    double shortest = shortest_edge_for(worker, edge);
    struct kept_response *kept = kept_for(worker, problem, shortest, lasting);
    kept->used = ++worker->calls;
    if (kept->response != NULL)
        return kept->response;
    arena_rewind(kept->arena, (struct arena_mark){0, 0});
    kept->response = lasting ? line_response_create_long(problem, shortest, kept->arena, error)
                             : line_response_create(problem, shortest, kept->arena, error);
    kept->lasting = lasting;
    kept->problem = *problem;
    kept->shortest_edge = shortest;
    return kept->response;
}

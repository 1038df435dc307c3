#include "worker.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

struct model_worker {
    struct arena *arena;
    struct line_problem problem; /* padding and unused entries zeroed, so that memcmp compares */
    double shortest_edge;
    struct line_response *response;
};

struct model_worker *model_worker_create(struct error *error) {
    struct model_worker *worker = calloc(1, sizeof *worker);
    if (worker == NULL) {
        error_set(error, ERROR_MEMORY, "out of memory");
        return NULL;
    }
    worker->arena = arena_create(error);
    if (worker->arena == NULL) {
        free(worker);
        return NULL;
    }
    return worker;
}

void model_worker_free(struct model_worker *worker) {
    if (worker == NULL)
        return;
    arena_free(worker->arena);
    free(worker);
}

/* Edges share a response within a factor of four; the class is a power of four of a picosecond, so
 * it depends on the edge alone and never on what was asked before. */
static double shortest_edge_of_class(double edge) {
    double class = floor(log2(edge / 1e-12) / 2.0);
    double shortest = ldexp(1e-12, 2 * (int)class);
    return shortest <= edge ? shortest : shortest / 4.0;
}

const struct line_response *worker_response(struct model_worker *worker,
                                            const struct line_problem *problem, double edge,
                                            struct error *error) {
    double shortest = shortest_edge_of_class(edge);
    if (worker->response != NULL && worker->shortest_edge == shortest &&
        memcmp(&worker->problem, problem, sizeof *problem) == 0)
        return worker->response;
    arena_rewind(worker->arena, (struct arena_mark){0, 0});
    worker->response = line_response_create(problem, shortest, worker->arena, error);
    worker->problem = *problem;
    worker->shortest_edge = shortest;
    return worker->response;
}

#include "worker.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

struct kept {
    struct arena *arena;
    struct line_problem problem; /* padding and unused entries zeroed, so that memcmp compares */
    double shortest_edge;
    bool to_rest;
    struct line_response *response;
};

struct model_worker {
    struct kept kept[WORKER_RESPONSES];
};

struct model_worker *model_worker_create(struct error *error) {
    struct model_worker *worker = calloc(1, sizeof *worker);
    if (worker == NULL) {
        error_set(error, ERROR_MEMORY, "out of memory");
        return NULL;
    }
    for (size_t i = 0; i < WORKER_RESPONSES; i++) {
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
    for (size_t i = 0; i < WORKER_RESPONSES; i++)
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

const struct line_response *worker_response(struct model_worker *worker, size_t place,
                                            const struct line_problem *problem, double edge,
                                            bool to_rest, struct error *error) {
    struct kept *kept = &worker->kept[place];
    double shortest = shortest_edge_of_class(edge);
    if (kept->response != NULL && kept->shortest_edge == shortest && kept->to_rest == to_rest &&
        memcmp(&kept->problem, problem, sizeof *problem) == 0)
        return kept->response;
    arena_rewind(kept->arena, (struct arena_mark){0, 0});
    kept->response = to_rest ? line_response_create_long(problem, shortest, kept->arena, error)
                             : line_response_create(problem, shortest, kept->arena, error);
    kept->problem = *problem;
    kept->shortest_edge = shortest;
    kept->to_rest = to_rest;
    return kept->response;
}

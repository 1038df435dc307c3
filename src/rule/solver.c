#include "solver.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

enum { BUCKETS = 1 << 12 };

bool solver_start(struct solver *solver, const struct model *model, struct model_memo *memo,
                  struct error *error) {
    *solver = (struct solver){.model = model, .memo = memo};
    solver->arena = arena_create(error);
    if (solver->arena == NULL)
        return false;
    solver->buckets = arena_new(solver->arena, BUCKETS, struct solver_case *, error);
    bool ok = solver->buckets != NULL;
    for (size_t i = 0; ok && i < SOLVER_BENCHES; i++) {
        solver->benches[i].worker = model_worker_create(error);
        ok = solver->benches[i].worker != NULL;
    }
    if (!ok)
        solver_end(solver);
    return ok;
}

void solver_end(struct solver *solver) {
    for (size_t i = 0; i < SOLVER_BENCHES; i++)
        model_worker_free(solver->benches[i].worker);
    arena_free(solver->arena);
    *solver = (struct solver){0};
}

void solver_expect(struct solver *solver, double shortest_edge) {
    for (size_t i = 0; i < SOLVER_BENCHES; i++)
        model_worker_expect(solver->benches[i].worker, shortest_edge);
}

/* -0 and 0 are one value. */
static uint64_t bits_of(double value) {
    uint64_t bits;
    double normal = value == 0.0 ? 0.0 : value;
    memcpy(&bits, &normal, sizeof bits);
    return bits;
}

static size_t bucket_of(const double *inputs, size_t count) {
    uint64_t hash = 0x9e3779b97f4a7c15u;
    for (size_t i = 0; i < count; i++) {
        hash ^= bits_of(inputs[i]);
        hash *= 0xff51afd7ed558ccdu;
        hash ^= hash >> 32;
    }
    return (size_t)(hash % BUCKETS);
}

static bool same(const double *a, const double *b, size_t count) {
    for (size_t i = 0; i < count; i++)
        if (bits_of(a[i]) != bits_of(b[i]))
            return false;
    return true;
}

/* Drive inputs change the response only; everything else is part of what is prepared. */
static bool same_shape(const struct model *model, const double *a, const double *b) {
    for (size_t i = 0; i < model->input_count; i++)
        if (model->inputs[i].kind != MODEL_DRIVE && bits_of(a[i]) != bits_of(b[i]))
            return false;
    return true;
}

static bool name_inputs(const struct model *model, const double *inputs, struct error *error) {
    char text[400] = "";
    size_t used = 0;
    for (size_t i = 0; i < model->input_count && used < sizeof text - 1; i++) {
        char value[64];
        const struct model_input *input = &model->inputs[i];
        if (input->words != NULL || inputs[i] == input->standard)
            continue;
        quantity_print(value, sizeof value, inputs[i], input->dimension, -4, QUANTITY_ASCII,
                       QUANTITY_MILLIMETRES);
        used += (size_t)snprintf(text + used, sizeof text - used, "%s%s=%s", used > 0 ? " " : "",
                                 input->name, value);
    }
    return error_in(error, "%s %.200s", model->name, text);
}

/* The bench that holds this shape, else the one that was not used last. */
static struct solver_bench *bench_for(struct solver *solver, const double *inputs) {
    size_t chosen = (solver->last + 1) % SOLVER_BENCHES;
    for (size_t i = 0; i < SOLVER_BENCHES; i++)
        if (solver->benches[i].has_prepared &&
            same_shape(solver->model, inputs, solver->benches[i].prepared_for))
            chosen = i;
    solver->last = chosen;
    return &solver->benches[chosen];
}

static bool prepare(struct solver *solver, struct solver_bench *bench, const double *inputs,
                    struct error *error) {
    if (bench->has_prepared && same_shape(solver->model, inputs, bench->prepared_for))
        return true;
    bench->has_prepared = false;
    if (!model_check(solver->model, inputs, error) ||
        !solver->model->prepare(inputs, bench->prepared, solver->memo, error))
        return false;
    memcpy(bench->prepared_for, inputs, solver->model->input_count * sizeof *inputs);
    bench->has_prepared = true;
    return true;
}

static struct solver_case *new_case(struct solver *solver, const double *inputs, double **outputs,
                                    double **errors, struct error *error) {
    size_t input_count = solver->model->input_count, output_count = solver->model->output_count;
    struct solver_case *made = arena_new(solver->arena, 1, struct solver_case, error);
    double *numbers = arena_new(solver->arena, input_count + 2 * output_count, double, error);
    if (made == NULL || numbers == NULL)
        return NULL;
    memcpy(numbers, inputs, input_count * sizeof *inputs);
    *outputs = numbers + input_count;
    *errors = *outputs + output_count;
    *made = (struct solver_case){.inputs = numbers, .outputs = *outputs, .errors = *errors};
    return made;
}

const struct solver_case *solver_ask(struct solver *solver, const double *given,
                                     struct error *error) {
    double inputs[MODEL_MOST_INPUTS];
    memcpy(inputs, given, solver->model->input_count * sizeof *inputs);
    if (!model_resolve(solver->model, inputs, error))
        return NULL;
    struct solver_case **bucket = &solver->buckets[bucket_of(inputs, solver->model->input_count)];
    solver->asked++;
    for (struct solver_case *known = *bucket; known != NULL; known = known->next)
        if (same(known->inputs, inputs, solver->model->input_count))
            return known;
    double *outputs = NULL, *errors = NULL;
    struct solver_case *made = new_case(solver, inputs, &outputs, &errors, error);
    if (made == NULL)
        return NULL;
    struct solver_bench *bench = bench_for(solver, inputs);
    if (!prepare(solver, bench, inputs, error) ||
        !solver->model->respond(inputs, bench->prepared, bench->worker, outputs, errors,
                                &made->flags, error)) {
        name_inputs(solver->model, inputs, error);
        return NULL;
    }
    made->next = *bucket;
    *bucket = made;
    solver->solved++;
    return made;
}

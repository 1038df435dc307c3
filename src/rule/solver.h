#ifndef RULE_SOLVER_H
#define RULE_SOLVER_H

#include "groundrules/model.h"

/* One thread's way to ask a model for many cases: solved fields come from the shared memo, the last
 * prepared states and line responses are kept, and no case is solved twice while the solver lives.
 */

/* A shape, with what is kept for it. */
struct solver_bench {
    struct model_worker *worker;
    double prepared[MODEL_MOST_PREPARED];
    double prepared_for[MODEL_MOST_INPUTS];
    bool has_prepared;
};

/* Two: a condition against a reference board asks for both boards in turn. */
enum { SOLVER_BENCHES = 2 };

struct solver {
    const struct model *model;
    struct model_memo *memo; /* shared, borrowed */
    struct arena *arena;     /* owns the store */
    struct solver_case **buckets;
    size_t asked, solved;
    struct solver_bench benches[SOLVER_BENCHES];
    size_t last; /* the bench used last */
};

struct solver_case {
    const double *inputs;  /* [input_count] */
    const double *outputs; /* [output_count] */
    const double *errors;  /* [output_count], absolute */
    unsigned flags;
    struct solver_case *next;
};

bool solver_start(struct solver *solver, const struct model *model, struct model_memo *memo,
                  struct error *error);
/* The shortest edge of the region that is to be searched, s: cases are prepared for it.  0 = not
 * known. Changes answers within their errors. */
void solver_expect(struct solver *solver, double shortest_edge);
/* Takes a solver that was zeroed and never started, too. */
void solver_end(struct solver *solver);

/* Inputs that are NAN take their standard or same_as value.  NULL on failure: the message names the
 * inputs.  Lives as long as the solver. */
const struct solver_case *solver_ask(struct solver *solver, const double *inputs,
                                     struct error *error);

#endif

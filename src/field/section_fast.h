#ifndef FIELD_SECTION_FAST_H
#define FIELD_SECTION_FAST_H

#include "section_self.h"

#include "groundrules/section.h"

#include <stdbool.h>

/* How finely a section is solved. */
struct section_orders {
    struct section_terms terms[SECTION_MOST_CONDUCTORS];
    size_t images;
    size_t foot_corner; /* face.h */
    double node_error;  /* aimed at by every rule of nodes */
    size_t more_nodes;  /* beyond that, so that no two efforts share a rule */
    bool reached;       /* false when something had to be capped: do not trust */
};

/* Nodes of a conductor towards another (or its own images). */
struct section_nodes {
    size_t level, upright;
    bool level_crowded, upright_crowded;
    bool enough; /* false when capped far below what is needed */
};

/* Orders for about 1e-4 at effort 0, about ten times less with each further one. */
void section_orders_choose(const struct section_problem *problem, int effort,
                           struct section_orders *orders);

/* Nodes on conductor i for its interaction with j; i == j is the one with its own images. */
struct section_nodes section_nodes(const struct section_problem *problem,
                                   const struct section_orders *orders, size_t i, size_t j);

/* One solve with given orders, problem already checked; error = NAN. */
bool section_fast(const struct section_problem *problem, const struct section_orders *orders,
                  struct section_solution *solution, struct error *error);

#endif

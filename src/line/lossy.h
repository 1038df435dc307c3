#ifndef LINE_LOSSY_H
#define LINE_LOSSY_H

#include "smooth.h"

/* A lossy line's step response at all ends, from its Laplace transform. */
struct lossy {
    struct smooth end[2][LINE_MOST_CONDUCTORS]; /* near, far */
    double window;                              /* s, after which ramps show little */
    /* V s: how much the integral may still swing then within a shortest edge, and its range. */
    double late[2][LINE_MOST_CONDUCTORS], range[2][LINE_MOST_CONDUCTORS];
};

/* `problem` has been checked.  `long_run`: followed for longer, for sequences of edges and late
 * instants.  Results and scratch from `arena`. */
bool lossy_build(const struct line_problem *problem, double shortest_edge, bool long_run,
                 struct arena *arena, struct lossy *lossy, struct error *error);

#endif

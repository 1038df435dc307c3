#ifndef LINE_LOSSY_H
#define LINE_LOSSY_H

#include "smooth.h"

/* A lossy line's step response at all ends, from its Laplace transform. */
struct lossy {
    struct smooth end[2][LINE_MOST_CONDUCTORS]; /* near, far */
    double window;                              /* s, after which a ramp shows no more than ... */
    double tail[2][LINE_MOST_CONDUCTORS];       /* ... so much of the shortest ramp's peak */
};

/* `problem` has been checked.  Results and scratch from `arena`. */
bool lossy_build(const struct line_problem *problem, size_t driven, double shortest_edge,
                 struct arena *arena, struct lossy *lossy, struct error *error);

#endif

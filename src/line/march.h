#ifndef LINE_MARCH_H
#define LINE_MARCH_H

#include "fronts.h"
#include "rest.h"

/* The step response of all ends on a uniform grid by the method of characteristics (Branin 1967,
 * for N modes): every mode carries its wave to the other end unchanged after its own delay, the
 * ends are integrated in time.  Delays are not rounded: the grid divides the fastest mode's delay,
 * the others are read by cubic interpolation, and the fronts correct both interpolation and
 * integration, so that everything between them is of fourth order in the step. */

struct march_setup {
    const struct line_modes *modes;
    double length;
    const struct end_system *end[2]; /* near, far */
    const struct fronts *fronts;
    double step;   /* s; fastest delay / step is an integer of at least 3: see stepper_of */
    size_t window; /* steps over which everything must have come to rest */
    double edge;   /* s, > 0: the shortest that will be asked for */
    double final[2][LINE_MOST_CONDUCTORS]; /* V, what all ends settle to; NAN where not known */
    size_t most_steps;                     /* give up then */
    double settled;                        /* see rest_of */
    size_t exact_steps;                    /* > 0: take exactly so many, without looking for rest */
};

struct march {
    size_t count;
    double step;
    size_t samples, window;
    size_t stride;                             /* from conductor to conductor in `value` */
    double *value[2];                          /* [count][stride] step response, V, near and far */
    double *integral[2];                       /* [count][samples] its integral, V s */
    struct rest rest[2][LINE_MOST_CONDUCTORS]; /* not set with exact_steps */
};

/* Results and scratch are both taken from `arena`. */
bool march_run(const struct march_setup *setup, struct arena *arena, struct march *march,
               struct error *error);

#endif

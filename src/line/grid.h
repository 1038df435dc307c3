#ifndef LINE_GRID_H
#define LINE_GRID_H

#include "march.h"

#include <math.h>

/* The march's working state, shared by its parts: stepper.c makes the coefficients, corrections.c
 * what fronts add to single samples, march.c takes the steps. */

enum { GRID_STENCIL = 4 };
_Static_assert(FRONT_ORDERS == 4, "front_series is written out");

/* A front within this share of a step after a sample counts as being on it: fronts of the fastest
 * mode lie on samples but for rounding. */
#define ON_SAMPLE 1e-6

struct delay {
    size_t samples; /* whole samples, rounded up */
    double weight[GRID_STENCIL];
    double fraction; /* how far past the second stencil point */
};

struct stepper {
    size_t states;
    double decay[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* exp(A h) */
    double gain[GRID_STENCIL]
               [LINE_MOST_CONDUCTORS *
                LINE_MOST_CONDUCTORS];  /* of the waves one sample ahead, now, and two before */
    double drive[LINE_MOST_CONDUCTORS]; /* of the EMF, constant from 0 on */
};

struct grid {
    const struct march_setup *setup;
    size_t count, pad, room;
    struct delay delay[LINE_MOST_CONDUCTORS];
    struct stepper stepper[2];
    double *leaving[2]; /* [count][pad + room] */
    double *value[2];   /* [count][room] */
    double *sum[2];     /* [count][room] running sums of values; NULL with exact_steps */
    size_t summed;      /* so many of them */
    struct rest_seen seen[2][LINE_MOST_CONDUCTORS];
    size_t corrected;              /* samples that corrections reach */
    double *wave_correction[2];    /* [corrected][count] of arriving waves */
    double *state_correction[2];   /* [corrected][states] */
    double *leaving_correction[2]; /* [corrected][count] of leaving waves */
    double state[2][LINE_MOST_CONDUCTORS];
    double arriving[2][GRID_STENCIL]
                   [LINE_MOST_CONDUCTORS]; /* one sample ahead, now, and two before */
};

/* Reading a wave that left `delay` seconds ago. */
struct delay delay_of(double delay, double step);
struct stepper stepper_of(const struct end_system *end, double step);

/* Samples from .. to of both ends. */
void steps_take(struct grid *grid, size_t from, size_t to);

/* Power series of one component of a front's jumps, `stride` apart, at `t` after the front. */
static inline double front_series(const double *jump, size_t stride, size_t orders, double t) {
    if (orders == 1)
        return jump[0];
    return jump[0] + t * (jump[stride] +
                          t * (1.0 / 2) * (jump[2 * stride] + t * (1.0 / 3) * jump[3 * stride]));
}
/* First sample that includes the front. */
static inline size_t front_sample(double time, double step) {
    double sample = ceil(time / step - ON_SAMPLE);
    return sample > 0 ? (size_t)sample : 0;
}
/* Fills the grid's corrections from the fronts; memory from `arena`. */
bool corrections_take(struct grid *grid, struct arena *arena, struct error *error);

#endif

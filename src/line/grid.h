#ifndef LINE_GRID_H
#define LINE_GRID_H

#include "march.h"

/* The march's working state, shared by its parts: stepper.c makes the coefficients, corrections.c
 * what fronts add to single samples, march.c takes the steps. */

enum { GRID_STENCIL = 4 };

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
    double *leaving[2];            /* [count][pad + room] */
    double *value[2];              /* [count][room] */
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

/* Power series of one component of a front's jumps, `stride` apart, at `t` after the front. */
double front_series(const double *jump, size_t stride, size_t orders, double t);
/* First sample that includes the front. */
size_t front_sample(double time, double step);
/* Fills the grid's corrections from the fronts; memory from `arena`. */
bool corrections_take(struct grid *grid, struct arena *arena, struct error *error);

#endif

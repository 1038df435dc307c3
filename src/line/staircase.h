#ifndef LINE_STAIRCASE_H
#define LINE_STAIRCASE_H

#include "fronts.h"

/* The step response at one set of ends when all ends are resistive: constant between fronts, so
 * its integral and every edge's response are piecewise linear and exact. */
struct staircase {
    size_t count; /* conductors */
    size_t steps;
    double *time;     /* [steps], ascending */
    double *value;    /* [count][steps] V, from time[k] on */
    double *integral; /* [count][steps] V s, up to time[k] */
};

bool staircase_build(const struct fronts *fronts, size_t count, bool near, struct arena *arena,
                     struct staircase *staircase, struct error *error);
/* The response at time t of `conductor` to a ramp of `edge`. */
double staircase_at(const struct staircase *staircase, size_t conductor, double edge, double time);
/* Its largest magnitude from `from` on: there, at a front or one edge after a front, nowhere else.
 */
struct line_peak staircase_peak(const struct staircase *staircase, size_t conductor, double edge,
                                double from);

#endif

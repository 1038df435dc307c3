#ifndef LINE_CURVE_H
#define LINE_CURVE_H

#include "fronts.h"
#include "march.h"

/* One end's step response and its integral between samples: a Hermite cubic through integral and
 * value at both ends of a cell, the fronts inside the cell taken off and put back. */

struct curve_front {
    double time;
    double jump[FRONT_ORDERS];
};

struct curve {
    double step;
    size_t samples;
    const double *value, *integral; /* [samples] */
    double final, settled; /* after the last sample: final V, integral settled + final * time */
    const size_t *first;   /* [samples + 1]: fronts of cell i are first[i] .. first[i+1]-1 */
    const struct curve_front *front;
    size_t fronts;
};

/* A curve for each conductor at the near or the far end; `curves` and `rest` (which may
 * come from a finer march) have march->count places. */
bool curves_build(const struct march *march, const struct rest *rest, const struct fronts *fronts,
                  bool near, struct arena *arena, struct curve *curves, struct error *error);

/* The response at time t to a ramp of `edge`. */
double curve_response(const struct curve *curve, double edge, double time);
/* The true maximum of its magnitude from `from` on, also between samples. */
struct line_peak curve_peak(const struct curve *curve, double edge, double from);

#endif

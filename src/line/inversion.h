#ifndef LINE_INVERSION_H
#define LINE_INVERSION_H

#include "smooth.h"
#include "terminated.h"

/* Sigmas, of the wider Gaussian, that a band begins before t = 0. */
enum { INVERSION_LEAD = 6 };

/* Numerical inversion of the Laplace transform on a shifted contour (Wilcox 1978). */
struct inversion {
    size_t count;
    struct terminated line;
    /* Of all ends, for a step: at late times V = final + creep / sqrt(pi t). */
    double final[2][LINE_MOST_CONDUCTORS]; /* V */
    double creep[2][LINE_MOST_CONDUCTORS]; /* V s^1/2 */
};

/* `problem` and its ends are borrowed.  `slowest` s: a time in which all of it settles. */
struct inversion inversion_of(const struct line_problem *problem, double slowest);

/* One band of all ends, `period` s long of which 0.85 are used: with `wider` 0 the
 * integral of the step response less its final value, smoothed by `sigma`; else what `sigma` adds
 * to `wider` of the integral itself.  band[end * LINE_MOST_CONDUCTORS + conductor].  Samples from
 * `arena`. */
bool inversion_band(const struct inversion *inversion, double wider, double sigma, double period,
                    struct arena *arena, struct smooth_band *band, struct error *error);

/* How many frequencies that takes. */
double inversion_frequencies(double sigma, double period);

#endif

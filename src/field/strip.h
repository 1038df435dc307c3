#ifndef FIELD_STRIP_H
#define FIELD_STRIP_H

#include <stdbool.h>

/* A strip of a trace's surface: straight, thin, current even across it; all strips of a problem
 * have one length and start together.  Across is x, height is z. */
struct strip {
    bool upright;    /* runs along z at x = `at`; else along x at z = `at` */
    double from, to; /* m, from < to */
    double at;
};

/* Averages over both strips of half of Neumann's integral (so in m, times mu0/2pi), the second
 * one's image in z = 0 taken off; pieces of `length`.  Relative 1e-6 of the part without image; for
 * strips far apart 1e-6 of the difference. */
double strip_coupling(const struct strip *a, const struct strip *b, double length);

#endif

#ifndef FIELD_CORNER_H
#define FIELD_CORNER_H

#include <stdbool.h>
#include <stddef.h>

/* One wedge of dielectric at a corner. */
struct corner_sector {
    double angle; /* radians */
    double dk;
};

/* The smallest exponent nu in (0.1, 1] of the potential r^nu at the meeting of wedges (Meixner's
 * edge condition): with `metal` the sectors fill the angle between two conducting walls, otherwise
 * they close the full circle.  1: nothing singular.  Found from the transfer matrix of potential
 * and flux across the sectors, whose upper right element (metal) or trace minus 2 (none) vanishes;
 * false position to 1e-13.  count >= 1. */
double corner_exponent(const struct corner_sector *sectors, size_t count, bool metal);

#endif

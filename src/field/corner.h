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

/* The power a of the mapping x = s^a after which charge at the corner is smooth in s: 1 without a
 * corner, else 1/nu, whose powers of s are 0 and next/nu - 1; where the next exponent is below
 * twice the first (always without metal, where exponents come in pairs nu and about 2 - nu) that is
 * too rough, and 2/nu is taken. */
double corner_power(const struct corner_sector *sectors, size_t count, bool metal);

#endif

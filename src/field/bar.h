#ifndef FIELD_BAR_H
#define FIELD_BAR_H

#include "filament.h"

#include <stdbool.h>

/* Two parallel bars of rectangular section, sides 0 allowed: Neumann's integral averaged over both
 * sections (so in m, without mu0/4pi).  A bar without sides is a filament. */
struct bar_pair {
    struct filament_pair along;
    double side[2][2]; /* m, [bar][across] */
    double offset[2];  /* m, [across]: centre of the second minus centre of the first */
};

/* By whichever of the two below is good here. */
double bar_neumann(const struct bar_pair *pair);

/* The 64 terms of Hoer and Love 1965.  False when a side is 0 or when rounding spoils more than a
 * part in 1e10, as it does for long, thin and distant bars. */
bool bar_closed_form(const struct bar_pair *pair, double *neumann);

/* The average as one integral over the difference of the two positions, whose density is piecewise
 * linear; rectangles halved towards the singular line.  Relative 1e-9, any shape and distance. */
double bar_quadrature(const struct bar_pair *pair);

#endif

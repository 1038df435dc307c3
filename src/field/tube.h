#ifndef FIELD_TUBE_H
#define FIELD_TUBE_H

#include "filament.h"

/* Two parallel thin tubes with current even around them: Neumann's integral averaged over both (in
 * m, without mu0/4pi).  distance 0: on one axis, overlapping (the self-inductance when both are the
 * same) or not; else distance > radius[0] + radius[1]. */
struct tube_pair {
    struct filament_pair along;
    double radius[2];
    double distance;
};
double tube_neumann(const struct tube_pair *pair);

/* Points on each circle for trapezoidal sums over two circles to reach about 1e-11. */
int tube_points(double radius_a, double radius_b, double distance);

#endif

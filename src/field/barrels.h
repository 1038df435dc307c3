#ifndef FIELD_BARRELS_H
#define FIELD_BARRELS_H

#include "groundrules/inductance.h"

/* Two equal barrels, or one with itself, in harmonics of the azimuth: averages of
 *     k(s) = -l ln s + g(s)
 * over both circles, weighted with 1, sqrt(2) cos m phi, sqrt(2) sin m phi.  In m; times factor *
 * mu0/2pi. */
struct barrel_kernel {
    double length; /* l */
    double factor; /* 1; 1/2 onto a plane, where l is twice the height */
    bool plain;    /* between planes: g = l ln `reference` */
    double reference;
};
struct barrel_kernel barrel_kernel(double height, enum inductance_ends ends, double reference);

enum { BARREL_ORDERS = INDUCTANCE_MOST_HARMONICS + 1 };

/* self[orders]: weight with itself; nothing else couples. */
void barrel_self(const struct barrel_kernel *kernel, double radius, size_t orders, double *self);

/* cosine[m * orders + n], sine likewise: azimuth counted from the direction first -> second, m on
 * the first. */
void barrel_pair(const struct barrel_kernel *kernel, double radius, double distance, size_t orders,
                 double *cosine, double *sine);

#endif

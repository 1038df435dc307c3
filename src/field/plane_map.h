#ifndef FIELD_PLANE_MAP_H
#define FIELD_PLANE_MAP_H

#include <complex.h>

/* The ideal planes of a section by a map W that takes the space they leave onto the upper half
 * plane: a line charge at z' has the potential -(1/2pi) (ln|W - W'| - ln|W - conj W'|). */
enum plane_kind {
    PLANE_BELOW, /* y = 0: W = z */
    PLANE_TWO,   /* y = 0 and y = spacing: W = exp(pi z / spacing) */
    PLANE_HALF,  /* the half-line y = 0, x <= end: W = i sqrt(z - end) */
    PLANE_NONE,  /* W = z, without the second logarithm */
};

struct plane_map {
    enum plane_kind kind;
    double spacing, end;
};

double complex plane_map_at(const struct plane_map *map, double complex z);

/* dW/dz as a function of W. */
double complex plane_map_slope(const struct plane_map *map, double complex w);

#endif

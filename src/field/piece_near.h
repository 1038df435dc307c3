#ifndef FIELD_PIECE_NEAR_H
#define FIELD_PIECE_NEAR_H

#include "piece.h"

/* Where a piece's kernel is nearly singular: the complex s* at which z(s*) is a given point.  Both
 * kinds of z(s) can be inverted outright. */

enum { PIECE_MOST_ROOTS = 16 };

struct piece_root {
    double re, im;             /* s* */
    double slope_re, slope_im; /* weight of 1/(s* - s) in the field */
    double sign;
};

struct piece_roots {
    size_t count;
    struct piece_root root[PIECE_MOST_ROOTS];
};

/* Whether the roots of a point may matter. */
static inline bool piece_is_close(const struct piece *piece, double complex z) {
    double dx = creal(z) - piece->middle_x, dy = cimag(z) - piece->middle_y;
    return dx * dx + dy * dy < piece->close2;
}

/* Adds the roots of point z that are near enough, with `sign` as the weight of their logarithm and
 * factor / (dz/ds) of their pole. */
void piece_add_roots(const struct piece *piece, double complex z, double complex factor,
                     double sign, struct piece_roots *roots);
/* One root s with the slope dz/ds there. */
void piece_add_root(double complex s, double complex slope, double complex factor, double sign,
                    struct piece_roots *roots);

/* Adds the integrals over [0, 1] of P_k(2s - 1) times the roots' logarithms ln|s* - s| and poles,
 * through Legendre functions of the second kind; either may be NULL. */
void piece_add_closed_forms(const struct piece_roots *roots, size_t terms, double *potential,
                            double *field);

#endif

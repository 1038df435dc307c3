#ifndef FIELD_QUADRATURE_H
#define FIELD_QUADRATURE_H

#include <stddef.h>

/* Gauss-Legendre nodes, ascending, and weights on [-1, 1]; exact to degree 2 count - 1, nodes and
 * weights to a few units in the last place.  count >= 1. */
void quadrature_gauss(size_t count, double *nodes, double *weights);

/* P_0(t) .. P_(count-1)(t), Legendre, any t. */
void quadrature_legendre(size_t count, double t, double *values);

#endif

#ifndef LINE_SEQUENCE_H
#define LINE_SEQUENCE_H

#include <stddef.h>

/* The worst that sequences of edges can make of one edge's sampled response r, count samples, which
 * has come to rest at 0 at its end. */

/* Edges of alternating sign, any two at least `apart` samples apart, exactly, by dynamic
 * programming from the end: the best sum whose next edge is a rising one counted from sample i on,
 *     P[i] = max(P[i+1], r[i] + max(0, M[i+apart])),   M likewise with -r,
 * scratch[2 (count + apart + 1)]. */
double sequence_free(const double *response, size_t count, size_t apart, double *scratch);

/* Edges on whole multiples of `period` samples: half the total variation of r[start + k period],
 * for the worst start. */
double sequence_clocked(const double *response, size_t count, size_t period);

#endif

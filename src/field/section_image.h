#ifndef FIELD_SECTION_IMAGE_H
#define FIELD_SECTION_IMAGE_H

#include <stddef.h>

enum { SECTION_MOST_IMAGES = 24 };

/* A few reweighted images in place of the slab's infinite series: sum_k weight[k] u^k, k = 0 ..
 * count - 1, for 1/(1 + reflection u) on 0 <= u <= 1 (u = exp(-2 h q), q the wave number along the
 * slab).  Value and slope are exact at u = 1: the total charge vanishes, the far field's dipole and
 * the parallel-plate limit are right; in between the error is that of a Chebyshev interpolant of
 * degree count - 3. */
void section_image_weights(double reflection, size_t count, double *weight);

/* Images for which the largest error over u is below `error` (at most SECTION_MOST_IMAGES). */
size_t section_image_count(double reflection, double error);

#endif

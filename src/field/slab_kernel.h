#ifndef FIELD_SLAB_KERNEL_H
#define FIELD_SLAB_KERNEL_H

#include "section_image.h"

#include <stdbool.h>

/* Green's function of the grounded slab and of the plane alone, times -2 pi, heights in units of
 * the slab's: ln r0 - K ln r1 - sum_k weight[k] ln rho_k, and ln r0 - ln rho_0. */
struct slab_kernel {
    size_t images;
    double reflection;                  /* K */
    double weight[SECTION_MOST_IMAGES]; /* of section_image_weights, times 1 - K^2 */
};

void slab_kernel_set(struct slab_kernel *kernel, double reflection, size_t images);

/* For `count` pairs of points with horizontal distance^2 `across2`, sum of heights `sum` and, when
 * `direct`, difference of heights `apart` (otherwise the terms in r0 and r1 are left out):
 * slab[i] and vacuum[i].  Accuracy 1e-13. */
void slab_kernel_evaluate(const struct slab_kernel *kernel, bool direct, size_t count,
                          const double *restrict across2, const double *restrict apart,
                          const double *restrict sum, double *restrict slab,
                          double *restrict vacuum);

#endif

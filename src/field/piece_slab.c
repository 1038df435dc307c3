/* Potential of one piece over the grounded slab: ln r0, - K ln r1 seen in the slab's face, and the
 * reweighted images below the plane; each has roots of its own. */

#include "logarithm.h"
#include "piece_near.h"
#include "vector.h"

static const double origin[PIECE_MOST_NODES] = {0};

/* value[q] += weight ln|z - z_q|, of squared distances */
VECTOR_CLONES
static void add_image(const double *x, const double *y, size_t count, double at_x, double at_y,
                      double weight, double *restrict value) {
    for (size_t q = 0; q < count; q++) {
        double dx = at_x - x[q], dy = at_y - y[q];
        value[q] += 0.5 * weight * logarithm(dx * dx + dy * dy);
    }
}

static size_t list_images(const struct slab_kernel *kernel, double complex z, double complex *at,
                          double *weight) {
    at[0] = z;
    weight[0] = 1;
    at[1] = conj(z) + 2 * I;
    weight[1] = -kernel->reflection;
    for (size_t k = 0; k < kernel->images; k++) {
        at[k + 2] = conj(z) - 2 * I * (double)k;
        weight[k + 2] = -kernel->weight[k];
    }
    return kernel->images + 2;
}

void piece_integrate_slab(const struct piece *piece, const struct piece_rules *rules,
                          const struct slab_kernel *kernel, const struct piece_target *target,
                          double *potential) {
    double complex at[SECTION_MOST_IMAGES + 2];
    double weight[SECTION_MOST_IMAGES + 2];
    size_t count = list_images(kernel, target->z, at, weight);
    struct piece_roots roots = {.count = 0};
    double near[PIECE_MOST_NODES] = {0}, far[PIECE_MOST_NODES] = {0};
    bool any = false;
    for (size_t i = 0; i < count; i++) {
        bool close = piece_is_close(piece, at[i]);
        any = any || close;
        if (close)
            piece_add_roots(piece, at[i], 0, weight[i], &roots);
        add_image(close ? piece->near_x : piece->far_x, close ? piece->near_y : piece->far_y,
                  close ? rules->near.count : rules->far.count, creal(at[i]), cimag(at[i]),
                  weight[i], close ? near : far);
    }
    for (size_t i = 0; i < roots.count; i++)
        add_image(rules->near.s, origin, rules->near.count, roots.root[i].re, roots.root[i].im,
                  -roots.root[i].sign, near);
    for (size_t k = 0; k < rules->terms; k++)
        potential[k] = 0;
    piece_add_moments(&rules->far, rules->terms, far, potential);
    if (any)
        piece_add_moments(&rules->near, rules->terms, near, potential);
    piece_add_closed_forms(&roots, rules->terms, potential, NULL);
}

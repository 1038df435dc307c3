/* Potential of one piece over the grounded slab: ln r0, - K ln r1 seen in the slab's face, and the
 * reweighted images below the plane; each has roots of its own. */

#include "logarithm.h"
#include "piece_near.h"
#include "vector.h"

/* value[q] += weight ln|z - z_q|, of squared distances */
VECTOR_CLONES
static void add_image(const double *x, const double *y, size_t count, double at_x, double at_y,
                      double weight, double *restrict value) {
    for (size_t q = 0; q < count; q++) {
        double dx = at_x - x[q], dy = at_y - y[q];
        value[q] += 0.5 * weight * logarithm(dx * dx + dy * dy);
    }
}

static void take_roots_out(const struct piece_roots *roots, const struct piece_rule *rule,
                           double *restrict value) {
    for (size_t i = 0; i < roots->count; i++) {
        const struct piece_root *root = &roots->root[i];
        add_image(rule->s, (const double[PIECE_MOST_NODES]){0}, rule->count, root->re, root->im,
                  -root->sign, value);
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
    double weight[SECTION_MOST_IMAGES + 2], value[PIECE_MOST_NODES] = {0};
    size_t count = list_images(kernel, target->z, at, weight);
    struct piece_roots roots = {.count = 0};
    bool near = false;
    for (size_t i = 0; i < count; i++)
        if (piece_is_close(piece, at[i])) {
            near = true;
            piece_add_roots(piece, at[i], 0, weight[i], &roots);
        }
    const struct piece_rule *rule = near ? &rules->near : &rules->far;
    for (size_t i = 0; i < count; i++)
        add_image(near ? piece->near_x : piece->far_x, near ? piece->near_y : piece->far_y,
                  rule->count, creal(at[i]), cimag(at[i]), weight[i], value);
    take_roots_out(&roots, rule, value);
    for (size_t k = 0; k < rules->terms; k++)
        potential[k] = 0;
    piece_add_moments(rule, rules->terms, value, potential);
    piece_add_closed_forms(&roots, rules->terms, potential, NULL);
}

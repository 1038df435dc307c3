/* Kernel integrals over one piece.
 * Far: Gauss' rule.
 * Near: the kernel, continued to complex s, has logarithmic singularities where z(s*) is the target
 * or, in the image part, the target's mirror image; both maps z(s) can be inverted outright.
 * ln(s* - s) and 1/(s* - s) are subtracted at the nodes and added in closed form through Legendre
 * functions of the second kind (Helsing and Ojala 2008 do the same with monomials). */

#include "logarithm.h"
#include "piece_near.h"
#include "vector.h"

#include <math.h>
#include <string.h>

/* Mirror images: below the plane (of a half-plane only where it is between), above the other. */
static bool find_roots(const struct piece *piece, const struct plane_map *map,
                       const struct piece_target *target, struct piece_roots *roots) {
    bool close = false;
    double complex z = target->z, image = conj(z), factor = conj(target->normal);
    roots->count = 0;
    if (target->own == piece) {
        /* Exactly on the cut, where the principal value is. */
        close = true;
        piece_add_root(target->s, piece_slope(piece, target->s), target->normal, 1, roots);
    } else if (piece_is_close(piece, z)) {
        close = true;
        piece_add_roots(piece, z, target->normal, 1, roots);
    }
    bool mirrored = map->kind == PLANE_BELOW || map->kind == PLANE_TWO ||
                    (map->kind == PLANE_HALF && creal(z) < map->end && cimag(piece->origin) > 0);
    if (mirrored && piece_is_close(piece, image)) {
        close = true;
        piece_add_roots(piece, image, factor, -1, roots);
    }
    image += 2 * I * map->spacing;
    if (map->kind == PLANE_TWO && piece_is_close(piece, image)) {
        close = true;
        piece_add_roots(piece, image, factor, -1, roots);
    }
    return close;
}

struct samples {
    size_t count;
    const double *s, *x, *y;
    bool image;
    double fade; /* take (1 - s)^fade out of the distance */
};

VECTOR_CLONES
static void sample_potential(const struct samples *at, double x, double y,
                             const struct piece_roots *roots, double *restrict value) {
    double ratio[PIECE_MOST_NODES];
    for (size_t q = 0; q < at->count; q++) {
        double dx = x - at->x[q], apart = y - at->y[q], sum = y + at->y[q];
        double direct = dx * dx + apart * apart, image = dx * dx + sum * sum;
        ratio[q] = at->image ? direct / image : direct;
    }
    for (size_t i = 0; i < roots->count; i++) {
        const struct piece_root *root = &roots->root[i];
        for (size_t q = 0; q < at->count; q++) {
            double dx = root->re - at->s[q], distance = dx * dx + root->im * root->im;
            ratio[q] = root->sign > 0 ? ratio[q] / distance : ratio[q] * distance;
        }
    }
    if (at->fade > 0)
        for (size_t q = 0; q < at->count; q++) {
            double rest = 1 - at->s[q];
            ratio[q] *= rest * rest * (at->fade > 1 ? rest * rest : 1);
        }
    for (size_t q = 0; q < at->count; q++)
        value[q] = 0.5 * logarithm(ratio[q]);
}

VECTOR_CLONES
static void sample_field(const struct samples *at, double x, double y, double c_re, double c_im,
                         const struct piece_roots *roots, double *restrict value) {
    for (size_t q = 0; q < at->count; q++) {
        double dx = x - at->x[q], apart = y - at->y[q], sum = y + at->y[q];
        double direct = (c_re * dx + c_im * apart) / (dx * dx + apart * apart);
        double image = (c_re * dx + c_im * sum) / (dx * dx + sum * sum);
        value[q] = at->image ? direct - image : direct;
    }
    for (size_t i = 0; i < roots->count; i++) {
        const struct piece_root *root = &roots->root[i];
        double re = root->sign * root->slope_re, im = root->sign * root->slope_im;
        for (size_t q = 0; q < at->count; q++) {
            double dx = root->re - at->s[q];
            value[q] -= (re * dx + im * root->im) / (dx * dx + root->im * root->im);
        }
    }
}

typedef double four __attribute__((vector_size(4 * sizeof(double))));

/* Four functions at a time; two sums, so that additions need not wait for each other. */
VECTOR_CLONES
void piece_add_moments(const struct piece_rule *rule, size_t terms, const double *value,
                       double *restrict total) {
    for (size_t k = 0; k < terms; k += 4) {
        four sum[2] = {{0}, {0}};
        for (size_t q = 0; q < rule->count; q++) {
            four moment;
            memcpy(&moment, rule->moment[q] + k, sizeof moment);
            sum[q % 2] += moment * value[q];
        }
        sum[0] += sum[1];
        for (size_t j = 0; j < 4 && k + j < terms; j++)
            total[k + j] += sum[0][j];
    }
}

void piece_integrate(const struct piece *piece, const struct piece_rules *rules,
                     const struct plane_map *map, const struct piece_target *target,
                     double *potential, double *field) {
    struct piece_roots roots;
    double value[PIECE_MOST_NODES];
    bool near = find_roots(piece, map, target, &roots);
    const struct piece_rule *rule = near ? &rules->near : &rules->far;
    bool fading = piece->tail && map->kind == PLANE_NONE;
    struct samples at = {rule->count,
                         rule->s,
                         near ? piece->near_x : piece->far_x,
                         near ? piece->near_y : piece->far_y,
                         map->kind != PLANE_NONE,
                         fading ? piece->power : 0};
    double x = creal(target->w), y = cimag(target->w);
    for (size_t k = 0; k < rules->terms; k++) {
        if (potential != NULL)
            potential[k] = fading ? -piece->power * rules->end_logarithm[k] : 0;
        if (field != NULL)
            field[k] = 0;
    }
    if (potential != NULL) {
        sample_potential(&at, x, y, &roots, value);
        piece_add_moments(rule, rules->terms, value, potential);
    }
    if (field != NULL) {
        double complex c = target->normal * plane_map_slope(map, target->w);
        sample_field(&at, x, y, creal(c), cimag(c), &roots, value);
        piece_add_moments(rule, rules->terms, value, field);
    }
    if (roots.count > 0)
        piece_add_closed_forms(&roots, rules->terms, potential, field);
}

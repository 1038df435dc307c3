/* Kernel integrals over one piece.
 * Far: Gauss' rule.
 * Near: the kernel, continued to complex s, has logarithmic singularities where z(s*) is the target
 * or, in the image part, the target's mirror image; both maps z(s) can be inverted outright.
 * ln(s* - s) and 1/(s* - s) are subtracted at the nodes and added in closed form through Legendre
 * functions of the second kind (Helsing and Ojala 2008 do the same with monomials). */

#include "logarithm.h"
#include "piece.h"
#include "vector.h"

#include <math.h>

enum { MOST_ROOTS = 4 };

/* Semi-major axis of the ellipse with foci at the piece's ends below which roots are taken out. */
static const double near_ellipse = 1.35;

struct root {
    double re, im;             /* s* */
    double slope_re, slope_im; /* weight of 1/(s* - s) in the field */
    double sign;
};

struct roots {
    size_t count;
    struct root root[MOST_ROOTS];
};

/* Poles of 1/(s* - s): `factor` over dz/ds. */
static void add_root(double complex s, double complex slope, double complex factor, double sign,
                     struct roots *roots) {
    double x = 2 * creal(s) - 1, y = 2 * cimag(s);
    double ellipse = 0.5 * (sqrt((x - 1) * (x - 1) + y * y) + sqrt((x + 1) * (x + 1) + y * y));
    if (ellipse > near_ellipse || roots->count == MOST_ROOTS)
        return;
    double complex weight = factor / slope;
    roots->root[roots->count++] =
        (struct root){creal(s), cimag(s), creal(weight), cimag(weight), sign};
}

static void add_roots(const struct piece *piece, double complex z, double complex factor,
                      double sign, struct roots *roots) {
    const double pi = 3.14159265358979323846;
    double complex w = (z - piece->origin) * conj(piece->step);
    double scale =
        creal(piece->step) * creal(piece->step) + cimag(piece->step) * cimag(piece->step);
    w /= scale;
    double a = piece->power;
    if (piece->tail) {
        double complex rest = a == 1 ? 1 / w : cpow(w, -1 / a);
        add_root(1 - rest, piece->step * a * w / rest, factor, sign, roots);
        return;
    }
    if (a == 1) {
        add_root(w, piece->step, factor, sign, roots);
        return;
    }
    double angle = carg(w), size = pow(cabs(w), 1 / a);
    double complex s = size * cexp(I * angle / a);
    add_root(s, piece->step * a * w / s, factor, sign, roots);
    /* The next sheet's root, behind the corner. */
    double other = (angle - copysign(2 * pi, angle)) / a;
    if (fabs(other) < 0.8 * pi) {
        s = size * cexp(I * other);
        add_root(s, piece->step * a * w / s, factor, sign, roots);
    }
}

static bool is_close(const struct piece *piece, double complex z) {
    if (piece->tail)
        return true;
    double complex away = z - piece->origin - 0.5 * piece->step;
    double distance = creal(away) * creal(away) + cimag(away) * cimag(away);
    double length =
        creal(piece->step) * creal(piece->step) + cimag(piece->step) * cimag(piece->step);
    return distance < 2.25 * length;
}

/* Mirror images: below the plane (of a half-plane only where it is between), above the other. */
static bool find_roots(const struct piece *piece, const struct plane_map *map,
                       const struct piece_target *target, struct roots *roots) {
    bool close = false;
    double complex z = target->z, image = conj(z), factor = conj(target->normal);
    roots->count = 0;
    if (target->own == piece) {
        /* Exactly on the cut, where the principal value is. */
        close = true;
        add_root(target->s, piece_slope(piece, target->s), target->normal, 1, roots);
    } else if (is_close(piece, z)) {
        close = true;
        add_roots(piece, z, target->normal, 1, roots);
    }
    bool mirrored = map->kind == PLANE_BELOW || map->kind == PLANE_TWO ||
                    (map->kind == PLANE_HALF && creal(z) < map->end && cimag(piece->origin) > 0);
    if (mirrored && is_close(piece, image)) {
        close = true;
        add_roots(piece, image, factor, -1, roots);
    }
    image += 2 * I * map->spacing;
    if (map->kind == PLANE_TWO && is_close(piece, image)) {
        close = true;
        add_roots(piece, image, factor, -1, roots);
    }
    return close;
}

/* logarithm[k] = integral of P_k(2s - 1) ln|s* - s| ds, q = integrals of P_k / (s* - s). */
static void closed_form(double re, double im, size_t terms, double *restrict logarithms,
                        double *restrict q_re, double *restrict q_im) {
    double x = 2 * re - 1, y = 2 * im;
    double plus = 0.5 * log((x + 1) * (x + 1) + y * y);
    double minus = 0.5 * log((x - 1) * (x - 1) + y * y);
    double angle_plus = y == 0 ? 0 : atan2(y, x + 1), angle_minus = y == 0 ? 0 : atan2(y, x - 1);
    q_re[0] = 0.5 * (plus - minus);
    q_im[0] = 0.5 * (angle_plus - angle_minus);
    q_re[1] = x * q_re[0] - y * q_im[0] - 1;
    q_im[1] = x * q_im[0] + y * q_re[0];
    logarithms[0] = 0.5 * ((x + 1) * plus - y * angle_plus - (x - 1) * minus + y * angle_minus) -
                    1 - 0.69314718055994530942;
    for (size_t n = 1; n < terms; n++) {
        double k = (double)n;
        double b_re = x * q_re[n] - y * q_im[n], b_im = x * q_im[n] + y * q_re[n];
        q_re[n + 1] = ((2 * k + 1) * b_re - k * q_re[n - 1]) / (k + 1);
        q_im[n + 1] = ((2 * k + 1) * b_im - k * q_im[n - 1]) / (k + 1);
        logarithms[n] = (q_re[n + 1] - q_re[n - 1]) / (2 * k + 1);
    }
}

static void add_closed_forms(const struct roots *roots, size_t terms, double *potential,
                             double *field) {
    double logarithms[PIECE_MOST_TERMS], re[PIECE_MOST_TERMS + 1], im[PIECE_MOST_TERMS + 1];
    for (size_t i = 0; i < roots->count; i++) {
        const struct root *root = &roots->root[i];
        closed_form(root->re, root->im, terms, logarithms, re, im);
        for (size_t k = 0; k < terms; k++) {
            if (potential != NULL)
                potential[k] += root->sign * logarithms[k];
            if (field != NULL)
                field[k] += root->sign * 2 * (root->slope_re * re[k] - root->slope_im * im[k]);
        }
    }
}

struct samples {
    size_t count;
    const double *s, *x, *y;
    bool image;
    double fade; /* take (1 - s)^fade out of the distance */
};

VECTOR_CLONES
static void sample_potential(const struct samples *at, double x, double y,
                             const struct roots *roots, double *restrict value) {
    double ratio[PIECE_MOST_NODES];
    for (size_t q = 0; q < at->count; q++) {
        double dx = x - at->x[q], apart = y - at->y[q], sum = y + at->y[q];
        double direct = dx * dx + apart * apart, image = dx * dx + sum * sum;
        ratio[q] = at->image ? direct / image : direct;
    }
    for (size_t i = 0; i < roots->count; i++) {
        const struct root *root = &roots->root[i];
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
                         const struct roots *roots, double *restrict value) {
    for (size_t q = 0; q < at->count; q++) {
        double dx = x - at->x[q], apart = y - at->y[q], sum = y + at->y[q];
        double direct = (c_re * dx + c_im * apart) / (dx * dx + apart * apart);
        double image = (c_re * dx + c_im * sum) / (dx * dx + sum * sum);
        value[q] = at->image ? direct - image : direct;
    }
    for (size_t i = 0; i < roots->count; i++) {
        const struct root *root = &roots->root[i];
        double re = root->sign * root->slope_re, im = root->sign * root->slope_im;
        for (size_t q = 0; q < at->count; q++) {
            double dx = root->re - at->s[q];
            value[q] -= (re * dx + im * root->im) / (dx * dx + root->im * root->im);
        }
    }
}

/* Four functions at a time make vector code. */
VECTOR_CLONES
static void add_moments(const struct piece_rule *rule, size_t terms, const double *value,
                        double *restrict total) {
    for (size_t k = 0; k < terms; k += 4) {
        double sum[4] = {0};
        for (size_t q = 0; q < rule->count; q++) {
            const double *moment = rule->moment[q] + k;
            double v = value[q];
            sum[0] += moment[0] * v;
            sum[1] += moment[1] * v;
            sum[2] += moment[2] * v;
            sum[3] += moment[3] * v;
        }
        for (size_t j = 0; j < 4 && k + j < terms; j++)
            total[k + j] += sum[j];
    }
}

void piece_integrate(const struct piece *piece, const struct piece_rules *rules,
                     const struct plane_map *map, const struct piece_target *target,
                     double *potential, double *field) {
    struct roots roots;
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
        add_moments(rule, rules->terms, value, potential);
    }
    if (field != NULL) {
        double complex c = target->normal * plane_map_slope(map, target->w);
        sample_field(&at, x, y, creal(c), cimag(c), &roots, value);
        add_moments(rule, rules->terms, value, field);
    }
    if (roots.count > 0)
        add_closed_forms(&roots, rules->terms, potential, field);
}

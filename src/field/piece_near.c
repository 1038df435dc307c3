#include "piece_near.h"

#include <math.h>

/* Semi-major axis of the ellipse with foci at the piece's ends below which roots are taken out. */
static const double near_ellipse = 1.35;

/* Poles of 1/(s* - s): `factor` over dz/ds. */
void piece_add_root(double complex s, double complex slope, double complex factor, double sign,
                    struct piece_roots *roots) {
    double x = 2 * creal(s) - 1, y = 2 * cimag(s);
    double ellipse = 0.5 * (sqrt((x - 1) * (x - 1) + y * y) + sqrt((x + 1) * (x + 1) + y * y));
    if (ellipse > near_ellipse || roots->count == PIECE_MOST_ROOTS)
        return;
    double complex weight = factor / slope;
    roots->root[roots->count++] =
        (struct piece_root){creal(s), cimag(s), creal(weight), cimag(weight), sign};
}

void piece_add_roots(const struct piece *piece, double complex z, double complex factor,
                     double sign, struct piece_roots *roots) {
    const double pi = 3.14159265358979323846;
    double complex w = (z - piece->origin) * conj(piece->step);
    double scale =
        creal(piece->step) * creal(piece->step) + cimag(piece->step) * cimag(piece->step);
    w /= scale;
    double a = piece->power;
    if (piece->tail) {
        double complex rest = a == 1 ? 1 / w : cpow(w, -1 / a);
        piece_add_root(1 - rest, piece->step * a * w / rest, factor, sign, roots);
        return;
    }
    if (a == 1) {
        piece_add_root(w, piece->step, factor, sign, roots);
        return;
    }
    double angle = carg(w), size = pow(cabs(w), 1 / a);
    double complex s = size * cexp(I * angle / a);
    piece_add_root(s, piece->step * a * w / s, factor, sign, roots);
    /* The next sheet's root, behind the corner. */
    double other = (angle - copysign(2 * pi, angle)) / a;
    if (fabs(other) < 0.8 * pi) {
        s = size * cexp(I * other);
        piece_add_root(s, piece->step * a * w / s, factor, sign, roots);
    }
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

void piece_add_closed_forms(const struct piece_roots *roots, size_t terms, double *potential,
                            double *field) {
    double logarithms[PIECE_MOST_TERMS], re[PIECE_MOST_TERMS + 1], im[PIECE_MOST_TERMS + 1];
    for (size_t i = 0; i < roots->count; i++) {
        const struct piece_root *root = &roots->root[i];
        closed_form(root->re, root->im, terms, logarithms, re, im);
        for (size_t k = 0; k < terms; k++) {
            if (potential != NULL)
                potential[k] += root->sign * logarithms[k];
            if (field != NULL)
                field[k] += root->sign * 2 * (root->slope_re * re[k] - root->slope_im * im[k]);
        }
    }
}

#include "face.h"

#include "keep.h"
#include "quadrature.h"

#include <math.h>
#include <stdbool.h>

static const size_t ladder[] = {2,  3,  4,   5,   6,   7,   8,   9,   10, 12, 14,
                                16, 18, 20,  24,  28,  32,  36,  40,  48, 56, 64,
                                80, 96, 112, 128, 160, 192, 224, 256, 320};
enum { RUNGS = sizeof ladder / sizeof *ladder };

double face_corner_exponent(size_t corner) {
    return corner == FACE_SHEET_EDGE ? 2.0 : 1.5 + 0.06 * (double)corner;
}

size_t face_foot_corner(double dk) {
    double exponent = 3.14159265358979323846 / (2 * atan(sqrt(1 + 2 / dk)));
    double step = floor((exponent - 1.5) / 0.06 + 0.5);
    return step < 8 ? (size_t)fmax(step, 0) : 8;
}

/* Continued fraction of I_s(a, b), Abramowitz and Stegun 26.5.8, by Lentz's method; converges fast
 * for s < (a + 1)/(a + b + 2). */
static double beta_fraction(double a, double b, double s) {
    const double tiny = 1e-300;
    double c = 1.0, d = 1 - (a + b) * s / (a + 1);
    d = 1 / (fabs(d) < tiny ? tiny : d);
    double value = d;
    for (int m = 1; m < 300; m++) {
        double even = m * (b - m) * s / ((a + 2 * m - 1) * (a + 2 * m));
        double odd = -(a + m) * (a + b + m) * s / ((a + 2 * m) * (a + 2 * m + 1));
        for (int part = 0; part < 2; part++) {
            double step = part == 0 ? even : odd;
            d = 1 + step * d;
            c = 1 + step / c;
            d = 1 / (fabs(d) < tiny ? tiny : d);
            c = fabs(c) < tiny ? tiny : c;
            value *= c * d;
        }
        if (fabs(c * d - 1) < 1e-16)
            break;
    }
    return value;
}

static double incomplete_beta(double a, double b, double s) {
    if (s <= 0)
        return 0;
    if (s >= 1)
        return 1;
    double front = exp(lgamma(a + b) - lgamma(a) - lgamma(b) + a * log(s) + b * log1p(-s));
    if (s < (a + 1) / (a + b + 2))
        return front * beta_fraction(a, b, s) / a;
    return 1 - front * beta_fraction(b, a, 1 - s) / b;
}

double face_position(enum face_kind kind, size_t corner, double s) {
    double a = face_corner_exponent(corner);
    return incomplete_beta(a, kind == FACE_LEVEL ? a : 1.5, s);
}

struct rule_key {
    enum face_kind kind;
    size_t corner, count;
    bool crowded;
};

/* moment = M D, M[k][m] = integral P_k(2s - 1) P_m(t(x(s))) ds over a fine rule whose nodes crowd
 * at the ends like u^3, D[m][q] = (2m + 1)/2 weight_q P_m(t_q) the interpolation's Legendre form.
 */
static void *make_rule(const void *data, struct arena *arena, struct error *error) {
    const struct rule_key *key = data;
    size_t n = key->count, fine_nodes = 160 + 5 * n;
    struct face_rule *rule = arena_new(arena, 1, struct face_rule, error);
    double *fine = arena_new(arena, 2 * fine_nodes, double, error);
    double *inner = arena_new(arena, FACE_MOST_TERMS * n, double, error);
    if (rule != NULL)
        rule->moment = arena_new(arena, FACE_MOST_TERMS * n, double, error);
    if (rule == NULL || fine == NULL || inner == NULL || rule->moment == NULL)
        return NULL;
    rule->count = n;
    double weight[FACE_MOST_NODES], t[FACE_MOST_NODES], p[FACE_MOST_TERMS],
        legendre[FACE_MOST_NODES];
    quadrature_gauss(fine_nodes, fine, fine + fine_nodes);
    for (size_t i = 0; i < fine_nodes; i++) {
        double u = 0.5 * (1 + fine[i]);
        double s = u * u * u * (10 - 15 * u + 6 * u * u);
        double w = 0.5 * fine[fine_nodes + i] * 30 * u * u * (1 - u) * (1 - u);
        double x = face_position(key->kind, key->corner, s);
        double at = key->crowded ? -2 * sin(asin(1 - 2 * x) / 3) : 2 * x - 1;
        quadrature_legendre(FACE_MOST_TERMS, 2 * s - 1, p);
        quadrature_legendre(n, at, legendre);
        for (size_t k = 0; k < FACE_MOST_TERMS; k++)
            for (size_t m = 0; m < n; m++)
                inner[k * n + m] += w * p[k] * legendre[m];
    }
    quadrature_gauss(n, t, weight);
    for (size_t q = 0; q < n; q++) {
        double tau = 0.5 * (1 + t[q]);
        rule->node[q] = key->crowded ? tau * tau * (3 - 2 * tau) : tau;
        quadrature_legendre(n, t[q], legendre);
        for (size_t k = 0; k < FACE_MOST_TERMS; k++)
            for (size_t m = 0; m < n; m++)
                rule->moment[k * n + q] +=
                    inner[k * n + m] * (2 * (double)m + 1) * 0.5 * weight[q] * legendre[m];
    }
    return rule;
}

const struct face_rule *face_rule(enum face_kind kind, size_t corner, size_t wanted, bool crowded,
                                  struct error *error) {
    static void *_Atomic slots[FACE_KINDS][FACE_CORNERS][2][RUNGS];
    size_t rung = 0;
    while (rung < RUNGS - 1 && ladder[rung] < wanted)
        rung++;
    struct rule_key key = {kind, corner, ladder[rung], crowded};
    return keep_get(&slots[kind][corner][crowded ? 1 : 0][rung], make_rule, &key, error);
}

#ifndef FIELD_PIECE_H
#define FIELD_PIECE_H

#include "outline.h"
#include "plane_map.h"
#include "slab_kernel.h"

#include <complex.h>

/* A piece of a face with one expansion of its charge: density dx = sum_k c_k P_k(2s - 1) ds, s in
 * [0, 1], so that c_0 is the piece's charge.  Two kinds of z(s):
 *   origin + step s^power             from a corner, power the reciprocal of its exponent, so that
 *                                     the singular charge is one of the functions; 1: no corner;
 *   origin + step / (1 - s)^power     to infinity, where the charge decays like
 *                                     distance^(-1 - 1/power): power 1, or 2 beside a half-plane.
 */

enum { PIECE_MOST_TERMS = 16, PIECE_MOST_NODES = 64 };

/* What decides how finely a section is solved. */
struct piece_effort {
    size_t terms;      /* per piece */
    size_t more_tests; /* nodes of the Galerkin integral beyond the terms */
    size_t far_nodes, near_nodes;
    double reach;    /* a piece is no longer than that many times its distance to the next corner */
    bool images;     /* rectangles and trapezoids on a slab: by its Green's function */
    double smallest; /* 0: corners are mapped; else pieces shrink geometrically to this length */
};

struct piece {
    bool tail;
    double complex origin, step;
    double power;
    double complex normal; /* unit, to the left of its face */
    double left, right;    /* as outline_face */
    size_t conductor;
    double middle_x, middle_y,
        close2; /* within the root of close2 its kernel may be near singular */
    double *far_x, *far_y, *near_x, *near_y; /* W at the nodes */
};

/* Nodes on [0, 1] and weight times Legendre polynomial, function by function within a node. */
struct piece_rule {
    size_t count;
    double s[PIECE_MOST_NODES];
    double moment[PIECE_MOST_NODES][PIECE_MOST_TERMS];
};

struct piece_rules {
    size_t terms;
    struct piece_rule test, far, near;      /* near: nodes crowd at s = 0 */
    double end_logarithm[PIECE_MOST_TERMS]; /* integrals of P_k ln(1 - s) */
};

void piece_rules_make(const struct piece_effort *effort, struct piece_rules *rules);

double complex piece_position(const struct piece *piece, double s);
double complex piece_slope(const struct piece *piece, double s); /* dz/ds */

/* Cuts all faces into pieces.  NULL without memory or, ERROR_INPUT, when they are too many. */
struct piece *piece_cut(const struct outline *outline, const struct piece_effort *effort,
                        const struct piece_rules *rules, size_t *count, struct arena *arena,
                        struct error *error);

struct piece_target {
    double complex z, w, normal;
    const struct piece *own; /* the piece that it is a point of, or NULL */
    double s;                /* where on it */
};

/* potential[k], field[k] = integrals over the piece of P_k ds times ln|W - W'| - ln|W - conj W'|
 * and times its derivative along the target's normal (principal value on the piece itself); either
 * may be NULL.  Where the kernel is nearly singular, its complex poles z(s*) = target (and mirror
 * images of it) are taken out and integrated in closed form. */
void piece_integrate(const struct piece *piece, const struct piece_rules *rules,
                     const struct plane_map *map, const struct piece_target *target,
                     double *potential, double *field);

/* The same potential with the Green's function of the grounded slab below y = 1 (slab_kernel.h) in
 * place of the plane's, for free charge on and above it. */
void piece_integrate_slab(const struct piece *piece, const struct piece_rules *rules,
                          const struct slab_kernel *kernel, const struct piece_target *target,
                          double *potential);

/* total[k] += sum over nodes of moment k times value */
void piece_add_moments(const struct piece_rule *rule, size_t terms, const double *value,
                       double *total);

#endif

/* Bars by quadrature.  The mean over both sections of a function of the distance depends on the
 * difference (u, v) of two positions only; u and v have the density of a difference of two even
 * distributions: a trapezium, a box when one side is 0, a point when both are.  Folded to u, v >= 0
 * it is piecewise linear, and the only singular line is u = v = 0. */
#include "bar.h"

#include <math.h>

enum { MOST_PIECES = 6, NODES = 8, MOST_DEPTH = 48 };

static const double gauss_node[NODES] = {-0.96028985649753623168, -0.79666647741362673959,
                                         -0.52553240991632898582, -0.18343464249564980494,
                                         0.18343464249564980494,  0.52553240991632898582,
                                         0.79666647741362673959,  0.96028985649753623168};
static const double gauss_weight[NODES] = {
    0.10122853629037625915, 0.22238103445337447054, 0.31370664587788728734, 0.36268378337836198297,
    0.36268378337836198297, 0.31370664587788728734, 0.22238103445337447054, 0.10122853629037625915};

/* One linear piece of a density, from <= |difference| <= to; a point when they are equal. */
struct piece {
    double from, to;
    double start, end; /* density at both; a point's weight in `start` */
};

struct density {
    int count;
    struct piece pieces[MOST_PIECES];
};

static void add_piece(struct density *density, double from, double to, double start, double end) {
    if (!(to > from))
        return;
    if (to <= 0.0) { /* folded */
        density->pieces[density->count++] = (struct piece){-to, -from, end, start};
        return;
    }
    if (from < 0.0) {
        double middle = start + (end - start) * (-from / (to - from));
        density->pieces[density->count++] = (struct piece){0.0, -from, middle, start};
        density->pieces[density->count++] = (struct piece){0.0, to, middle, end};
        return;
    }
    density->pieces[density->count++] = (struct piece){from, to, start, end};
}

static struct density difference(double first, double second, double offset) {
    struct density density = {0};
    double wide = fmax(first, second), narrow = fmin(first, second);
    if (wide == 0.0) {
        density.count = 1;
        density.pieces[0] = (struct piece){fabs(offset), fabs(offset), 1.0, 1.0};
        return density;
    }
    double outer = (wide + narrow) / 2.0, inner = (wide - narrow) / 2.0, top = 1.0 / wide;
    add_piece(&density, offset - outer, offset - inner, narrow > 0.0 ? 0.0 : top, top);
    add_piece(&density, offset - inner, offset + inner, top, top);
    add_piece(&density, offset + inner, offset + outer, top, narrow > 0.0 ? 0.0 : top);
    return density;
}

static int nodes_of(const struct piece *piece, double *at, double *weight) {
    double half = (piece->to - piece->from) / 2.0;
    if (half == 0.0) {
        at[0] = piece->from;
        weight[0] = piece->start;
        return 1;
    }
    for (int i = 0; i < NODES; i++) {
        double t = (1.0 + gauss_node[i]) / 2.0;
        at[i] = piece->from + (piece->to - piece->from) * t;
        weight[i] = half * gauss_weight[i] * (piece->start + (piece->end - piece->start) * t);
    }
    return NODES;
}

static double tensor(const struct filament_pair *along, const struct piece *u,
                     const struct piece *v) {
    double x[NODES], wx[NODES], y[NODES], wy[NODES], sum = 0.0;
    int nx = nodes_of(u, x, wx), ny = nodes_of(v, y, wy);
    for (int i = 0; i < nx; i++)
        for (int j = 0; j < ny; j++)
            sum += wx[i] * wy[j] * filament_neumann(along, hypot(x[i], y[j]));
    return sum;
}

static void halve(const struct piece *whole, struct piece *low, struct piece *high) {
    double at = (whole->from + whole->to) / 2.0, value = (whole->start + whole->end) / 2.0;
    *low = (struct piece){whole->from, at, whole->start, value};
    *high = (struct piece){at, whole->to, value, whole->end};
}

/* Gauss is good for a rectangle no longer than its distance from the singular line: 4.2^-16.  What
 * is left in the corner after `depth` halvings counts for nothing. */
static double rectangle(const struct filament_pair *along, const struct piece *u,
                        const struct piece *v, int depth) {
    double width = u->to - u->from, height = v->to - v->from;
    if (depth == 0 || fmax(width, height) <= hypot(u->from, v->from))
        return tensor(along, u, v);
    struct piece low, high;
    if (width >= height) {
        halve(u, &low, &high);
        return rectangle(along, &low, v, depth - 1) + rectangle(along, &high, v, depth - 1);
    }
    halve(v, &low, &high);
    return rectangle(along, u, &low, depth - 1) + rectangle(along, u, &high, depth - 1);
}

double bar_quadrature(const struct bar_pair *pair) {
    struct density u = difference(pair->side[0][0], pair->side[1][0], pair->offset[0]);
    struct density v = difference(pair->side[0][1], pair->side[1][1], pair->offset[1]);
    double sum = 0.0;
    for (int i = 0; i < u.count; i++)
        for (int j = 0; j < v.count; j++)
            sum += rectangle(&pair->along, &u.pieces[i], &v.pieces[j], MOST_DEPTH);
    return sum;
}

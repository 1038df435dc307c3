/* Hoer and Love's closed form for two parallel bars, and when to trust it. */
#include "bar.h"

#include <float.h>
#include <math.h>

/* One of the three cyclic pairs of terms: along x. */
static double cyclic(double x, double y, double z, double r, double *magnitude) {
    double x2 = x * x, y2 = y * y, z2 = z * z, rho = sqrt(y2 + z2);
    double logarithm =
        rho > 0.0 ? (6.0 * y2 * z2 - y2 * y2 - z2 * z2) / 24.0 * x * asinh(x / rho) : 0.0;
    double angle = x != 0.0 ? y * z * x2 * x / 6.0 * atan(y * z / (x * r)) : 0.0;
    *magnitude += fabs(logarithm) + fabs(angle);
    return logarithm - angle;
}

static double primitive(double x, double y, double z, double *magnitude) {
    double x2 = x * x, y2 = y * y, z2 = z * z, r = sqrt(x2 + y2 + z2);
    if (r == 0.0)
        return 0.0;
    double root = (x2 * x2 + y2 * y2 + z2 * z2 - 3.0 * (x2 * y2 + y2 * z2 + z2 * x2)) * r / 60.0;
    *magnitude += fabs(root);
    return root + cyclic(x, y, z, r, magnitude) + cyclic(y, z, x, r, magnitude) +
           cyclic(z, x, y, r, magnitude);
}

/* The four limits of one coordinate; their signs alternate. */
static void limits(double offset, double first, double second, double *at) {
    at[0] = offset - first;
    at[1] = offset - first + second;
    at[2] = offset + second;
    at[3] = offset;
}

bool bar_closed_form(const struct bar_pair *pair, double *neumann) {
    const double(*side)[2] = pair->side;
    double area = side[0][0] * side[0][1] * side[1][0] * side[1][1];
    if (!(area > 0.0))
        return false;
    double at[3][4], sum = 0.0, magnitude = 0.0;
    for (int k = 0; k < 2; k++) /* from corner to corner */
        limits(pair->offset[k] + (side[0][k] - side[1][k]) / 2.0, side[0][k], side[1][k], at[k]);
    limits(pair->along.b - pair->along.a, pair->along.l, pair->along.m, at[2]);
    for (int i = 0; i < 64; i++) {
        double f = primitive(at[0][i & 3], at[1][(i >> 2) & 3], at[2][i >> 4], &magnitude);
        sum += ((i ^ (i >> 2) ^ (i >> 4)) & 1) != 0 ? -f : f;
    }
    *neumann = sum / area;
    return 8.0 * DBL_EPSILON * magnitude < 1e-10 * fabs(sum);
}

double bar_neumann(const struct bar_pair *pair) {
    double neumann;
    return bar_closed_form(pair, &neumann) ? neumann : bar_quadrature(pair);
}

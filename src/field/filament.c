/* Parallel filaments: Grover's sum of four terms (Grover 1946, ch. 6), and Gauss where it cancels.
 */
#include "filament.h"

#include "groundrules/inductance.h"

#include <math.h>

double filament_overlap(const struct filament_pair *pair) {
    double shared = fmin(pair->a + pair->l, pair->b + pair->m) - fmax(pair->a, pair->b);
    return fmax(shared, 0.0);
}

/* |z| ln(|z| + q) - q, q = sqrt(z^2 + s^2): Grover's term without its -|z| ln s. */
static double term(double z, double s) {
    z = fabs(z);
    double q = sqrt(z * z + s * s);
    return z > 0.0 ? z * log(z + q) - q : -q;
}

static double sum_of_terms(const struct filament_pair *pair, double s, double *magnitude) {
    double offset = pair->b - pair->a;
    double outer = term(offset + pair->m, s), inner = term(offset - pair->l, s);
    double ends = term(offset + pair->m - pair->l, s), starts = term(offset, s);
    *magnitude = fabs(outer) + fabs(inner) + fabs(ends) + fabs(starts);
    return (outer + inner) - (ends + starts);
}

double filament_remainder(const struct filament_pair *pair, double s) {
    double magnitude;
    return sum_of_terms(pair, s, &magnitude);
}

/* int dz / sqrt(s^2 + z^2) over `length` from z = low. */
static double potential(double low, double length, double s) {
    double high = low + length;
    if (high <= 0.0)
        return potential(-high, length, s);
    if (low < 0.0)
        return asinh(high / s) + asinh(-low / s);
    /* asinh u - asinh v by the addition theorem, its difference of squares taken apart. */
    double far = sqrt(s * s + high * high), near = sqrt(s * s + low * low);
    return asinh(length * (high + low) / (high * near + low * far));
}

/* Over the shorter one, which is short against its distance: 3.7^-24 = 2e-14 and better. */
static double by_quadrature(const struct filament_pair *pair, double s) {
    static const double nodes[6] = {0.12523340851146891547, 0.36783149899818019375,
                                    0.58731795428661744730, 0.76990267419430468704,
                                    0.90411725637047485668, 0.98156063424671925069};
    static const double weights[6] = {0.24914704581340278500, 0.23349253653835480876,
                                      0.20316742672306592175, 0.16007832854334622633,
                                      0.10693932599531843096, 0.04717533638651182719};
    double half = pair->m / 2.0, middle = pair->b + half - pair->a, sum = 0.0;
    for (int i = 0; i < 6; i++)
        for (int side = -1; side <= 1; side += 2) {
            double z = middle + side * half * nodes[i];
            sum += weights[i] * potential(-z, pair->l, s);
        }
    return half * sum;
}

static double distance_to_ends(const struct filament_pair *pair, double s) {
    double start = fmax(fmax(pair->b - pair->a, pair->a - pair->b - pair->m), 0.0);
    double end =
        fmax(fmax(pair->b - pair->a - pair->l, pair->a + pair->l - pair->b - pair->m), 0.0);
    return hypot(s, fmin(start, end));
}

double filament_neumann(const struct filament_pair *given, double s) {
    struct filament_pair pair = *given;
    if (pair.m > pair.l)
        pair = (struct filament_pair){given->b, given->m, given->a, given->l};
    if (pair.a == pair.b && pair.l == pair.m && s > 0.0) {
        double l = pair.l;
        return 2.0 * l * (asinh(l / s) - l / (sqrt(l * l + s * s) + s));
    }
    if (pair.m <= distance_to_ends(&pair, s))
        return by_quadrature(&pair, s);
    /* Lengths in units of the longer one, so that the logarithms are of order 1. */
    double unit = pair.l, magnitude;
    pair = (struct filament_pair){0.0, 1.0, (pair.b - pair.a) / unit, pair.m / unit};
    double overlap = filament_overlap(&pair);
    double logarithm = overlap > 0.0 ? 2.0 * overlap * log(s / unit) : 0.0;
    return unit * (sum_of_terms(&pair, s / unit, &magnitude) - logarithm);
}

double inductance_meeting(double length_a, double length_b, double angle) {
    double half = sin(angle / 2.0), difference = length_a - length_b;
    double between = sqrt(difference * difference + 4.0 * length_a * length_b * half * half);
    return INDUCTANCE_MU_0 / (2.0 * M_PI) * cos(angle) *
           (length_a * atanh(length_b / (length_a + between)) +
            length_b * atanh(length_a / (length_b + between)));
}

double inductance_barrel(double height, double diameter) {
    double radius = diameter / 2.0, slant = sqrt(height * height + radius * radius);
    return INDUCTANCE_MU_0 / (2.0 * M_PI) *
           (height * asinh(height / radius) - height * height / (slant + radius));
}

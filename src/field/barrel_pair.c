/* Averages over the circles of one or two equal barrels.  The logarithm's are closed: for two
 * circles ln|D + r(w' - w)|, w = exp(i phi), expands into w^m w'^n with coefficients
 * (-1)^(n+1) (m+n-1)!/(m! n!) (r/D)^(m+n); on one circle ln(2 sin(psi/2)) = -sum cos(m psi)/m. */
#include "barrels.h"

#include "logarithm.h"
#include "quadrature.h"
#include "tube.h"
#include "vector.h"

#include <math.h>

enum { SELF_NODES = 16, MOST_POINTS = 256 };

struct barrel_kernel barrel_kernel(double height, enum inductance_ends ends, double reference) {
    if (ends == INDUCTANCE_ON_PLANE)
        return (struct barrel_kernel){2.0 * height, 0.5, false, reference};
    return (struct barrel_kernel){height, 1.0, ends == INDUCTANCE_PLANES, reference};
}

/* k + l ln s = l ln(l + q) - q + s, q = sqrt(l^2 + s^2), of squared distances. */
VECTOR_CLONES
static void remainders(size_t count, double length, double *restrict values) {
    for (size_t i = 0; i < count; i++) {
        double square = values[i], q = sqrt(length * length + square);
        values[i] = length * logarithm(length + q) - q + sqrt(square);
    }
}

/* Halved towards psi = 0 where the barrel is shorter than wide. */
void barrel_self(const struct barrel_kernel *kernel, double radius, size_t orders, double *self) {
    double node[SELF_NODES], weight[SELF_NODES], value[SELF_NODES], length = kernel->length;
    double reference = kernel->plain ? kernel->reference : 1.0;
    self[0] = -length * log(radius / reference);
    for (size_t m = 1; m < orders; m++)
        self[m] = length / (2.0 * (double)m);
    if (kernel->plain)
        return;
    quadrature_gauss(SELF_NODES, node, weight);
    /* cos m psi asks for pieces of its own: 16 nodes for at most two periods. */
    double high = M_PI, fine = fmin(4.0 * length / radius, 4.0 * M_PI / (double)orders);
    for (int level = 0; level <= 20; level++) {
        double low = high > fine && level < 20 ? high / 2.0 : 0.0;
        double psi[SELF_NODES];
        for (size_t i = 0; i < SELF_NODES; i++) {
            psi[i] = low + (high - low) * (1.0 + node[i]) / 2.0;
            double s = 2.0 * radius * sin(psi[i] / 2.0);
            value[i] = s * s;
        }
        remainders(SELF_NODES, length, value);
        for (size_t m = 0; m < orders; m++)
            for (size_t i = 0; i < SELF_NODES; i++)
                self[m] +=
                    (high - low) / (2.0 * M_PI) * weight[i] * value[i] * cos((double)m * psi[i]);
        if (low == 0.0)
            break;
        high = low;
    }
}

static void logarithms(const struct barrel_kernel *kernel, double ratio, double distance,
                       size_t orders, double *cosine, double *sine) {
    double reference = kernel->plain ? kernel->reference : 1.0;
    for (size_t m = 0; m < orders; m++) {
        double size = kernel->length * (m > 0 ? M_SQRT1_2 : 1.0) * pow(ratio, (double)m);
        for (size_t n = 0; n < orders; n++) {
            if (n > 0) /* (m+n)!/(m! n!) (r/D)^(m+n), alternating */
                size *= -ratio * (double)(m + n) / (double)n;
            double term = n > 0 ? size * M_SQRT1_2 : size;
            term /= m + n > 0 ? (double)(m + n) : 1.0;
            cosine[m * orders + n] = term;
            sine[m * orders + n] = m > 0 && n > 0 ? -term : 0.0;
        }
    }
    cosine[0] = -kernel->length * log(distance / reference);
}

/* Cosines and sines of k pi/points, k below 2 points: everything below is a whole multiple. */
struct turns {
    size_t points;
    double cosine[2 * MOST_POINTS], sine[2 * MOST_POINTS];
};

static void fill_turns(struct turns *turns, size_t points) {
    turns->points = points;
    for (size_t k = 0; k <= points; k++) {
        turns->cosine[k] = cos(M_PI * (double)k / (double)points);
        turns->sine[k] = sin(M_PI * (double)k / (double)points);
    }
    for (size_t k = points + 1; k < 2 * points; k++) {
        turns->cosine[k] = turns->cosine[2 * points - k];
        turns->sine[k] = -turns->sine[2 * points - k];
    }
}

/* Means over the second circle, weighted with cos n phi and sin n phi. */
static void means(const struct turns *turns, size_t orders, const double *values, double *even,
                  double *odd) {
    for (size_t n = 0; n < orders; n++) {
        even[n] = odd[n] = 0.0;
        for (size_t j = 0, turn = n; j < turns->points; j++) {
            even[n] += values[j] * turns->cosine[turn];
            odd[n] += values[j] * turns->sine[turn];
            turn += 2 * n;
            turn -= turn >= 2 * turns->points ? 2 * turns->points : 0;
        }
    }
}

/* Adds the rest by the trapezium rule over both circles. */
static void rest(const struct barrel_kernel *kernel, double radius, double distance, size_t orders,
                 double *cosine, double *sine) {
    struct turns turns;
    double values[MOST_POINTS], even[BARREL_ORDERS], odd[BARREL_ORDERS];
    size_t points = (size_t)tube_points(radius, radius, distance);
    points = points < 2 * orders ? 2 * orders : points;
    fill_turns(&turns, points);
    /* The first circle's lower half mirrors the upper one. */
    for (size_t i = 0; 2 * i < points; i++) {
        for (size_t j = 0; j < points; j++) {
            double x = distance + radius * (turns.cosine[2 * j + 1] - turns.cosine[2 * i + 1]);
            double y = radius * (turns.sine[2 * j + 1] - turns.sine[2 * i + 1]);
            values[j] = x * x + y * y;
        }
        remainders(points, kernel->length, values);
        means(&turns, orders, values, even, odd);
        double weight = (2 * i + 1 == points ? 1.0 : 2.0) / (double)(points * points);
        for (size_t m = 0; m < orders; m++)
            for (size_t n = 0; n < orders; n++) {
                size_t turn = m * (2 * i + 1) % (2 * points);
                double norm = weight * (m > 0 ? M_SQRT2 : 1.0) * (n > 0 ? M_SQRT2 : 1.0);
                cosine[m * orders + n] += norm * even[n] * turns.cosine[turn];
                sine[m * orders + n] += norm * odd[n] * turns.sine[turn];
            }
    }
}

void barrel_pair(const struct barrel_kernel *kernel, double radius, double distance, size_t orders,
                 double *cosine, double *sine) {
    logarithms(kernel, radius / distance, distance, orders, cosine, sine);
    if (!kernel->plain)
        rest(kernel, radius, distance, orders, cosine, sine);
}

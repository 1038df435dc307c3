#include "quadrature.h"

#include <math.h>

void quadrature_legendre(size_t count, double t, double *values) {
    values[0] = 1.0;
    if (count > 1)
        values[1] = t;
    for (size_t n = 1; n + 1 < count; n++) {
        double k = (double)n;
        values[n + 1] = ((2 * k + 1) * t * values[n] - k * values[n - 1]) / (k + 1);
    }
}

static double polynomial(size_t n, double t, double *derivative) {
    double before = 1.0, now = t;
    for (size_t j = 1; j < n; j++) {
        double k = (double)j;
        double next = ((2 * k + 1) * t * now - k * before) / (k + 1);
        before = now;
        now = next;
    }
    *derivative = (double)n * (t * now - before) / (t * t - 1.0);
    return now;
}

void quadrature_gauss(size_t count, double *nodes, double *weights) {
    const double pi = 3.14159265358979323846;
    for (size_t i = 0; i < (count + 1) / 2; i++) {
        double t = cos(pi * ((double)i + 0.75) / ((double)count + 0.5));
        double derivative = 1.0;
        for (int round = 0; round < 12; round++) {
            double step = polynomial(count, t, &derivative) / derivative;
            t -= step;
            if (fabs(step) < 1e-15)
                break;
        }
        if (2 * i + 1 == count)
            t = 0.0;
        polynomial(count, t, &derivative);
        double weight = 2.0 / ((1.0 - t * t) * derivative * derivative);
        nodes[i] = -t;
        nodes[count - 1 - i] = t;
        weights[i] = weights[count - 1 - i] = weight;
    }
}

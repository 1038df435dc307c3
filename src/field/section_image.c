#include "section_image.h"

#include <math.h>

/* Coefficients of prod_(j<n, j != skip) (u - at[j]) / (at[skip] - at[j]). */
static void lagrange(const double *at, size_t n, size_t skip, double *coefficient) {
    size_t degree = 0;
    coefficient[0] = 1;
    for (size_t j = 0; j < n; j++) {
        if (j == skip)
            continue;
        double scale = 1 / (at[skip] - at[j]);
        coefficient[degree + 1] = 0;
        for (size_t k = ++degree; k > 0; k--)
            coefficient[k] = scale * (coefficient[k - 1] - at[j] * coefficient[k]);
        coefficient[0] *= -scale * at[j];
    }
}

/* 1/(1+Ku) = 1/(1+K) + K v/(1+K)^2 + K^2 v^2/(1+K)^2 * 1/(1+Ku) with v = 1 - u. */
void section_image_weights(double reflection, size_t count, double *weight) {
    const double k = reflection, sum = 1 + k;
    size_t n = count - 2;
    double at[SECTION_MOST_IMAGES], basis[SECTION_MOST_IMAGES], rest[SECTION_MOST_IMAGES] = {0};
    for (size_t i = 0; i < n; i++)
        at[i] = 0.5 - 0.5 * cos(3.14159265358979323846 * ((double)i + 0.5) / (double)n);
    for (size_t i = 0; i < n; i++) {
        lagrange(at, n, i, basis);
        for (size_t j = 0; j < n; j++)
            rest[j] += basis[j] / (1 + k * at[i]);
    }
    for (size_t j = 0; j < count; j++)
        weight[j] = 0;
    weight[0] = 1 / sum + k / (sum * sum);
    weight[1] = -k / (sum * sum);
    double factor = k * k / (sum * sum);
    for (size_t j = 0; j < n; j++) {
        weight[j] += factor * rest[j];
        weight[j + 1] -= 2 * factor * rest[j];
        weight[j + 2] += factor * rest[j];
    }
}

size_t section_image_count(double reflection, double error) {
    if (reflection <= 0)
        return 3;
    double z = 2 / reflection + 1, rho = z + sqrt(z * z - 1);
    double factor = reflection * reflection / ((1 + reflection) * (1 + reflection));
    size_t count = 3;
    for (double now = factor / rho; now > error && count < SECTION_MOST_IMAGES; now /= rho)
        count++;
    return count;
}

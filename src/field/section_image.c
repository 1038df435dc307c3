#include "section_image.h"

#include <math.h>

enum { EXACT_TERMS = 3 };

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

/* 1/(1 + Ku) = (1 + r + r^2)/(1 + K) + r^3/(1 + Ku) with r = K (1 - u)/(1 + K); only the last
 * denominator is interpolated. */
void section_image_weights(double reflection, size_t count, double *weight) {
    const double k = reflection, ratio = k / (1 + k);
    size_t n = count - EXACT_TERMS;
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
    double power[EXACT_TERMS + 1] = {1}; /* r^i in powers of u */
    for (size_t i = 0; i <= EXACT_TERMS; i++) {
        for (size_t j = 0; j <= i; j++)
            if (i < EXACT_TERMS)
                weight[j] += power[j] / (1 + k);
            else
                for (size_t l = 0; l < n; l++)
                    weight[j + l] += power[j] * rest[l];
        if (i < EXACT_TERMS)
            for (size_t j = i + 1; j <= i + 1; j--) {
                power[j] = ratio * ((j <= i ? power[j] : 0) - (j > 0 ? power[j - 1] : 0));
                if (j == 0)
                    break;
            }
    }
}

size_t section_image_count(double reflection, double error) {
    size_t count = EXACT_TERMS + 1;
    if (reflection <= 0)
        return count;
    double z = 2 / reflection + 1, rho = z + sqrt(z * z - 1);
    double now = pow(reflection / (1 + reflection), EXACT_TERMS);
    for (; now > error && count < SECTION_MOST_IMAGES; now /= rho)
        count++;
    return count;
}

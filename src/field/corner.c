#include "corner.h"

#include <math.h>

/* In a sector the angular part is a sine: (potential, flux / nu) turns by nu * angle. */
static double mismatch(const struct corner_sector *sectors, size_t count, bool metal, double nu) {
    double m[2][2] = {{1, 0}, {0, 1}};
    for (size_t i = 0; i < count; i++) {
        double c = cos(nu * sectors[i].angle), s = sin(nu * sectors[i].angle), dk = sectors[i].dk;
        for (size_t j = 0; j < 2; j++) {
            double potential = m[0][j], flux = m[1][j];
            m[0][j] = c * potential + s / dk * flux;
            m[1][j] = c * flux - s * dk * potential;
        }
    }
    return metal ? m[0][1] : m[0][0] + m[1][1] - 2;
}

double corner_exponent(const struct corner_sector *sectors, size_t count, bool metal) {
    /* Starts positive between metal, negative around a closed circle. */
    enum { STEPS = 400 };
    double sign = metal ? 1 : -1, low = 0;
    for (size_t i = 1; i <= STEPS; i++) {
        double high = (double)i / STEPS;
        if (i == STEPS)
            high = 1 - 1e-9;
        if (sign * mismatch(sectors, count, metal, high) <= 0) {
            for (int round = 0; round < 50; round++) {
                double middle = 0.5 * (low + high);
                *(sign * mismatch(sectors, count, metal, middle) > 0 ? &low : &high) = middle;
            }
            return high;
        }
        low = high;
    }
    return 1;
}

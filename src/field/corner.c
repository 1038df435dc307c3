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

/* Illinois: false position that halves the value at an end which stays. */
static double zero_between(const struct corner_sector *sectors, size_t count, bool metal,
                           double low, double high, double at_low, double at_high) {
    double middle = high;
    for (int round = 0; round < 60 && high - low > 1e-14; round++) {
        middle = (low * at_high - high * at_low) / (at_high - at_low);
        double value = mismatch(sectors, count, metal, middle);
        if (value == 0)
            break;
        if ((value > 0) == (at_low > 0)) {
            low = middle;
            at_low = value;
            at_high *= 0.5;
        } else {
            high = middle;
            at_high = value;
            at_low *= 0.5;
        }
        if (fabs(value) < 1e-14)
            break;
    }
    return middle;
}

double corner_exponent(const struct corner_sector *sectors, size_t count, bool metal) {
    /* Starts positive between metal, negative around a closed circle. */
    enum { STEPS = 16 };
    double sign = metal ? 1 : -1, low = 0.1;
    double at_low = mismatch(sectors, count, metal, low);
    for (size_t i = 1; i <= STEPS; i++) {
        double high = i == STEPS ? 1 - 1e-9 : 0.1 + 0.9 * (double)i / STEPS;
        double at_high = mismatch(sectors, count, metal, high);
        if (sign * at_high <= 0)
            return zero_between(sectors, count, metal, low, high, at_low, at_high);
        low = high;
        at_low = at_high;
    }
    return 1;
}

double corner_power(const struct corner_sector *sectors, size_t count, bool metal) {
    double nu = corner_exponent(sectors, count, metal);
    if (nu > 1 - 1e-6)
        return 1;
    bool single = metal && !(count > 1 && mismatch(sectors, count, metal, 1.99 * nu) > 0);
    return single ? 1 / nu : 2 / nu;
}

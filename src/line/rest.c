#include "rest.h"

#include <math.h>

/* Of the peak. */
static const double SETTLED_RAMP = 1e-4;
/* A Hann window leaves so much of a swing of one and a half periods or more in the mean. */
static const double LEFT_IN_MEAN = 0.03;

struct extremes {
    double low, high;
};

/* fmin and fmax are calls. */
static void include(struct extremes *extremes, double value) {
    if (value < extremes->low)
        extremes->low = value;
    if (value > extremes->high)
        extremes->high = value;
}

static double larger_magnitude(const struct extremes *extremes) {
    return fmax(fabs(extremes->low), fabs(extremes->high));
}

double rest_settled(const double *integral, size_t samples, size_t window, double step,
                    double final) {
    double mean = 0, total = 0;
    const double turn = 2 * 3.14159265358979323846 / (double)window;
    for (size_t i = 0; i <= window; i++) {
        size_t at = samples - 1 - window + i;
        double weight = 1 - cos(turn * (double)i);
        mean += weight * (integral[at] - final * step * (double)at);
        total += weight;
    }
    return mean / total;
}

struct rest rest_of(const double *sum, size_t samples, size_t window, size_t edge, double final,
                    double settled) {
    size_t last = samples - 1, late = last - window;
    struct rest rest = {.final = isnan(final) ? (sum[last] - sum[late]) / (double)window : final};
    struct extremes ramp = {0}, integral = {0};
    struct extremes late_ramp = {INFINITY, -INFINITY}, late_integral = {INFINITY, -INFINITY};
    for (size_t i = 0; i < samples; i++) {
        double slow = sum[i] - rest.final * (double)i;
        double risen = sum[i] - (i >= edge ? sum[i - edge] : 0);
        include(&ramp, risen);
        include(&integral, slow);
        if (i >= late) {
            include(&late_integral, slow);
            include(&late_ramp, i >= edge ? risen - rest.final * (double)edge : risen);
        }
    }
    double floor = 1e-13 * (double)edge, peak = fmax(larger_magnitude(&ramp), floor);
    double range = fmax(integral.high - integral.low, floor);
    double of_ramp = fmax(larger_magnitude(&late_ramp) - floor, 0);
    double swing = fmax(late_integral.high - late_integral.low - floor, 0);
    /* Nothing like the peak can come again, nor be made up where the curve goes over to its mean.
     */
    if (fabs(rest.final) * (double)edge + 2 * fmax(of_ramp, swing) < 0.9 * peak)
        of_ramp = 0;
    rest.range = range;
    rest.late = swing;
    rest.error = of_ramp / peak + LEFT_IN_MEAN * swing / range;
    rest.reached = of_ramp <= SETTLED_RAMP * peak && swing <= settled * range;
    return rest;
}

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
    const double cosine = cos(turn), sine = sin(turn);
    double x = 1, y = 0; /* of i turns, by rotation */
    for (size_t i = 0; i <= window; i++) {
        size_t at = samples - 1 - window + i;
        double weight = 1 - x, turned = x * cosine - y * sine;
        y = x * sine + y * cosine;
        x = turned;
        mean += weight * (integral[at] - final * step * (double)at);
        total += weight;
    }
    return mean / total;
}

struct rest rest_of(const double *sum, size_t samples, size_t window, size_t edge, double final,
                    double settled, struct rest_seen *seen) {
    size_t last = samples - 1, late = last - window;
    struct rest rest = {.final = isnan(final) ? (sum[last] - sum[late]) / (double)window : final};
    if (isnan(final))
        *seen = (struct rest_seen){0};
    struct extremes ramp = {seen->ramp_low, seen->ramp_high};
    struct extremes integral = {seen->integral_low, seen->integral_high};
    struct extremes late_ramp = {INFINITY, -INFINITY}, late_integral = {INFINITY, -INFINITY};
    for (size_t i = seen->samples; i < samples; i++) {
        include(&ramp, sum[i] - (i >= edge ? sum[i - edge] : 0));
        include(&integral, sum[i] - rest.final * (double)i);
    }
    for (size_t i = late; i < samples; i++) {
        include(&late_integral, sum[i] - rest.final * (double)i);
        include(&late_ramp,
                i >= edge ? sum[i] - sum[i - edge] - rest.final * (double)edge : sum[i]);
    }
    *seen = (struct rest_seen){samples, ramp.low, ramp.high, integral.low, integral.high};
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

#include "smooth.h"

#include <math.h>

/* Beyond so many sigmas a Gaussian is nothing. */
static const double REACH = 6;

/* t from 0 on, smoothed. */
static double smooth_ramp(double t, double sigma) {
    const double root_half = 0.70710678118654752440, root_tau = 2.50662827463100050242;
    if (t < -REACH * sigma)
        return 0;
    if (t > REACH * sigma)
        return t;
    double x = t / sigma;
    return t * 0.5 * erfc(-x * root_half) + sigma * exp(-0.5 * x * x) / root_tau;
}

/* Lagrange through samples -2 .. 3 at `x` within 0 and 1. */
static double six_points(const double *q, double x) {
    double a = x + 2, b = x + 1, c = x - 1, d = x - 2, e = x - 3;
    double left = a * b * x, right = c * d * e;
    return right * (-b * x * q[0] / 120 + a * x * q[1] / 24 - a * b * q[2] / 12) +
           left * (d * e * q[3] / 12 - c * e * q[4] / 24 + c * d * q[5] / 120);
}

/* What six points need beside them. */
enum { MARGIN = 5 };

double smooth_band_at(const struct smooth_band *band, double time) {
    double place = time / band->step + (double)band->lead;
    if (place < 2 || place >= (double)(band->lead + band->samples - MARGIN + 1))
        return 0;
    size_t at = (size_t)place;
    return six_points(band->rest + at - 2, place - (double)at);
}

double smooth_band_end(const struct smooth_band *band) {
    return (double)(band->samples - MARGIN) * band->step;
}

/* One broad band goes over into the next within the last third of its window: what ringing and
 * repetition leave between them is spread and makes no jump that a short ramp would show. */
static const double OVER = 0.7;

static double broad_bands_at(const struct smooth *smooth, double time) {
    const double root_pi = 1.77245385090551602730;
    const struct smooth_band *band = &smooth->band[0];
    for (size_t k = 0; k < SMOOTH_LATE_BANDS; k++) {
        double end = smooth_band_end(band), from = OVER * end;
        if (time <= from)
            return smooth_band_at(band, time);
        if (time < end) {
            double x = (time - from) / (end - from), weight = x * x * (3 - 2 * x);
            return (1 - weight) * smooth_band_at(band, time) +
                   weight * smooth_band_at(&smooth->late[k], time);
        }
        band = &smooth->late[k];
    }
    double end = smooth_band_end(band);
    if (time < end)
        return smooth_band_at(band, time);
    return band->rest[band->lead + band->samples - MARGIN] +
           2 * smooth->creep / root_pi * (sqrt(time) - sqrt(end));
}

static double integral_at(const struct smooth *smooth, size_t bands, double time) {
    double sum = smooth->final * smooth_ramp(time, smooth->band[0].sigma);
    sum += broad_bands_at(smooth, time);
    for (size_t k = 1; k < bands; k++)
        sum += smooth_band_at(&smooth->band[k], time);
    return sum;
}

double smooth_bands_response(const struct smooth *smooth, size_t bands, double edge, double time) {
    return (integral_at(smooth, bands, time) - integral_at(smooth, bands, time - edge)) / edge;
}

double smooth_response(const struct smooth *smooth, double edge, double time) {
    return smooth_bands_response(smooth, smooth->bands, edge, time);
}

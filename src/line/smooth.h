#ifndef LINE_SMOOTH_H
#define LINE_SMOOTH_H

#include "groundrules/line.h"

/* The integral R(t) of one end's step response in bands: the first is R smoothed by a Gaussian of
 * standard deviation `sigma`, less final t; each further one is what a Gaussian a few times
 * narrower adds, over a shorter time, since what is sharp dies first.  When the line has come to
 * rest skin effect and relaxation still creep: the late bands are R less final t again, ever
 * broader and longer; after the last R goes on as 2 creep sqrt(t / pi).
 * Ramps are read as (R(t) - R(t - edge)) / edge. */
enum { SMOOTH_MOST_BANDS = 7, SMOOTH_LATE_BANDS = 2 };

struct smooth_band {
    double step, sigma; /* s */
    size_t lead;        /* samples before t = 0 */
    size_t samples;     /* from t = 0 on */
    double largest;     /* V s, largest magnitude */
    const double *rest; /* [lead + samples], V s */
};

struct smooth {
    double final;   /* V, the step response at rest */
    double creep;   /* V s^1/2 */
    double missing; /* V s, what the bands may be wrong by together */
    size_t bands;
    struct smooth_band band[SMOOTH_MOST_BANDS];
    struct smooth_band late[SMOOTH_LATE_BANDS];
};

/* One band at `time`, 0 outside; and where it ends. */
double smooth_band_at(const struct smooth_band *band, double time);
double smooth_band_end(const struct smooth_band *band);

/* The response to a ramp of `edge` at `time`; and that of the first `bands` alone. */
double smooth_response(const struct smooth *smooth, double edge, double time);
double smooth_bands_response(const struct smooth *smooth, size_t bands, double edge, double time);

/* The largest magnitude from `from` seconds on.  A corner of the response is lowered in proportion
 * to sigma, a smooth top by its square: the error is what the limit of sigma = 0 would still add by
 * the first of these, and what the bands leave out. */
struct line_peak smooth_peak(const struct smooth *smooth, double edge, double from);

#endif

/* Band by band: the first is sampled wherever the response can move, each further one only where
 * the response with the bands so far comes so near the largest yet found that what is left out
 * could lift it there. */
#include "smooth.h"

#include <math.h>

/* What a peak may stand above the samples beside it. */
static const double BETWEEN = 0.02;
/* Of the peak: what of further bands is not felt; and interpolation, the end of the transform, the
 * repetition of its period. */
static const double UNFELT = 1e-5, FLOOR = 5e-4;
/* The same where late bands have it, which are broad against what they follow. */
static const double LATE_FLOOR = 3e-3;
/* From one late time to the next. */
static const double SLOWLY = 1.02;

struct hunt {
    const struct smooth *smooth;
    double edge, from;
    struct line_peak best;
};

static void keep_higher(struct hunt *hunt, double highest, double time) {
    if (highest > hunt->best.highest)
        hunt->best = (struct line_peak){highest, time, 0};
}

static double largest_within(const struct smooth_band *band, double from, double to) {
    double first = floor(from / band->step) + (double)band->lead;
    double last = ceil(to / band->step) + (double)band->lead;
    double total = (double)(band->lead + band->samples), most = 0;
    for (double at = fmax(first, 0); at <= fmin(last, total - 1); at++)
        most = fmax(most, fabs(band->rest[(size_t)at]));
    return most;
}

/* What all further bands may add beside a point of band `k`, V. */
static double still_to_add(const struct hunt *hunt, size_t k, double time) {
    double step = hunt->smooth->band[k].step, back = time - hunt->edge, sum = 0;
    for (size_t next = k + 1; next < hunt->smooth->bands; next++) {
        const struct smooth_band *band = &hunt->smooth->band[next];
        sum += largest_within(band, time - step, time + step) +
               largest_within(band, back - step, back + step);
    }
    return sum / hunt->edge;
}

struct top {
    double highest, time;
};

/* The top of a parabola through three samples about `time`; the middle one where it is no top. */
static struct top top_of(const double *three, double time, double step) {
    double sign = three[1] < 0 ? -1 : 1;
    double before = sign * three[0], middle = fabs(three[1]), after = sign * three[2];
    double bend = 2 * middle - before - after, slope = 0.5 * (after - before);
    if (!(middle >= before && middle >= after && bend > 0))
        return (struct top){middle, time};
    double shift = slope / bend;
    return (struct top){middle + 0.5 * slope * shift, time + shift * step};
}

static void look(struct hunt *hunt, size_t k, double from, double to);

static void look_at(struct hunt *hunt, size_t k, struct top top, double time) {
    double step = hunt->smooth->band[k].step;
    double least = (1 - BETWEEN) * hunt->best.highest;
    double most = 0;
    for (size_t next = k + 1; next < hunt->smooth->bands; next++)
        most += 2 * hunt->smooth->band[next].largest / hunt->edge;
    if (top.highest + most < least)
        return;
    double added = k + 1 < hunt->smooth->bands ? still_to_add(hunt, k, time) : 0;
    if (added <= UNFELT * fmax(hunt->best.highest, top.highest))
        keep_higher(hunt, top.highest, top.time);
    else if (top.highest + added >= least)
        look(hunt, k + 1, time - 0.6 * step, time + 0.6 * step);
}

/* Samples of the first bands up to `k`, on the grid of band k. */
static void look(struct hunt *hunt, size_t k, double from, double to) {
    double step = hunt->smooth->band[k].step, three[3];
    double first = fmax(floor(from / step), ceil(hunt->from / step));
    for (size_t i = 0; i < 3; i++)
        three[i] =
            smooth_bands_response(hunt->smooth, k + 1, hunt->edge, (first + (double)i - 1) * step);
    for (double at = first; at * step <= to + step; at++) {
        double time = at * step;
        look_at(hunt, k, top_of(three, time, step), time);
        three[0] = three[1];
        three[1] = three[2];
        three[2] = smooth_bands_response(hunt->smooth, k + 1, hunt->edge, time + 2 * step);
    }
}

/* A first bound from below, with all bands, so that little has to be looked at closely. */
static void look_coarsely(struct hunt *hunt, double from, double to) {
    double step = hunt->smooth->band[0].step;
    for (double time = fmax(from, hunt->from); time <= to; time += step)
        keep_higher(hunt, fabs(smooth_response(hunt->smooth, hunt->edge, time)), time);
}

/* After the first band's window, from the ramp's start and from its end, all is slow. */
static void look_late(struct hunt *hunt) {
    const struct smooth *smooth = hunt->smooth;
    double last = smooth_band_end(&smooth->late[SMOOTH_LATE_BANDS - 1]), edge = hunt->edge;
    double window = smooth_band_end(&smooth->band[0]);
    for (double time = 0.9 * window; time < last; time *= SLOWLY) {
        if (time >= hunt->from)
            keep_higher(hunt, fabs(smooth_response(smooth, edge, time)), time);
        if (edge > 0.1 * window && edge + time >= hunt->from)
            keep_higher(hunt, fabs(smooth_response(smooth, edge, edge + time)), edge + time);
    }
}

/* While the ramp rises and the line rings; where that ends before the ramp does, from its end on
 * again. */
static void look_everywhere(struct hunt *hunt) {
    const struct smooth_band *band = &hunt->smooth->band[0];
    double window = (double)band->samples * band->step, lead = (double)band->lead * band->step;
    keep_higher(hunt, fabs(smooth_response(hunt->smooth, hunt->edge, hunt->from)), hunt->from);
    look_late(hunt);
    if (hunt->edge - lead > window) {
        look_coarsely(hunt, -lead, window);
        look_coarsely(hunt, hunt->edge - lead, hunt->edge + window);
        look(hunt, 0, -lead, window);
        look(hunt, 0, hunt->edge - lead, hunt->edge + window);
    } else {
        look_coarsely(hunt, -lead, hunt->edge + window);
        look(hunt, 0, -lead, hunt->edge + window);
    }
}

struct line_peak smooth_peak(const struct smooth *smooth, double edge, double from) {
    struct hunt hunt = {.smooth = smooth, .edge = edge, .from = from};
    look_everywhere(&hunt);
    struct line_peak peak = hunt.best;
    double left = peak.highest; /* of a single band nothing is known */
    if (smooth->bands > 1) {
        const struct smooth_band *last = &smooth->band[smooth->bands - 1];
        double without = smooth_bands_response(smooth, smooth->bands - 1, edge, peak.time);
        left = (peak.highest - fabs(without)) / (last[-1].sigma / last->sigma - 1);
    }
    if (peak.highest > 0)
        peak.error = (fabs(left) + smooth->missing / edge) / peak.highest +
                     (peak.time < smooth_band_end(&smooth->band[0]) ? FLOOR : LATE_FLOOR);
    return peak;
}

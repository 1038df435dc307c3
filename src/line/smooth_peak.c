/* Band by band: the first is sampled wherever the response can move, each further one only where
 * the response with the bands so far comes so near its largest that what is left out could lift it
 * there. */
#include "smooth.h"

#include <math.h>
#include <stdlib.h>

/* What a peak may stand above the samples beside it. */
static const double BETWEEN = 0.02;
/* Of the peak: what of further bands is not felt; and interpolation, the end of the transform, the
 * repetition of its period. */
static const double UNFELT = 1e-5, FLOOR = 5e-4;
/* The same where late bands have it, which are broad against what they follow. */
static const double LATE_FLOOR = 3e-3;
/* From one late time to the next. */
static const double SLOWLY = 1.02;

struct point {
    double at;    /* grid index: time is at * step */
    double value; /* V, magnitude, the sign aside */
};

struct points {
    struct point *point;
    size_t count, room;
};

static bool add_point(struct points *points, double at, double value, struct error *error) {
    if (points->count == points->room) {
        size_t room = points->room == 0 ? 4096 : 2 * points->room;
        struct point *grown = realloc(points->point, room * sizeof *grown);
        if (grown == NULL)
            return error_set(error, ERROR_MEMORY, "out of memory");
        points->point = grown;
        points->room = room;
    }
    points->point[points->count++] = (struct point){at, value};
    return true;
}

/* Samples from `from` to `to` that are not there yet. */
static bool sample(const struct smooth *smooth, double edge, double step, double from, double to,
                   struct points *points, struct error *error) {
    double first = floor(from / step);
    if (points->count > 0)
        first = fmax(first, points->point[points->count - 1].at + 1);
    for (double at = first; at * step <= to + step; at++)
        if (!add_point(points, at, smooth_response(smooth, edge, at * step), error))
            return false;
    return true;
}

/* While the ramp rises and the line rings; where that ends before the ramp does, from its end on
 * again. */
static bool sample_all(const struct smooth *smooth, double edge, struct points *points,
                       struct error *error) {
    const struct smooth_band *band = &smooth->band[0];
    double window = (double)band->samples * band->step, lead = (double)band->lead * band->step;
    if (edge - lead > window)
        return sample(smooth, edge, band->step, -lead, window, points, error) &&
               sample(smooth, edge, band->step, edge - lead, edge + window, points, error);
    return sample(smooth, edge, band->step, -lead, edge + window, points, error);
}

/* The top of a parabola through a sample and its two neighbours where it has them. */
static struct line_peak top_at(const struct points *points, size_t i, double step) {
    const struct point *at = &points->point[i];
    double sign = at->value < 0 ? -1 : 1, middle = fabs(at->value), shift = 0;
    if (i > 0 && i + 1 < points->count && at[1].at - at[-1].at < 2.5) {
        double before = sign * at[-1].value, after = sign * at[1].value;
        double bend = 2 * middle - before - after, slope = 0.5 * (after - before);
        if (middle >= before && middle >= after && bend > 0) {
            shift = slope / bend;
            middle += 0.5 * slope * shift;
        }
    }
    return (struct line_peak){middle, fmax((at->at + shift) * step, 0), 0};
}

static void keep_higher(struct line_peak top, struct line_peak *highest) {
    if (top.highest > highest->highest)
        *highest = top;
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
static double still_to_add(const struct smooth *smooth, size_t k, double edge, double time) {
    double step = smooth->band[k].step, sum = 0;
    for (size_t next = k + 1; next < smooth->bands; next++) {
        const struct smooth_band *band = &smooth->band[next];
        sum += largest_within(band, time - step, time + step) +
               largest_within(band, time - edge - step, time - edge + step);
    }
    return sum / edge;
}

/* Points of the next band's grid beside those of band `k` that may still become the largest; where
 * further bands are not felt the point stands as it is. */
static bool refine(const struct smooth *smooth, size_t k, double edge, double highest,
                   const struct points *points, struct points *finer, struct line_peak *settled,
                   struct error *error) {
    struct smooth part = *smooth;
    double step = smooth->band[k].step, next_step = smooth->band[k + 1].step, most = 0;
    part.bands = k + 2;
    for (size_t next = k + 1; next < smooth->bands; next++)
        most += 2 * smooth->band[next].largest / edge;
    for (size_t i = 0; i < points->count; i++) {
        struct line_peak top = top_at(points, i, step);
        double time = points->point[i].at * step, least = (1 - BETWEEN) * highest;
        if (top.highest < least - most)
            continue;
        double added = still_to_add(smooth, k, edge, time);
        if (added <= UNFELT * highest)
            keep_higher(top, settled);
        else if (top.highest >= least - added &&
                 !sample(&part, edge, next_step, time - 0.6 * step - next_step, time + 0.6 * step,
                         finer, error))
            return false;
    }
    return true;
}

/* After the first band's window, from the ramp's start and from its end, all is slow. */
static struct line_peak late_top(const struct smooth *smooth, double edge) {
    struct line_peak top = {0};
    double last = smooth_band_end(&smooth->late[SMOOTH_LATE_BANDS - 1]);
    double window = smooth_band_end(&smooth->band[0]);
    for (double time = 0.9 * window; time < last; time *= SLOWLY) {
        keep_higher((struct line_peak){fabs(smooth_response(smooth, edge, time)), time, 0}, &top);
        if (edge > 0.1 * window)
            keep_higher((struct line_peak){fabs(smooth_response(smooth, edge, edge + time)),
                                           edge + time, 0},
                        &top);
    }
    return top;
}

static bool search(const struct smooth *smooth, double edge, struct points points[2],
                   struct line_peak *top, struct error *error) {
    struct smooth part = *smooth;
    struct line_peak settled = late_top(smooth, edge);
    part.bands = 1;
    if (!sample_all(&part, edge, &points[0], error))
        return false;
    for (size_t k = 0;; k++) {
        const struct points *at = &points[k % 2];
        top[k] = settled;
        for (size_t i = 0; i < at->count; i++)
            keep_higher(top_at(at, i, smooth->band[k].step), &top[k]);
        if (k + 1 == smooth->bands)
            return true;
        points[(k + 1) % 2].count = 0;
        if (!refine(smooth, k, edge, top[k].highest, at, &points[(k + 1) % 2], &settled, error))
            return false;
    }
}

bool smooth_peak(const struct smooth *smooth, double edge, struct line_peak *peak,
                 struct error *error) {
    struct points points[2] = {{0}};
    struct line_peak top[SMOOTH_MOST_BANDS];
    bool ok = search(smooth, edge, points, top, error);
    free(points[0].point);
    free(points[1].point);
    if (!ok)
        return false;
    size_t last = smooth->bands - 1;
    *peak = top[last];
    double left = top[last].highest; /* of a single band nothing is known */
    if (last > 0) {
        double ratio = smooth->band[last - 1].sigma / smooth->band[last].sigma;
        left = (left - top[last - 1].highest) / (ratio - 1);
    }
    if (peak->highest > 0)
        peak->error = (fabs(left) + smooth->missing / edge) / peak->highest +
                      (peak->time < smooth_band_end(&smooth->band[0]) ? FLOOR : LATE_FLOOR);
    return true;
}

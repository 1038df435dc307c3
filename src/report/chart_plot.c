#include "report/chart_internal.h"

#include <math.h>
#include <string.h>

/* Liang and Barsky (1984). */
static bool clip_side(double direction, double distance, double *from, double *to) {
    if (direction == 0)
        return distance >= 0;
    double at = distance / direction;
    if (direction < 0)
        *from = fmax(*from, at);
    else
        *to = fmin(*to, at);
    return *from <= *to;
}

bool chart_clip(const struct chart_frame *frame, double *x0, double *y0, double *x1, double *y1) {
    double dx = *x1 - *x0, dy = *y1 - *y0, from = 0, to = 1;
    double slack = 1e-6;
    if (!clip_side(-dx, *x0 - frame->left + slack, &from, &to) ||
        !clip_side(dx, frame->right - *x0 + slack, &from, &to) ||
        !clip_side(-dy, *y0 - frame->top + slack, &from, &to) ||
        !clip_side(dy, frame->bottom - *y0 + slack, &from, &to))
        return false;
    double start_x = *x0, start_y = *y0;
    *x0 = start_x + from * dx;
    *y0 = start_y + from * dy;
    *x1 = start_x + to * dx;
    *y1 = start_y + to * dy;
    return true;
}

static bool point_at(const struct chart_frame *frame, const struct chart_series *series, size_t i,
                     double *x, double *y) {
    if (i >= series->count || !isfinite(series->x[i]) || !isfinite(series->y[i]))
        return false;
    *x = chart_x(frame, series->x[i]);
    *y = chart_y(frame, series->y[i]);
    return isfinite(*x) && isfinite(*y);
}

/* Segment i .. i+1, clipped; a lone point counts as a segment of no length. */
static bool segment_at(const struct chart_frame *frame, const struct chart_series *series, size_t i,
                       double *x0, double *y0, double *x1, double *y1) {
    if (!point_at(frame, series, i, x0, y0))
        return false;
    if (!series->points && point_at(frame, series, i + 1, x1, y1))
        return chart_clip(frame, x0, y0, x1, y1);
    *x1 = *x0;
    *y1 = *y0;
    return chart_clip(frame, x0, y0, x1, y1);
}

bool chart_last_seen(const struct chart_frame *frame, const struct chart_series *series, double *x,
                     double *y) {
    for (size_t i = series->count; i-- > 0;) {
        double x0 = 0, y0 = 0;
        if (segment_at(frame, series, i, &x0, &y0, x, y))
            return true;
    }
    return false;
}

static bool segment_meets_box(double x0, double y0, double x1, double y1, struct chart_box box) {
    double from = 0, to = 1, dx = x1 - x0, dy = y1 - y0;
    return clip_side(-dx, x0 - box.x, &from, &to) &&
           clip_side(dx, box.x + box.width - x0, &from, &to) &&
           clip_side(-dy, y0 - box.y, &from, &to) &&
           clip_side(dy, box.y + box.height - y0, &from, &to);
}

/* The stems of marks and the lines of limits. */
static bool crosses_straight(const struct chart_frame *frame, struct chart_box box) {
    for (size_t m = 0; m < frame->chart->mark_count; m++) {
        double x = chart_x(frame, frame->chart->marks[m].x);
        if (x > box.x - 1 && x < box.x + box.width + 1)
            return true;
    }
    for (size_t i = 0; i < frame->chart->limit_count; i++) {
        double y = chart_y(frame, frame->chart->limits[i].value);
        if (y > box.y - 1 && y < box.y + box.height + 1)
            return true;
    }
    return false;
}

bool chart_crosses(const struct chart_frame *frame, struct chart_box box) {
    if (crosses_straight(frame, box))
        return true;
    for (size_t s = 0; s < frame->chart->series_count; s++) {
        const struct chart_series *series = &frame->chart->series[s];
        for (size_t i = 0; i < series->count; i++) {
            double x0 = 0, y0 = 0, x1 = 0, y1 = 0;
            if (segment_at(frame, series, i, &x0, &y0, &x1, &y1) &&
                segment_meets_box(x0, y0, x1, y1, box))
                return true;
        }
    }
    return false;
}

/* ---- markers ---- */

static struct scene_segment corner(enum scene_verb verb, double x, double y) {
    return (struct scene_segment){verb, {x}, {y}};
}

static size_t polygon(struct scene_segment *segments, double x, double y, double radius,
                      size_t corners, double turn) {
    double pi = acos(-1.0);
    for (size_t i = 0; i < corners; i++) {
        double angle = turn + 2 * pi * (double)i / (double)corners;
        segments[i] = corner(i == 0 ? SCENE_MOVE : SCENE_LINE, x + radius * sin(angle),
                             y - radius * cos(angle));
    }
    segments[corners] = (struct scene_segment){.verb = SCENE_CLOSE};
    return corners + 1;
}

static size_t circle(struct scene_segment *segments, double x, double y, double r) {
    double k = 0.5522847498 * r; /* quarter circles by one Bezier each, 2.7e-4 r off at most */
    segments[0] = corner(SCENE_MOVE, x + r, y);
    segments[1] = (struct scene_segment){SCENE_CURVE, {x + r, x + k, x}, {y + k, y + r, y + r}};
    segments[2] = (struct scene_segment){SCENE_CURVE, {x - k, x - r, x - r}, {y + r, y + k, y}};
    segments[3] = (struct scene_segment){SCENE_CURVE, {x - r, x - k, x}, {y - k, y - r, y - r}};
    segments[4] = (struct scene_segment){SCENE_CURVE, {x + k, x + r, x + r}, {y - r, y - k, y}};
    segments[5] = (struct scene_segment){.verb = SCENE_CLOSE};
    return 6;
}

static size_t cross(struct scene_segment *segments, double x, double y, double r) {
    segments[0] = corner(SCENE_MOVE, x - r, y - r);
    segments[1] = corner(SCENE_LINE, x + r, y + r);
    segments[2] = corner(SCENE_MOVE, x - r, y + r);
    segments[3] = corner(SCENE_LINE, x + r, y - r);
    return 4;
}

void chart_draw_marker(struct scene *scene, const struct theme_curve *style, double x, double y) {
    struct scene_segment segments[8];
    enum theme_marker marker = style->marker;
    bool open = marker >= THEME_RING;
    double pi = acos(-1.0);
    struct scene_path path = {.segments = segments, .width = 0.9, .stroke = style->colour};
    if (marker == THEME_CROSS)
        path.count = cross(segments, x, y, 2);
    else if (marker == THEME_SQUARE || marker == THEME_OPEN_SQUARE)
        path.count = polygon(segments, x, y, 2.8, 4, pi / 4);
    else if (marker == THEME_TRIANGLE || marker == THEME_OPEN_TRIANGLE)
        path.count = polygon(segments, x, y + 0.4, 2.9, 3, 0);
    else if (marker == THEME_DIAMOND)
        path.count = polygon(segments, x, y, 3, 4, 0);
    else
        path.count = circle(segments, x, y, 2.1);
    path.filled = marker != THEME_CROSS;
    path.fill = open ? theme_colour(THEME_PAPER) : style->colour;
    path.stroked = true;
    scene_path(scene, &path);
}

/* ---- bands ---- */

static bool band_at(const struct chart_frame *frame, const struct chart_series *series, size_t i,
                    double *x, double *low, double *high) {
    if (i >= series->count || !isfinite(series->low[i]) || !isfinite(series->high[i]))
        return false;
    double most = 4 * (frame->bottom - frame->top);
    double wide = 4 * (frame->right - frame->left);
    *x = fmax(frame->left - wide, fmin(frame->right + wide, chart_x(frame, series->x[i])));
    *low = fmin(chart_y(frame, series->low[i]), frame->bottom + most);
    *high = fmax(chart_y(frame, series->high[i]), frame->top - most);
    return isfinite(*x) && isfinite(*low) && isfinite(*high);
}

/* One polygon for the run of points from `first` on; returns the index after the run. */
static size_t draw_band(struct chart_frame *frame, const struct chart_series *series, size_t first,
                        struct scene_segment *segments) {
    size_t end = first;
    double x = 0, low = 0, high = 0;
    while (band_at(frame, series, end, &x, &low, &high)) {
        segments[end - first] = corner(end == first ? SCENE_MOVE : SCENE_LINE, x, high);
        end++;
    }
    size_t count = end - first;
    for (size_t i = end; i > first; i--) {
        band_at(frame, series, i - 1, &x, &low, &high);
        segments[count++] = corner(SCENE_LINE, x, low);
    }
    segments[count++] = (struct scene_segment){.verb = SCENE_CLOSE};
    struct scene_colour colour = chart_style(frame, series->style).colour;
    colour.alpha = 0.14;
    if (end - first > 1)
        scene_path(frame->scene,
                   &(struct scene_path){
                       .segments = segments, .count = count, .filled = true, .fill = colour});
    return end > first ? end : first + 1;
}

void chart_draw_bands(struct chart_frame *frame) {
    for (size_t s = 0; s < frame->chart->series_count; s++) {
        const struct chart_series *series = &frame->chart->series[s];
        if (series->low == NULL || series->high == NULL || series->points)
            continue;
        struct scene_segment *segments =
            arena_new(frame->arena, 2 * series->count + 1, struct scene_segment, frame->error);
        if (segments == NULL)
            return;
        for (size_t i = 0; i < series->count;)
            i = draw_band(frame, series, i, segments);
    }
}

/* ---- curves ---- */

static bool doubtful(const struct chart_series *series, size_t i) {
    return series->doubtful != NULL &&
           (series->doubtful[i] || (i + 1 < series->count && series->doubtful[i + 1]));
}

/* All segments that are (or are not) doubtful as one path, so that dashes run on. */
static void draw_line(struct chart_frame *frame, const struct chart_series *series, bool thin,
                      struct scene_segment *segments) {
    struct theme_curve style = chart_style(frame, series->style);
    size_t count = 0;
    double end_x = NAN, end_y = NAN;
    for (size_t i = 0; i + 1 < series->count; i++) {
        double x0 = 0, y0 = 0, x1 = 0, y1 = 0;
        if (doubtful(series, i) != thin || !isfinite(series->y[i + 1]) ||
            !segment_at(frame, series, i, &x0, &y0, &x1, &y1))
            continue;
        if (!(fabs(x0 - end_x) < 1e-6 && fabs(y0 - end_y) < 1e-6))
            segments[count++] = corner(SCENE_MOVE, x0, y0);
        segments[count++] = corner(SCENE_LINE, x1, y1);
        end_x = x1;
        end_y = y1;
    }
    struct scene_path path = {.segments = segments,
                              .count = count,
                              .stroked = true,
                              .stroke = style.colour,
                              .width = thin ? 0.8 : style.width,
                              .dash_count = thin ? 2 : style.dash_count};
    memcpy(path.dashes, style.dashes, sizeof path.dashes);
    if (thin) {
        path.dashes[0] = 0.9;
        path.dashes[1] = 1.7;
    }
    if (count > 0)
        scene_path(frame->scene, &path);
}

static bool lone(const struct chart_series *series, size_t i) {
    bool before = i > 0 && isfinite(series->y[i - 1]);
    bool after = i + 1 < series->count && isfinite(series->y[i + 1]);
    return !before && !after;
}

static void draw_error_bar(struct chart_frame *frame, const struct chart_series *series, size_t i) {
    if (series->low == NULL || series->high == NULL)
        return;
    double x = 0, low = 0, high = 0;
    if (!band_at(frame, series, i, &x, &low, &high))
        return;
    double top = fmax(high, frame->top), bottom = fmin(low, frame->bottom);
    if (top < bottom)
        scene_line(frame->scene, x, top, x, bottom, 0.7, chart_style(frame, series->style).colour);
}

static void draw_points(struct chart_frame *frame, const struct chart_series *series) {
    struct theme_curve style = chart_style(frame, series->style);
    double last = -INFINITY;
    for (size_t i = 0; i < series->count; i++) {
        double x = 0, y = 0, x1 = 0, y1 = 0;
        if (!point_at(frame, series, i, &x, &y))
            continue;
        x1 = x;
        y1 = y;
        bool wanted = series->points || lone(series, i) || (series->markers && x - last >= 14);
        if (!wanted || !chart_clip(frame, &x, &y, &x1, &y1))
            continue;
        if (series->points)
            draw_error_bar(frame, series, i);
        chart_draw_marker(frame->scene, &style, x, y);
        last = x;
    }
}

void chart_draw_curves(struct chart_frame *frame) {
    for (size_t s = 0; s < frame->chart->series_count; s++) {
        const struct chart_series *series = &frame->chart->series[s];
        struct scene_segment *segments =
            arena_new(frame->arena, 2 * series->count + 2, struct scene_segment, frame->error);
        if (segments == NULL)
            return;
        if (!series->points) {
            draw_line(frame, series, false, segments);
            draw_line(frame, series, true, segments);
        }
        draw_points(frame, series);
    }
}

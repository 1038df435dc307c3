#include "report/chart_internal.h"

#include <assert.h>
#include <math.h>
#include <string.h>

static const double LEAST_WIDTH = 120, LEAST_HEIGHT = 90;
static const double TICK_ROW = 8.5; /* least distance of the y axis's numbers */
static const double TICK = 3.2, MINOR_TICK = 1.8;
static const double TITLE_LEADING = 12, TITLE_GAP = 3, AXIS_TITLE_HEIGHT = 12;
enum { TITLE_LINES = 3 };
static const double BELOW = 27; /* tick numbers and the title of the x axis */

double chart_x(const struct chart_frame *frame, double value) {
    return frame->left + axis_position(&frame->x, value) * (frame->right - frame->left);
}

double chart_y(const struct chart_frame *frame, double value) {
    return frame->bottom - axis_position(&frame->y, value) * (frame->bottom - frame->top);
}

struct theme_curve chart_style(const struct chart_frame *frame, size_t style) {
    const struct chart *chart = frame->chart;
    return theme_curve(style, chart->style_count > 0 ? chart->style_count : chart->series_count);
}

/* ---- ranges ---- */

struct range {
    double low, high;
};

static void extend(struct range *range, double value) {
    if (!isfinite(value))
        return;
    range->low = fmin(range->low, value);
    range->high = fmax(range->high, value);
}

static bool forced(const struct chart_axis *axis) {
    return axis->low < axis->high;
}

static struct range range_of_x(const struct chart *chart) {
    struct range range = {INFINITY, -INFINITY};
    if (forced(&chart->x))
        return (struct range){chart->x.low, chart->x.high};
    for (size_t s = 0; s < chart->series_count; s++)
        for (size_t i = 0; i < chart->series[s].count; i++)
            if (isfinite(chart->series[s].y[i]))
                extend(&range, chart->series[s].x[i]);
    /* A sweep that starts next to zero gets a scale that starts there. */
    if (!chart->x.logarithmic && range.low > 0 && range.low < range.high / 8)
        range.low = 0;
    return range;
}

/* A limit belongs into the picture unless that would flatten the curves. */
static void extend_to_limits(const struct chart *chart, struct range *range) {
    struct range data = *range;
    double span = data.high - data.low;
    for (size_t i = 0; i < chart->limit_count; i++) {
        double value = chart->limits[i].value;
        bool near = value <= data.high + 1.5 * span && value >= data.low - 1.5 * span;
        bool decades =
            value > 0 && data.low > 0 && value <= 30 * data.high && value >= data.low / 30;
        if (span == 0 || (chart->y.logarithmic ? decades : near))
            extend(range, value);
    }
}

static struct range range_of_y(const struct chart *chart, struct range x) {
    struct range range = {INFINITY, -INFINITY};
    if (forced(&chart->y))
        return (struct range){chart->y.low, chart->y.high};
    for (size_t s = 0; s < chart->series_count; s++) {
        const struct chart_series *series = &chart->series[s];
        for (size_t i = 0; i < series->count; i++) {
            if (!(series->x[i] >= x.low && series->x[i] <= x.high))
                continue;
            extend(&range, series->y[i]);
            if (series->low != NULL && series->high != NULL && isfinite(series->y[i])) {
                extend(&range, series->low[i]);
                extend(&range, series->high[i]);
            }
        }
    }
    if (range.low <= range.high)
        extend_to_limits(chart, &range);
    return range;
}

static size_t count_outside(const struct chart_frame *frame) {
    size_t outside = 0;
    for (size_t s = 0; s < frame->chart->series_count; s++) {
        const struct chart_series *series = &frame->chart->series[s];
        for (size_t i = 0; i < series->count; i++) {
            double x = axis_position(&frame->x, series->x[i]);
            double y = axis_position(&frame->y, series->y[i]);
            outside += isfinite(series->y[i]) &&
                       !(x >= -1e-9 && x <= 1 + 1e-9 && y >= -1e-9 && y <= 1 + 1e-9);
        }
    }
    return outside;
}

/* ---- layout ---- */

static bool make_axes(struct chart_frame *frame, struct range x, struct range y, double width,
                      double height) {
    const struct chart *chart = frame->chart;
    struct axis_request request = {.lowest = x.low,
                                   .highest = x.high,
                                   .dimension = chart->x.dimension,
                                   .lengths = chart->lengths,
                                   .logarithmic = chart->x.logarithmic && x.low > 0,
                                   .tight = x.low < x.high,
                                   .most = (size_t)fmax(3, fmin(11, width / 42))};
    frame->report.x_linear = chart->x.logarithmic && !request.logarithmic;
    if (!axis_make(&request, &frame->x, frame->error))
        return error_in(frame->error, "x axis");
    request = (struct axis_request){.lowest = y.low,
                                    .highest = y.high,
                                    .dimension = chart->y.dimension,
                                    .lengths = chart->lengths,
                                    .logarithmic = chart->y.logarithmic && y.low > 0,
                                    .tight = forced(&chart->y),
                                    .most = (size_t)fmax(3, fmin(9, height / 22))};
    frame->report.y_linear = chart->y.logarithmic && !request.logarithmic;
    if (!axis_make(&request, &frame->y, frame->error))
        return error_in(frame->error, "y axis");
    return true;
}

static double widest_tick(struct chart_frame *frame, const struct axis *axis) {
    double widest = 0;
    for (size_t i = 0; i < axis->count; i++)
        if (axis->ticks[i].major)
            widest = fmax(widest, text_width(frame->setter, axis->ticks[i].label,
                                             theme_style(THEME_TICK), frame->error));
    return widest;
}

static struct scene_text title_text(const struct chart_frame *frame, double width) {
    return (struct scene_text){.markup = frame->title,
                               .style = theme_style(THEME_FIGURE),
                               .y = 9,
                               .width = width,
                               .leading = TITLE_LEADING};
}

static void plan_title(struct chart_frame *frame, double width) {
    struct text_size size = {0};
    if (frame->chart->title == NULL)
        return;
    frame->title = frame->chart->title;
    struct scene_text text = title_text(frame, width);
    frame->title = text_shorten(frame->setter, &text, TITLE_LINES, frame->arena, frame->error);
    text = title_text(frame, width);
    if (text_measure(frame->setter, &text, &size, frame->error))
        frame->title_height = (double)size.lines * TITLE_LEADING + TITLE_GAP;
}

/* What stands above the plot does not take more than half of the height from it. */
static void grow(struct chart_frame *frame, double height) {
    double missing = 0.5 * height - (frame->bottom - frame->top);
    if (missing <= 0 || height < 2 * LEAST_HEIGHT)
        return;
    frame->bottom += missing;
    frame->scene->height += missing;
}

/* The plot's edges depend on the tick numbers and these on the edges: two rounds settle it. */
static bool layout(struct chart_frame *frame, double width, double height) {
    const struct chart *chart = frame->chart;
    struct range x = range_of_x(chart);
    if (!(x.low <= x.high))
        return error_set(frame->error, ERROR_INPUT, "nothing in the chart is finite");
    struct range y = range_of_y(chart, x);
    if (!(y.low <= y.high))
        return error_set(frame->error, ERROR_INPUT, "nothing in the chart is finite");
    plan_title(frame, width);
    double head = frame->title_height + AXIS_TITLE_HEIGHT + 2;
    frame->bottom = height - BELOW;
    frame->top = head;
    frame->left = 30;
    frame->right = width - chart_plan_ends(frame, 0.3 * width, frame->bottom - frame->top);
    if (frame->report.legend)
        head += chart_legend_height(frame, width);
    for (int round = 0; round < 2; round++) {
        if (!make_axes(frame, x, y, frame->right - frame->left, frame->bottom - frame->top))
            return false;
        frame->left = TICK + 3 + widest_tick(frame, &frame->y);
        frame->top = head + CHART_MARK_ROW * (double)chart_mark_rows(frame, width);
    }
    grow(frame, height);
    if (frame->right - frame->left < 40 || frame->bottom - frame->top < 30)
        return error_set(frame->error, ERROR_INPUT, "a chart of %g x %g pt is too small", width,
                         height);
    frame->report.outside = count_outside(frame);
    frame->report.plot_x = frame->left;
    frame->report.plot_y = frame->top;
    frame->report.plot_width = frame->right - frame->left;
    frame->report.plot_height = frame->bottom - frame->top;
    return frame->error->kind == ERROR_NONE;
}

/* ---- drawing ---- */

static void draw_grid(struct chart_frame *frame) {
    struct scene_colour hair = theme_colour(THEME_HAIR);
    for (size_t i = 0; i < frame->y.count; i++)
        if (frame->y.ticks[i].major) {
            double y = chart_y(frame, frame->y.ticks[i].value);
            scene_line(frame->scene, frame->left, y, frame->right, y, 0.4, hair);
        }
    for (size_t i = 0; i < frame->x.count; i++)
        if (frame->x.ticks[i].major) {
            double x = chart_x(frame, frame->x.ticks[i].value);
            scene_line(frame->scene, x, frame->top, x, frame->bottom, 0.4, hair);
        }
}

static bool is_decade(const struct axis *axis, double value) {
    double exponent = log10(fabs(value * axis->scale));
    return fabs(exponent - round(exponent)) < 1e-9;
}

/* Numbers beside the y axis that keep clear of each other: on a logarithmic axis powers of ten come
 * first, then the others from the bottom up. */
static void label_y(struct chart_frame *frame) {
    double taken[AXIS_MOST_TICKS];
    size_t count = 0;
    for (int round = 0; round < 2; round++)
        for (size_t i = 0; i < frame->y.count; i++) {
            const struct axis_tick *tick = &frame->y.ticks[i];
            double y = chart_y(frame, tick->value);
            bool first = !frame->y.logarithmic || is_decade(&frame->y, tick->value);
            bool free = tick->major && first == (round == 0);
            for (size_t t = 0; t < count; t++)
                free = free && fabs(taken[t] - y) >= TICK_ROW;
            if (!free)
                continue;
            taken[count++] = y;
            scene_text(frame->scene, &(struct scene_text){.markup = tick->label,
                                                          .style = theme_style(THEME_TICK),
                                                          .x = frame->left - TICK - 2.5,
                                                          .y = y + 2.7,
                                                          .align = SCENE_RIGHT});
        }
}

static void draw_axes(struct chart_frame *frame) {
    struct scene_colour ink = theme_colour(THEME_QUIET);
    double left = frame->left, bottom = frame->bottom, free_from = -INFINITY;
    scene_line(frame->scene, left, bottom, frame->right, bottom, 0.7, ink);
    scene_line(frame->scene, left, frame->top, left, bottom, 0.7, ink);
    for (size_t i = 0; i < frame->y.count; i++) {
        const struct axis_tick *tick = &frame->y.ticks[i];
        double y = chart_y(frame, tick->value);
        scene_line(frame->scene, left - (tick->major ? TICK : MINOR_TICK), y, left, y, 0.5, ink);
    }
    label_y(frame);
    for (size_t i = 0; i < frame->x.count; i++) {
        const struct axis_tick *tick = &frame->x.ticks[i];
        double x = chart_x(frame, tick->value);
        scene_line(frame->scene, x, bottom, x, bottom + (tick->major ? TICK : MINOR_TICK), 0.5,
                   ink);
        double half =
            tick->major
                ? text_width(frame->setter, tick->label, theme_style(THEME_TICK), frame->error) / 2
                : 0;
        if (!tick->major || x - half < free_from)
            continue;
        free_from = x + half + 4;
        scene_text(frame->scene, &(struct scene_text){.markup = tick->label,
                                                      .style = theme_style(THEME_TICK),
                                                      .x = x,
                                                      .y = bottom + TICK + 8,
                                                      .align = SCENE_CENTRE});
    }
}

static const char *axis_title(struct chart_frame *frame, const char *label, const char *unit) {
    const char *title = arena_print(frame->arena, frame->error, "%s%s%s", label,
                                    *unit == '\0' || *label == '\0' ? "" : ", ", unit);
    return title == NULL ? "" : title;
}

/* The y axis is named above itself, level with the text, so that nobody turns the head. */
static void draw_titles(struct chart_frame *frame, double width) {
    const struct chart *chart = frame->chart;
    double y = 0;
    if (frame->title != NULL) {
        struct scene_text title = title_text(frame, width);
        scene_text(frame->scene, &title);
        y = frame->title_height;
    }
    if (frame->report.legend) {
        chart_draw_legend(frame, width, y);
        y += chart_legend_height(frame, width);
    }
    struct scene_style style = theme_style(THEME_LABEL);
    style.weight = SCENE_MEDIUM;
    const char *label = chart->y.label == NULL ? "" : chart->y.label;
    scene_text(frame->scene, &(struct scene_text){.markup = axis_title(frame, label, frame->y.unit),
                                                  .style = style,
                                                  .y = y + 8});
    label = chart->x.label == NULL ? "" : chart->x.label;
    scene_text(frame->scene, &(struct scene_text){.markup = axis_title(frame, label, frame->x.unit),
                                                  .style = style,
                                                  .x = (frame->left + frame->right) / 2,
                                                  .y = frame->bottom + BELOW - 4,
                                                  .align = SCENE_CENTRE});
}

static void draw(struct chart_frame *frame, double width) {
    struct scene *scene = frame->scene;
    scene_group(scene, frame->chart->name == NULL ? "chart" : frame->chart->name);
    draw_grid(frame);
    scene_clip(scene, frame->left, frame->top, frame->right - frame->left,
               frame->bottom - frame->top);
    chart_draw_bands(frame);
    scene_end(scene);
    draw_axes(frame);
    chart_draw_limits(frame);
    chart_draw_curves(frame);
    chart_draw_marks(frame, width);
    chart_name_limits(frame);
    if (!frame->report.legend)
        chart_draw_ends(frame);
    draw_titles(frame, width);
    scene_end(scene);
}

struct scene *chart_draw(const struct chart *chart, double width, double height,
                         struct text_setter *setter, struct arena *arena,
                         struct chart_report *report, struct error *error) {
    assert(chart->series_count <= CHART_MOST_SERIES && chart->mark_count <= CHART_MOST_MARKS);
    /* The scene needs somebody who remembers its first failure. */
    struct error *kept = arena_new(arena, 1, struct error, error);
    struct chart_frame *frame =
        kept == NULL ? NULL : arena_new(arena, 1, struct chart_frame, error);
    if (frame == NULL)
        return NULL;
    if (!(width >= LEAST_WIDTH && height >= LEAST_HEIGHT)) {
        error_set(error, ERROR_INPUT, "a chart of %g x %g pt, must be at least %g x %g", width,
                  height, LEAST_WIDTH, LEAST_HEIGHT);
        return NULL;
    }
    *frame = (struct chart_frame){.chart = chart, .setter = setter, .arena = arena, .error = kept};
    frame->scene = scene_create(width, height, arena, kept);
    if (frame->scene != NULL && layout(frame, width, height))
        draw(frame, width);
    if (kept->kind != ERROR_NONE) {
        error_set(error, kept->kind, "%s", kept->message);
        error_in(error, "chart %s", chart->name == NULL ? "" : chart->name);
        return NULL;
    }
    if (report != NULL)
        *report = frame->report;
    return frame->scene;
}

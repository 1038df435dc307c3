#include "report/chart_internal.h"
#include "report/spread.h"

#include <math.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

static const double END_GAP = 11;  /* from the plot to the labels */
static const double WIDE_GAP = 18; /* the same when many leaders need flatter slopes */
static const double END_LEADING = 9.4;
static const double BARE_GUTTER = 14; /* right of a plot without labels */
enum { LEGEND_LINES = 4 };
static const double SAMPLE = 20, SAMPLE_GAP = 4, ENTRY_GAP = 16;

struct scene_colour chart_text_colour(struct scene_colour colour) {
    while (theme_lightness(colour) > 42) {
        colour.red *= 0.94;
        colour.green *= 0.94;
        colour.blue *= 0.94;
    }
    return colour;
}

/* ---- labels at the ends ---- */

static double end_gap(const struct chart_frame *frame) {
    return frame->end_count > 4 ? WIDE_GAP : END_GAP;
}

static struct scene_text end_text(const struct chart_frame *frame, size_t series) {
    struct scene_style style = theme_style(THEME_LABEL);
    style.colour = chart_text_colour(chart_style(frame, frame->chart->series[series].style).colour);
    return (struct scene_text){.markup = frame->chart->series[series].label,
                               .style = style,
                               .width = frame->end_width,
                               .leading = END_LEADING};
}

double chart_plan_ends(struct chart_frame *frame, double width, double height) {
    double widest = 0, total = 0;
    frame->end_count = 0;
    frame->end_width = width;
    for (size_t s = 0; s < frame->chart->series_count; s++) {
        if (frame->chart->series[s].label == NULL)
            continue;
        struct scene_text text = end_text(frame, s);
        struct text_size size = {0};
        if (!text_measure(frame->setter, &text, &size, frame->error))
            return BARE_GUTTER;
        struct chart_end *end = &frame->ends[frame->end_count++];
        *end = (struct chart_end){.series = s, .width = size.width};
        end->height = (double)size.lines * END_LEADING + 1;
        widest = fmax(widest, size.width);
        total += end->height;
    }
    frame->report.legend = total > height || frame->end_count > CHART_MOST_ENDS;
    if (frame->report.legend || frame->end_count == 0)
        return BARE_GUTTER;
    return end_gap(frame) + widest + 1;
}

static int compare_ends(const void *a, const void *b) {
    const struct chart_end *p = a, *q = b;
    if (p->y != q->y)
        return p->y < q->y ? -1 : 1;
    return p->series < q->series ? -1 : p->series > q->series;
}

/* A curve that leaves the plot is led along the frame's edge, where no other curve runs; one that
 * stops within is led straight to the right, dotted. */
static void draw_leader(struct chart_frame *frame, const struct chart_end *end, double to) {
    struct theme_curve style = chart_style(frame, frame->chart->series[end->series].style);
    bool at_right = end->x > frame->right - 1;
    if (at_right && fabs(end->centre - end->y) < 1.5)
        return;
    struct scene_segment segments[] = {
        {SCENE_MOVE, {end->x}, {end->y}},
        {SCENE_LINE, {frame->right + 1.5}, {end->y}},
        {SCENE_LINE, {to}, {end->centre}},
    };
    bool on_edge = end->y < frame->top + 0.5 || end->y > frame->bottom - 0.5;
    scene_path(frame->scene, &(struct scene_path){.segments = segments,
                                                  .count = 3,
                                                  .stroked = true,
                                                  .stroke = chart_text_colour(style.colour),
                                                  .width = 0.5,
                                                  .dashes = {0.9, 1.8},
                                                  .dash_count = at_right || on_edge ? 0 : 2});
}

static void draw_end(struct chart_frame *frame, const struct chart_end *end) {
    double x = frame->right + end_gap(frame);
    const struct chart_series *series = &frame->chart->series[end->series];
    struct theme_curve style = chart_style(frame, series->style);
    draw_leader(frame, end, x - 2);
    chart_draw_marker(frame->scene, &style, end->x, end->y);
    struct scene_text text = end_text(frame, end->series);
    double lines = round((end->height - 1) / END_LEADING);
    text.x = x;
    text.y = end->centre - (lines - 1) * END_LEADING / 2 + 0.35 * text.style.size;
    scene_text(frame->scene, &text);
    size_t k = frame->report.label_count++;
    frame->report.labels[k].x = x;
    frame->report.labels[k].y = end->centre - (end->height - 1) / 2;
    frame->report.labels[k].width = end->width;
    frame->report.labels[k].height = end->height - 1;
}

void chart_draw_ends(struct chart_frame *frame) {
    double centres[CHART_MOST_SERIES], heights[CHART_MOST_SERIES];
    size_t count = 0;
    for (size_t i = 0; i < frame->end_count; i++) {
        struct chart_end *end = &frame->ends[i];
        if (chart_last_seen(frame, &frame->chart->series[end->series], &end->x, &end->y))
            frame->ends[count++] = *end;
    }
    frame->end_count = count;
    qsort(frame->ends, count, sizeof frame->ends[0], compare_ends);
    for (size_t i = 0; i < count; i++) {
        centres[i] = frame->ends[i].y;
        heights[i] = frame->ends[i].height;
    }
    double rise = frame->chart->mark_count > 0 ? -2 : 4; /* stay clear of the marks' flags */
    spread_apart(centres, heights, count, frame->top - rise, frame->bottom + 4);
    for (size_t i = 0; i < count; i++) {
        frame->ends[i].centre = centres[i];
        draw_end(frame, &frame->ends[i]);
    }
}

/* ---- marks: flags above the plot, beside their stems ---- */

struct flag {
    size_t mark;
    double stem, x, width;
    bool left; /* of its stem, for want of room on the right */
    size_t row;
};

static const double FLAG_GAP = 3, FLAG_CLEAR = 5;

static bool spans(const struct flag *flag, double stem) {
    return flag->left ? stem > flag->x - FLAG_CLEAR && stem < flag->stem
                      : stem > flag->stem && stem < flag->x + flag->width + FLAG_CLEAR;
}

static bool touch(const struct flag *a, const struct flag *b) {
    return a->x < b->x + b->width + FLAG_CLEAR && b->x < a->x + a->width + FLAG_CLEAR;
}

/* A flag that would run over the right edge turns to the left, and so does any whose text a
 * turned flag's stem would cross. */
static void turn_flags(struct flag *flags, size_t count, double width) {
    for (bool changed = true; changed;) {
        changed = false;
        for (size_t i = 0; i < count; i++) {
            bool turn = !flags[i].left && flags[i].x + flags[i].width > width;
            for (size_t j = 0; j < count && !flags[i].left; j++)
                turn = turn || (flags[j].left && spans(&flags[i], flags[j].stem));
            if (!turn)
                continue;
            flags[i].left = changed = true;
            flags[i].x = fmax(0, flags[i].stem - FLAG_GAP - flags[i].width);
        }
    }
}

/* Flags to the right come first, from the right to the left, then those to the left, from the left
 * to the right: each takes the row above all that it touches or spans, so nothing is crossed. */
static int compare_flags(const void *a, const void *b) {
    const struct flag *p = a, *q = b;
    if (p->left != q->left)
        return p->left ? 1 : -1;
    if (p->stem != q->stem)
        return (p->stem < q->stem) == p->left ? -1 : 1;
    return p->mark > q->mark ? -1 : p->mark < q->mark;
}

static size_t place_flags(struct chart_frame *frame, double width, struct flag *flags,
                          size_t *count) {
    const struct chart *chart = frame->chart;
    size_t rows = 0;
    *count = 0;
    for (size_t m = 0; m < chart->mark_count; m++) {
        double stem = chart_x(frame, chart->marks[m].x);
        if (!(stem >= frame->left - 0.01 && stem <= frame->right + 0.01))
            continue;
        double wide = text_width(frame->setter, chart->marks[m].label, theme_style(THEME_LABEL),
                                 frame->error);
        flags[(*count)++] = (struct flag){m, stem, stem + FLAG_GAP, wide, false, 0};
    }
    turn_flags(flags, *count, width);
    qsort(flags, *count, sizeof *flags, compare_flags);
    for (size_t i = 0; i < *count; i++) {
        for (size_t j = 0; j < i; j++)
            if ((touch(&flags[i], &flags[j]) || spans(&flags[i], flags[j].stem)) &&
                flags[j].row + 1 > flags[i].row)
                flags[i].row = flags[j].row + 1;
        if (flags[i].row + 1 > rows)
            rows = flags[i].row + 1;
    }
    return rows;
}

size_t chart_mark_rows(struct chart_frame *frame, double width) {
    struct flag flags[CHART_MOST_MARKS];
    size_t count = 0;
    return place_flags(frame, width, flags, &count);
}

static void draw_mark(struct chart_frame *frame, const struct flag *flag) {
    const struct chart_mark *mark = &frame->chart->marks[flag->mark];
    struct scene_colour colour = theme_colour(THEME_ACCENT);
    if (mark->style != SIZE_MAX)
        colour = chart_text_colour(chart_style(frame, mark->style).colour);
    double baseline = frame->top - 4 - CHART_MARK_ROW * (double)flag->row;
    scene_line(frame->scene, flag->stem, baseline - 6.5, flag->stem, frame->bottom, 0.6, colour);
    struct scene_style style = theme_style(THEME_LABEL);
    style.colour = colour;
    scene_text(
        frame->scene,
        &(struct scene_text){.markup = mark->label, .style = style, .x = flag->x, .y = baseline});
    double y = chart_y(frame, mark->y);
    if (!(y >= frame->top && y <= frame->bottom))
        return;
    struct theme_curve ring = {.colour = colour, .marker = THEME_RING};
    chart_draw_marker(frame->scene, &ring, flag->stem, y);
}

void chart_draw_marks(struct chart_frame *frame, double width) {
    struct flag flags[CHART_MOST_MARKS];
    size_t count = 0;
    place_flags(frame, width, flags, &count);
    for (size_t i = 0; i < count; i++)
        draw_mark(frame, &flags[i]);
}

/* ---- legend ---- */

static void draw_sample(struct chart_frame *frame, const struct chart_series *series, double x,
                        double y) {
    struct theme_curve style = chart_style(frame, series->style);
    struct scene_segment segments[] = {{SCENE_MOVE, {x}, {y}}, {SCENE_LINE, {x + SAMPLE}, {y}}};
    struct scene_path path = {.segments = segments,
                              .count = 2,
                              .stroked = true,
                              .stroke = style.colour,
                              .width = style.width,
                              .dash_count = style.dash_count};
    memcpy(path.dashes, style.dashes, sizeof path.dashes);
    if (!series->points)
        scene_path(frame->scene, &path);
    if (series->points || series->markers)
        chart_draw_marker(frame->scene, &style, x + SAMPLE / 2, y);
}

/* Entries stand in columns of one width, two at least where the chart has the room. */
struct legend {
    double text;   /* width of an entry's text */
    double column; /* from one entry to the next */
    size_t columns;
};

static struct legend plan_legend(struct chart_frame *frame, double width) {
    double widest = 0, most = (width + ENTRY_GAP) / 2 - SAMPLE - SAMPLE_GAP - ENTRY_GAP;
    for (size_t i = 0; i < frame->end_count; i++)
        widest = fmax(widest,
                      text_width(frame->setter, frame->chart->series[frame->ends[i].series].label,
                                 theme_style(THEME_LABEL), frame->error));
    struct legend legend = {.text = fmin(widest + 0.05, most - 0.05)};
    legend.column = SAMPLE + SAMPLE_GAP + legend.text + ENTRY_GAP;
    legend.columns = (size_t)fmax(1, floor((width + ENTRY_GAP) / legend.column));
    return legend;
}

static struct scene_text entry_text(struct chart_frame *frame, const struct legend *legend,
                                    size_t entry) {
    struct scene_text text = {.markup = frame->chart->series[frame->ends[entry].series].label,
                              .style = theme_style(THEME_LABEL),
                              .width = legend->text,
                              .leading = END_LEADING};
    text.markup = text_shorten(frame->setter, &text, LEGEND_LINES, frame->arena, frame->error);
    return text;
}

/* Draws the entry when `draw` is set; returns its height. */
static double set_entry(struct chart_frame *frame, const struct legend *legend, size_t entry,
                        double y, bool draw) {
    struct scene_text text = entry_text(frame, legend, entry);
    struct text_size size = {0};
    if (!text_measure(frame->setter, &text, &size, frame->error))
        return 0;
    text.x = (double)(entry % legend->columns) * legend->column + SAMPLE + SAMPLE_GAP;
    text.y = y + CHART_LEGEND_ROW - 3;
    if (draw) {
        draw_sample(frame, &frame->chart->series[frame->ends[entry].series],
                    text.x - SAMPLE - SAMPLE_GAP, text.y - 2.7);
        scene_text(frame->scene, &text);
    }
    return CHART_LEGEND_ROW + (double)(size.lines - 1) * END_LEADING;
}

/* Returns the height. */
static double flow_legend(struct chart_frame *frame, double width, double y, bool draw) {
    struct legend legend = plan_legend(frame, width);
    double top = y;
    for (size_t first = 0; first < frame->end_count; first += legend.columns) {
        double tallest = 0;
        for (size_t i = first; i < frame->end_count && i < first + legend.columns; i++)
            tallest = fmax(tallest, set_entry(frame, &legend, i, y, draw));
        y += tallest;
    }
    return frame->end_count == 0 ? 0 : y - top + 4;
}

double chart_legend_height(struct chart_frame *frame, double width) {
    return flow_legend(frame, width, 0, false);
}

void chart_draw_legend(struct chart_frame *frame, double width, double y) {
    flow_legend(frame, width, y, true);
}

#ifndef REPORT_CHART_INTERNAL_H
#define REPORT_CHART_INTERNAL_H

#include "report/axis.h"
#include "report/chart.h"
#include "report/theme.h"

/* What chart.c, chart_plot.c and chart_labels.c share: the chart being drawn. */

struct chart_box {
    double x, y, width, height;
};

/* A curve's name at its end. */
struct chart_end {
    size_t series;
    double x, y;          /* where the curve is seen last */
    double width, height; /* of the label */
    double centre;        /* y of the label's middle */
};

struct chart_frame {
    const struct chart *chart;
    struct text_setter *setter;
    struct arena *arena;
    struct scene *scene;
    struct error *error;
    double left, top, right, bottom; /* of the plot, pt */
    struct axis x, y;
    struct chart_end ends[CHART_MOST_SERIES];
    size_t end_count;
    double end_width;    /* the labels are wrapped to it */
    const char *title;   /* cut to what the chart has room for */
    double title_height; /* 0 without a title */
    struct chart_report report;
};

double chart_x(const struct chart_frame *frame, double value); /* pt */
double chart_y(const struct chart_frame *frame, double value);
struct theme_curve chart_style(const struct chart_frame *frame, size_t style);
/* Dark enough for text, still of the curve's hue. */
struct scene_colour chart_text_colour(struct scene_colour colour);

/* ---- chart_plot.c ---- */

void chart_draw_bands(struct chart_frame *frame);
void chart_draw_curves(struct chart_frame *frame);
void chart_draw_marker(struct scene *scene, const struct theme_curve *style, double x, double y);

/* The part of the segment (x0, y0)-(x1, y1) within the plot; false when there is none. */
bool chart_clip(const struct chart_frame *frame, double *x0, double *y0, double *x1, double *y1);
/* Where the series is seen last; false when nothing of it is in the plot. */
bool chart_last_seen(const struct chart_frame *frame, const struct chart_series *series, double *x,
                     double *y);
/* Whether a curve, a mark's stem or a limit's line runs through the box. */
bool chart_crosses(const struct chart_frame *frame, struct chart_box box);

/* ---- chart_limits.c ---- */

void chart_draw_limits(struct chart_frame *frame); /* below the curves */
void chart_name_limits(struct chart_frame *frame); /* above them */

/* ---- chart_labels.c ---- */

/* Measures the labels; returns the room that they need to the right of the plot.  When their
 * heights exceed `height`, sets report.legend and returns the room without labels. */
double chart_plan_ends(struct chart_frame *frame, double width, double height);
void chart_draw_ends(struct chart_frame *frame);

/* Rows that the marks need above the plot (needs the x axis and left, right). */
size_t chart_mark_rows(struct chart_frame *frame, double width);
void chart_draw_marks(struct chart_frame *frame, double width);

double chart_legend_height(struct chart_frame *frame, double width);
void chart_draw_legend(struct chart_frame *frame, double width, double y);

#define CHART_MARK_ROW 11.0
#define CHART_LEGEND_ROW 12.0

#endif

#ifndef REPORT_CHART_H
#define REPORT_CHART_H

#include "report/text.h"

#include "groundrules/quantity.h"

/* The chart engine.  Curves carry their names at their right ends (moved apart with leader lines
 * where they would collide); if there is no room a legend stands above the plot.  Values are SI. */

struct chart_axis {
    const char *label; /* markup, without unit: "gap" */
    enum dimension dimension;
    bool logarithmic;
    double low, high; /* forced ends when low < high; both 0 = from the data */
};

struct chart_series {
    const char *label; /* markup, NULL = none */
    const double *x, *y;
    size_t count;
    const double *low, *high; /* [count] tolerance band, NULL = none */
    size_t style;             /* index for theme_curve */
    bool points;              /* measured data: markers without a line */
    bool markers;             /* markers along the line too */
    const bool *doubtful;     /* [count], outside validity: drawn thin and dotted; NULL = none */
};

struct chart_limit {
    double value; /* of y */
    const char *label;
    bool below; /* the forbidden side is below, else above */
};

/* A rule as a marked value of x: a fine vertical line, a label above the plot, and a ring at y. */
struct chart_mark {
    double x;
    double y;          /* NAN: no ring */
    const char *label; /* markup, "XT-01: 1.85 mm" */
    size_t style;      /* curve it belongs to; SIZE_MAX = none */
};

struct chart {
    const char *name;  /* of the scene's group, "spacing-1" */
    const char *title; /* markup, may be NULL */
    struct chart_axis x, y;
    enum quantity_lengths lengths;
    const struct chart_series *series;
    size_t series_count;
    size_t style_count; /* for theme_curve; 0 = series_count */
    const struct chart_limit *limits;
    size_t limit_count;
    const struct chart_mark *marks;
    size_t mark_count;
};

enum {
    CHART_MOST_SERIES = 32,
    CHART_MOST_MARKS = 32,
    CHART_MOST_ENDS = 10 /* named at their ends; beyond that leaders are a thicket */
};

/* What the layout did, for captions and tests. */
struct chart_report {
    bool legend;             /* labels did not fit at the ends */
    bool x_linear, y_linear; /* a logarithmic axis was asked for values <= 0 and drawn linear */
    size_t outside;          /* points of curves beyond the forced ends */
    double plot_x, plot_y, plot_width, plot_height;
    struct {
        double x, y, width, height; /* top left */
    } labels[CHART_MOST_SERIES];    /* of the labels at the ends */
    size_t label_count;
};

/* NAN in y is a gap.  `report` may be NULL.  Returns a scene of the size given, higher where title,
 * legend and flags would leave the plot less than half of it; owned by the arena.
 * Fails: ERROR_INPUT when nothing is finite or the size is too small (below 120 x 90 pt);
 * ERROR_MEMORY; NULL then. */
struct scene *chart_draw(const struct chart *chart, double width, double height,
                         struct text_setter *setter, struct arena *arena,
                         struct chart_report *report, struct error *error);

#endif

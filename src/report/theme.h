#ifndef REPORT_THEME_H
#define REPORT_THEME_H

#include "groundrules/scene.h"
#include "groundrules/sketch.h"
#include "groundrules/study.h"

/* The one design of the document: grid, sizes, inks, curve styles, fills.  Print first: every
 * distinction also holds in grey. */

/* ---- page ---- */

#define THEME_BASELINE 4.0 /* pt: the grid that heights and gaps are multiples of */

enum { THEME_COLUMNS = 6 };

struct theme_page {
    double width, height;            /* pt */
    double left, right, top, bottom; /* x and y of the text area's edges */
    double head, foot;               /* baselines of running head and foot */
    double gutter;                   /* between columns */
    double column;                   /* width of one of THEME_COLUMNS */
};

struct theme_page theme_page(enum study_page page);
/* x of the left edge of column `first` (0 ..) and the width of `span` columns with their gutters.
 */
double theme_column(const struct theme_page *page, size_t first, size_t span, double *width);
/* y moved down to the next multiple of THEME_BASELINE below page->top. */
double theme_snap(const struct theme_page *page, double y);

/* ---- text ---- */

enum theme_text {
    THEME_TITLE,   /* the cover's title, 30 bold */
    THEME_CHAPTER, /* 19 bold */
    THEME_SECTION, /* 12.5 bold */
    THEME_LEAD,    /* a chapter's question, 11.5 italic */
    THEME_BODY,    /* 9.2 */
    THEME_STRONG,  /* 9.2 bold */
    THEME_TABLE,   /* 8.2 */
    THEME_HEAD,    /* column heads, 7.8 medium */
    THEME_NOTE,    /* notes, captions, 7.6 */
    THEME_RUNNING, /* running head and foot, 7.2 */
    THEME_TICK,    /* tick numbers, 7.6 */
    THEME_LABEL,   /* labels in charts and drawings, 7.8 */
    THEME_FIGURE,  /* a chart's title, 9 medium */
    THEME_TEXTS
};

struct scene_style theme_style(enum theme_text text);
double theme_leading(enum theme_text text); /* pt, a multiple of THEME_BASELINE / 2 */

/* ---- inks ---- */

enum theme_ink {
    THEME_INK,    /* text, axes */
    THEME_QUIET,  /* secondary text */
    THEME_HAIR,   /* grid lines, fine rules */
    THEME_TINT,   /* zebra, panels */
    THEME_PAPER,  /* white */
    THEME_ACCENT, /* headings' rule, rule cards, marks */
    THEME_ALARM,  /* limits and forbidden sides, "cannot be met" */
    THEME_INKS
};

struct scene_colour theme_colour(enum theme_ink ink);

/* ---- curves ---- */

enum theme_marker {
    THEME_DISC,
    THEME_SQUARE,
    THEME_TRIANGLE,
    THEME_DIAMOND,
    THEME_RING,
    THEME_OPEN_SQUARE,
    THEME_OPEN_TRIANGLE,
    THEME_CROSS,
    THEME_MARKERS
};

struct theme_curve {
    struct scene_colour colour;
    double width;
    double dashes[6];
    size_t dash_count; /* 0 = solid */
    enum theme_marker marker;
};

/* The style of curve `index` among `count`: lightness rises with the index (steps as large as
 * `count` allows), hues alternate between families that colour-blind readers tell apart, and dash
 * and marker differ too.  Any index works; above 8 the colours come again with other dashes. */
struct theme_curve theme_curve(size_t index, size_t count);

/* CIE 1976 lightness L*, 0 black .. 100 white, of an opaque sRGB colour. */
double theme_lightness(struct scene_colour colour);

/* ---- sketches ---- */

struct theme_solid {
    struct scene_colour fill, edge;
    double edge_width;            /* 0 = none */
    double hatch;                 /* pt between hatch lines at 45 degrees, 0 = none */
    struct scene_colour hatching; /* its ink */
    bool dashed;                  /* edge dashed: connected to nothing */
};

struct theme_solid theme_solid(enum sketch_role role);
const char *theme_role_name(enum sketch_role role); /* "ground copper, tied" */

#endif

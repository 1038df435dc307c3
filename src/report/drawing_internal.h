#ifndef REPORT_DRAWING_INTERNAL_H
#define REPORT_DRAWING_INTERNAL_H

#include "report/drawing.h"
#include "report/theme.h"

/* What drawing.c, drawing_plan.c, drawing_dimension.c and drawing_board.c share. */

struct drawing_frame {
    const struct drawing_options *options;
    struct text_setter *setter;
    struct arena *arena;
    struct scene *scene;
    struct error *error;
    double scale;                    /* pt per m */
    double x0;                       /* pt of x = 0 m */
    double y0;                       /* pt of y = 0 m */
    double left, top, right, bottom; /* of the picture, pt */
    double copper;                   /* pt, the least thickness that copper is drawn with */
    struct drawing_report report;
};

double drawing_x(const struct drawing_frame *frame, double x);
double drawing_y(const struct drawing_frame *frame, double y);

struct scene_style drawing_style(void); /* of labels */
/* Width of a label; 0 after a failure. */
double drawing_width(const struct drawing_frame *frame, const char *markup);
void drawing_label(struct drawing_frame *frame, const char *markup, double x, double y,
                   enum scene_align align);

/* A rectangle with the role's fill, hatch and edge. */
void drawing_solid(struct drawing_frame *frame, const struct theme_solid *solid, double x, double y,
                   double width, double height);

/* The same with its top narrower by `etch` pt on either side. */
void drawing_trapezoid(struct drawing_frame *frame, const struct theme_solid *solid, double x,
                       double y, double width, double height, double etch);

#define DRAWING_LEGEND_ROW 12.0

/* Where the next entry of the legend goes. */
struct drawing_legend {
    double x, y;
    bool any;
};
/* look NULL: text alone. */
void drawing_legend_entry(struct drawing_frame *frame, struct drawing_legend *legend,
                          const struct theme_solid *look, const char *text);
/* Dimensions that found no room beside the picture. */
void drawing_legend_notes(struct drawing_frame *frame, const struct sketch *sketch,
                          struct drawing_legend *legend);

/* ---- drawing_plan.c ---- */

void drawing_plan(struct drawing_frame *frame, const struct sketch *plan);

/* ---- drawing_dimension.c ---- */

#define DRAWING_DIMENSION_ROW 13.0

/* "gap 0.3 mm", owned by the arena; "" after a failure. */
const char *drawing_dimension_text(struct drawing_frame *frame,
                                   const struct sketch_dimension *dimension);

/* Rows above the copper that the horizontal dimensions need; room right of the picture for the
 * vertical ones. */
size_t drawing_dimension_rows(struct drawing_frame *frame, const struct sketch *sketch);
double drawing_dimension_room(struct drawing_frame *frame, const struct sketch *sketch);
/* Whether a vertical dimension is told under the picture instead of drawn beside it. */
bool drawing_dimension_noted(struct drawing_frame *frame, const struct sketch *sketch,
                             size_t index);
/* `surface`: y in pt of what lies highest; rows stand above it. */
void drawing_dimensions(struct drawing_frame *frame, const struct sketch *sketch, double surface);

/* A bar of a round length at most `most` pt long, its right end at x, with its length above. */
void drawing_scale_bar(struct drawing_frame *frame, double x, double y, double most);

/* A dimension line between two points along x or y with arrows at both ends, inside when there is
 * room. */
void drawing_arrows(struct drawing_frame *frame, bool vertical, double from, double to, double at);

#endif

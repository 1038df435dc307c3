/* A geometry from above: traces as they run, vias as discs, at one scale. */

#include "report/drawing_internal.h"

#include <math.h>
#include <string.h>

static const double STANDARD_HEIGHT = 240, HEADROOM = 3, MARGIN = 6; /* pt */
static const double LEAST = 40;                                      /* pt, of the picture */

struct outline {
    double left, right, bottom, top; /* m */
};

static void include(struct outline *outline, double left, double right, double bottom, double top) {
    outline->left = fmin(outline->left, left);
    outline->right = fmax(outline->right, right);
    outline->bottom = fmin(outline->bottom, bottom);
    outline->top = fmax(outline->top, top);
}

static struct outline outline_of(const struct sketch *plan) {
    struct outline outline = {INFINITY, -INFINITY, INFINITY, -INFINITY};
    for (size_t i = 0; i < plan->solid_count; i++) {
        const struct sketch_solid *solid = &plan->solids[i];
        include(&outline, solid->left, solid->right, solid->bottom, solid->top);
    }
    for (size_t i = 0; i < plan->disc_count; i++) {
        const struct sketch_disc *disc = &plan->discs[i];
        double radius = disc->diameter / 2;
        include(&outline, disc->x - radius, disc->x + radius, disc->y - radius, disc->y + radius);
    }
    return outline;
}

static void set_scale(struct drawing_frame *frame, const struct sketch *plan,
                      const struct outline *outline) {
    const struct drawing_options *options = frame->options;
    double most = options->most_height > 0 ? options->most_height : STANDARD_HEIGHT;
    double wide = outline->right - outline->left, tall = outline->top - outline->bottom;
    frame->left = 0;
    frame->right = options->width - drawing_dimension_room(frame, plan);
    double rows = 2; /* a first guess; the scale needs the rows and the rows need the scale */
    for (int round = 0; round < 3; round++) {
        double fixed = HEADROOM + rows * DRAWING_DIMENSION_ROW + 3 * DRAWING_LEGEND_ROW;
        frame->scale =
            fmin((frame->right - frame->left - 2 * MARGIN) / wide, fmax(20, most - fixed) / tall);
        frame->x0 =
            (frame->left + frame->right - (outline->left + outline->right) * frame->scale) / 2;
        rows = (double)drawing_dimension_rows(frame, plan);
    }
    frame->top = HEADROOM + rows * DRAWING_DIMENSION_ROW + (rows > 0 ? 4 : 0);
    frame->y0 = frame->top + outline->top * frame->scale;
    frame->bottom = frame->y0 - outline->bottom * frame->scale;
    frame->report.scale = frame->scale;
}

/* Four Bezier curves; their largest deviation from a circle is 0.03 % of the radius. */
static void draw_disc(struct drawing_frame *frame, const struct sketch_disc *disc) {
    double x = drawing_x(frame, disc->x), y = drawing_y(frame, disc->y);
    double r = disc->diameter / 2 * frame->scale, k = 0.5522847498 * r;
    struct scene_segment segments[] = {
        {SCENE_MOVE, {x + r}, {y}},
        {SCENE_CURVE, {x + r, x + k, x}, {y + k, y + r, y + r}},
        {SCENE_CURVE, {x - k, x - r, x - r}, {y + r, y + k, y}},
        {SCENE_CURVE, {x - r, x - k, x}, {y - k, y - r, y - r}},
        {SCENE_CURVE, {x + k, x + r, x + r}, {y - r, y - k, y}},
        {SCENE_CLOSE, {0}, {0}},
    };
    scene_path(frame->scene, &(struct scene_path){.segments = segments,
                                                  .count = sizeof segments / sizeof *segments,
                                                  .filled = true,
                                                  .fill = theme_solid(disc->role).fill,
                                                  .stroked = true,
                                                  .stroke = theme_colour(THEME_INK),
                                                  .width = 0.6});
}

static void draw_copper(struct drawing_frame *frame, const struct sketch *plan) {
    for (size_t i = 0; i < plan->solid_count; i++) {
        const struct sketch_solid *solid = &plan->solids[i];
        struct theme_solid look = theme_solid(solid->role);
        double left = drawing_x(frame, solid->left), top = drawing_y(frame, solid->top);
        drawing_solid(frame, &look, left, top, drawing_x(frame, solid->right) - left,
                      drawing_y(frame, solid->bottom) - top);
    }
    for (size_t i = 0; i < plan->disc_count; i++)
        draw_disc(frame, &plan->discs[i]);
}

/* Discs bear few different labels, one after the other. */
static double draw_legend(struct drawing_frame *frame, const struct sketch *plan, double y) {
    struct drawing_legend legend = {.x = frame->left, .y = y};
    const char *last = "";
    for (size_t i = 0; i < plan->solid_count; i++) {
        struct theme_solid look = theme_solid(plan->solids[i].role);
        drawing_legend_entry(frame, &legend, &look, plan->solids[i].label);
    }
    for (size_t i = 0; i < plan->disc_count; i++) {
        struct theme_solid look = theme_solid(plan->discs[i].role);
        look.hatch = 0;
        if (strcmp(plan->discs[i].label, last) != 0)
            drawing_legend_entry(frame, &legend, &look, plan->discs[i].label);
        last = plan->discs[i].label;
    }
    drawing_legend_notes(frame, plan, &legend);
    return legend.y;
}

void drawing_plan(struct drawing_frame *frame, const struct sketch *plan) {
    struct outline outline = outline_of(plan);
    if (!(outline.left < outline.right)) {
        error_set(frame->error, ERROR_INPUT, "nothing to draw: no copper");
        return;
    }
    set_scale(frame, plan, &outline);
    if (!(frame->scale > 0) || frame->right - frame->left < LEAST) {
        error_set(frame->error, ERROR_INPUT, "a drawing %g pt wide is too small",
                  frame->options->width);
        return;
    }
    scene_group(frame->scene, frame->options->name == NULL ? "plan" : frame->options->name);
    draw_copper(frame, plan);
    drawing_dimensions(frame, plan, frame->top);
    double y = frame->bottom + DRAWING_LEGEND_ROW;
    drawing_scale_bar(frame, frame->right, y, 0.3 * (frame->right - frame->left));
    frame->scene->height = draw_legend(frame, plan, y + DRAWING_LEGEND_ROW) + 4;
    scene_end(frame->scene);
}

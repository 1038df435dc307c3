#include "report/drawing_internal.h"
#include "report/spread.h"

#include <assert.h>
#include <math.h>
#include <string.h>

static const double STANDARD_HEIGHT = 240;
static const double LEAST_COPPER = 2.4, LEAST_PLANE = 4, LEAST_MASK = 1; /* pt */
static const double BELOW = 20;       /* under the plane: scale bar, note */
static const double LABEL_ROOM = 20;  /* pt of dielectric that labels under the copper need */
static const double LEAST_NAMED = 11; /* pt of dielectric that hold its own name */
static const double HEADROOM = 3;

double drawing_x(const struct drawing_frame *frame, double x) {
    return frame->x0 + x * frame->scale;
}

double drawing_y(const struct drawing_frame *frame, double y) {
    return frame->y0 - y * frame->scale;
}

struct scene_style drawing_style(void) {
    return theme_style(THEME_LABEL);
}

double drawing_width(const struct drawing_frame *frame, const char *markup) {
    double width = text_width(frame->setter, markup, drawing_style(), frame->error);
    return isfinite(width) ? width : 0;
}

void drawing_label(struct drawing_frame *frame, const char *markup, double x, double y,
                   enum scene_align align) {
    scene_text(frame->scene,
               &(struct scene_text){
                   .markup = markup, .style = drawing_style(), .x = x, .y = y, .align = align});
}

/* Lines at 45 degrees that pass through fixed points of the page, so that neighbouring solids'
 * hatches meet. */
static void hatch(struct drawing_frame *frame, const struct theme_solid *solid, double x, double y,
                  double width, double height) {
    scene_clip(frame->scene, x, y, width, height);
    double step = solid->hatch * sqrt(2.0);
    for (double at = floor((x - height) / step) * step; at < x + width; at += step)
        scene_line(frame->scene, at, y + height, at + height, y, 0.5, solid->hatching);
    scene_end(frame->scene);
}

void drawing_solid(struct drawing_frame *frame, const struct theme_solid *solid, double x, double y,
                   double width, double height) {
    drawing_trapezoid(frame, solid, x, y, width, height, 0);
}

/* Hatches stay between the corners of the top. */
void drawing_trapezoid(struct drawing_frame *frame, const struct theme_solid *solid, double x,
                       double y, double width, double height, double etch) {
    struct scene_segment segments[] = {
        {SCENE_MOVE, {x + etch}, {y}},
        {SCENE_LINE, {x + width - etch}, {y}},
        {SCENE_LINE, {x + width}, {y + height}},
        {SCENE_LINE, {x}, {y + height}},
        {SCENE_CLOSE, {0}, {0}},
    };
    struct scene_path path = {.segments = segments, .count = 5};
    if (etch > 0) {
        path.filled = true;
        path.fill = solid->fill;
        scene_path(frame->scene, &path);
        path.filled = false;
    } else {
        scene_rectangle(frame->scene, x, y, width, height, solid->fill);
    }
    if (solid->hatch > 0)
        hatch(frame, solid, x + etch, y, width - 2 * etch, height);
    if (!(solid->edge_width > 0))
        return;
    path.stroked = true;
    path.stroke = solid->edge;
    path.width = solid->edge_width;
    path.dashes[0] = 2;
    path.dashes[1] = 1.4;
    path.dash_count = solid->dashed ? 2 : 0;
    scene_path(frame->scene, &path);
}

/* ---- extent and scale ---- */

struct extent {
    double left, right;     /* m, of the finite copper */
    double top, bottom;     /* m, of everything */
    double height;          /* m, of the dielectric */
    double foot;            /* m, of the copper */
    double thinnest, plane; /* m */
    double end;             /* m, x where a plane ends; INFINITY */
};

static bool is_copper(const struct sketch_solid *solid) {
    return solid->role != SKETCH_PLANE && solid->role != SKETCH_DIELECTRIC &&
           solid->role != SKETCH_MASK && solid->role != SKETCH_COVER;
}

static bool extent_of(const struct sketch *sketch, struct extent *extent, struct error *error) {
    *extent = (struct extent){INFINITY, -INFINITY, 0, 0, 0, INFINITY, INFINITY, INFINITY, INFINITY};
    for (size_t i = 0; i < sketch->solid_count; i++) {
        const struct sketch_solid *solid = &sketch->solids[i];
        extent->top = fmax(extent->top, solid->top);
        extent->bottom = fmin(extent->bottom, solid->bottom);
        if (solid->role == SKETCH_DIELECTRIC)
            extent->height = fmax(extent->height, solid->top);
        if (solid->role == SKETCH_PLANE || solid->role == SKETCH_COVER)
            extent->plane = fmin(extent->plane, solid->top - solid->bottom);
        if (solid->role == SKETCH_PLANE)
            extent->end = solid->right;
        if (!is_copper(solid))
            continue;
        extent->foot = fmin(extent->foot, solid->bottom);
        extent->thinnest = fmin(extent->thinnest, solid->top - solid->bottom);
        if (isfinite(solid->left))
            extent->left = fmin(extent->left, solid->left);
        if (isfinite(solid->right))
            extent->right = fmax(extent->right, solid->right);
    }
    if (!(extent->left < extent->right))
        return error_set(error, ERROR_INPUT, "nothing to draw: no copper of finite width");
    if (isfinite(extent->end)) {
        extent->left = fmin(extent->left, extent->end);
        extent->right = fmax(extent->right, extent->end);
    }
    if (!(extent->height > 0))
        extent->height = fmax(extent->top, extent->right - extent->left);
    return true;
}

static double margin_of(const struct extent *extent) {
    double size = extent->right - extent->left;
    return fmax(fmin(size, 3 * extent->height), 0.08 * size);
}

/* What lies under the plane: a row of swatches if the labels do not fit under the copper. */
static bool labels_fit(const struct drawing_frame *frame, const struct sketch *sketch,
                       const struct extent *extent) {
    double wide = 0;
    for (size_t i = 0; i < sketch->solid_count; i++)
        if (is_copper(&sketch->solids[i]) && sketch->solids[i].label != NULL)
            wide += drawing_width(frame, sketch->solids[i].label) + 8;
    return extent->foot * frame->scale >= LABEL_ROOM && wide <= frame->right - frame->left;
}

/* pt that a coating is drawn with, 0 without one. */
static double mask_room(const struct drawing_frame *frame, const struct sketch *sketch) {
    for (size_t i = 0; i < sketch->solid_count; i++) {
        const struct sketch_solid *solid = &sketch->solids[i];
        if (solid->role == SKETCH_MASK)
            return fmax((solid->top - solid->bottom) * frame->scale, LEAST_MASK);
    }
    return 0;
}

static bool covered(const struct sketch *sketch) {
    for (size_t i = 0; i < sketch->solid_count; i++)
        if (sketch->solids[i].role == SKETCH_COVER)
            return true;
    return false;
}

static void set_scale(struct drawing_frame *frame, const struct sketch *sketch,
                      const struct extent *extent) {
    const struct drawing_options *options = frame->options;
    double most = options->most_height > 0 ? options->most_height : STANDARD_HEIGHT;
    double lateral = extent->right - extent->left + 2 * margin_of(extent);
    double tall = extent->top;
    frame->left = 0;
    frame->right = options->width - drawing_dimension_room(frame, sketch);
    double width = frame->right - frame->left;
    double rows = 4; /* a first guess; the scale needs the rows and the rows need the scale */
    for (int round = 0; round < 3; round++) {
        double fixed =
            HEADROOM + rows * DRAWING_DIMENSION_ROW + BELOW + DRAWING_LEGEND_ROW + LEAST_PLANE;
        frame->scale = fmin(width / lateral, fmax(20, most - fixed) / tall);
        frame->x0 =
            (frame->left + frame->right) / 2 - (extent->left + extent->right) / 2 * frame->scale;
        rows = (double)drawing_dimension_rows(frame, sketch);
    }
    frame->report.scale = frame->scale;
    frame->report.copper_enlarged = extent->thinnest * frame->scale < LEAST_COPPER - 1e-9;
    frame->report.plane_enlarged = extent->plane * frame->scale < LEAST_PLANE - 1e-9;
    frame->copper = LEAST_COPPER;
    double surface = extent->top * frame->scale;
    if (frame->report.copper_enlarged)
        surface =
            fmax(surface, extent->foot * frame->scale + LEAST_COPPER + mask_room(frame, sketch));
    if (covered(sketch))
        surface = fmax(surface, extent->height * frame->scale + LEAST_PLANE);
    frame->top = HEADROOM + rows * DRAWING_DIMENSION_ROW + (rows > 0 ? 4 : 0);
    frame->y0 = frame->top + surface;
    double plane = isfinite(extent->plane) ? extent->plane * frame->scale : 0;
    frame->bottom = frame->y0 + fmax(plane, LEAST_PLANE);
}

/* ---- solids and their names ---- */

/* `etch`: m, of copper. */
static void draw_solid(struct drawing_frame *frame, const struct sketch_solid *solid, double etch) {
    double left = fmax(drawing_x(frame, solid->left), frame->left);
    double right = fmin(drawing_x(frame, solid->right), frame->right);
    double top = drawing_y(frame, solid->top), bottom = drawing_y(frame, solid->bottom);
    if (solid->role == SKETCH_PLANE)
        bottom = fmax(bottom, top + LEAST_PLANE);
    else if (solid->role == SKETCH_COVER)
        top = fmin(top, bottom - LEAST_PLANE);
    else if (solid->role == SKETCH_MASK)
        top = fmin(top, bottom - LEAST_MASK);
    else if (solid->role != SKETCH_DIELECTRIC)
        top = fmin(top, bottom - frame->copper);
    struct theme_solid look = theme_solid(solid->role);
    if (left < right)
        drawing_trapezoid(frame, &look, left, top, right - left, bottom - top,
                          is_copper(solid) ? etch * frame->scale : 0);
}

/* The coating over one piece of copper as that is drawn, square at its corners. */
static void draw_coat(struct drawing_frame *frame, const struct sketch_solid *copper, double etch,
                      double thickness) {
    double left = fmax(drawing_x(frame, copper->left) - thickness, frame->left);
    double right = fmin(drawing_x(frame, copper->right) + thickness, frame->right);
    double bottom = drawing_y(frame, copper->bottom);
    double top = fmin(drawing_y(frame, copper->top), bottom - frame->copper) - thickness;
    struct theme_solid look = theme_solid(SKETCH_MASK);
    if (left < right)
        drawing_trapezoid(frame, &look, left, top, right - left, bottom - top, etch * frame->scale);
}

static int layer_of(const struct sketch_solid *solid) {
    if (solid->role == SKETCH_DIELECTRIC)
        return 0;
    if (solid->role == SKETCH_MASK)
        return 1;
    return is_copper(solid) ? 3 : 2;
}

static void draw_solids(struct drawing_frame *frame, const struct sketch *sketch) {
    double coat = mask_room(frame, sketch);
    for (int layer = 0; layer < 4; layer++)
        for (size_t i = 0; i < sketch->solid_count; i++) {
            const struct sketch_solid *solid = &sketch->solids[i];
            if (layer_of(solid) == layer)
                draw_solid(frame, solid, sketch->etch);
            if (layer == 1 && coat > 0 && is_copper(solid))
                draw_coat(frame, solid, sketch->etch, coat);
        }
}

static void name_copper(struct drawing_frame *frame, const struct sketch *sketch) {
    double centres[SKETCH_MOST_SOLIDS], widths[SKETCH_MOST_SOLIDS];
    const struct sketch_solid *named[SKETCH_MOST_SOLIDS];
    size_t count = 0;
    for (size_t i = 0; i < sketch->solid_count; i++) {
        const struct sketch_solid *solid = &sketch->solids[i];
        if (!is_copper(solid) || solid->label == NULL)
            continue;
        double middle = drawing_x(frame, (solid->left + solid->right) / 2);
        size_t at = count++;
        for (; at > 0 && centres[at - 1] > middle; at--) {
            centres[at] = centres[at - 1];
            widths[at] = widths[at - 1];
            named[at] = named[at - 1];
        }
        centres[at] = middle;
        widths[at] = drawing_width(frame, solid->label) + 8;
        named[at] = solid;
    }
    spread_apart(centres, widths, count, frame->left, frame->right);
    for (size_t i = 0; i < count; i++) {
        double foot = drawing_y(frame, named[i]->bottom);
        double middle = drawing_x(frame, (named[i]->left + named[i]->right) / 2);
        scene_line(frame->scene, middle, foot + 0.5, centres[i], foot + 7, 0.4,
                   theme_colour(THEME_QUIET));
        drawing_label(frame, named[i]->label, centres[i], foot + 14, SCENE_CENTRE);
    }
}

/* The plane is named under itself, a dielectric within itself when it is tall enough. */
static bool named_elsewhere(const struct drawing_frame *frame, const struct sketch_solid *solid) {
    bool tall = (solid->top - solid->bottom) * frame->scale >= LEAST_NAMED;
    return solid->role == SKETCH_PLANE || (solid->role == SKETCH_DIELECTRIC && tall);
}

static bool named_before(const struct sketch *sketch, size_t index) {
    for (size_t i = 0; i < index; i++)
        if (sketch->solids[i].label != NULL &&
            sketch->solids[i].role == sketch->solids[index].role &&
            strcmp(sketch->solids[i].label, sketch->solids[index].label) == 0)
            return true;
    return false;
}

void drawing_legend_entry(struct drawing_frame *frame, struct drawing_legend *legend,
                          const struct theme_solid *look, const char *text) {
    double swatch = look == NULL ? 0 : 16, wide = swatch + drawing_width(frame, text);
    if (legend->any && legend->x + wide > frame->options->width) {
        legend->x = frame->left;
        legend->y += DRAWING_LEGEND_ROW;
    }
    if (look != NULL)
        drawing_solid(frame, look, legend->x + 0.5, legend->y - 5.5, 12, 5.5);
    drawing_label(frame, text, legend->x + swatch, legend->y, SCENE_LEFT);
    legend->x += wide + 14;
    legend->any = true;
}

static void add_solids(struct drawing_frame *frame, const struct sketch *sketch, bool copper,
                       struct drawing_legend *legend) {
    for (size_t i = 0; i < sketch->solid_count; i++) {
        const struct sketch_solid *solid = &sketch->solids[i];
        if (solid->label == NULL || named_elsewhere(frame, solid) || named_before(sketch, i) ||
            (is_copper(solid) && !copper))
            continue;
        struct theme_solid look = theme_solid(solid->role);
        drawing_legend_entry(frame, legend, &look, solid->label);
    }
}

void drawing_legend_notes(struct drawing_frame *frame, const struct sketch *sketch,
                          struct drawing_legend *legend) {
    struct theme_solid mask = theme_solid(SKETCH_MASK);
    for (size_t i = 0; i < sketch->dimension_count; i++) {
        const struct sketch_dimension *dimension = &sketch->dimensions[i];
        if (!dimension->vertical || !drawing_dimension_noted(frame, sketch, i))
            continue;
        bool of_mask = false;
        for (size_t k = 0; k < sketch->solid_count; k++)
            of_mask = of_mask || (sketch->solids[k].role == SKETCH_MASK &&
                                  sketch->solids[k].bottom == dimension->from &&
                                  sketch->solids[k].top == dimension->to);
        drawing_legend_entry(frame, legend, of_mask ? &mask : NULL,
                             drawing_dimension_text(frame, dimension));
    }
}

/* Rows of swatches, copper among them where it is not named in the picture; the baseline of the
 * last one, or of the row above when there is nothing to say. */
static double draw_legend(struct drawing_frame *frame, const struct sketch *sketch, bool copper,
                          double y) {
    struct drawing_legend legend = {.x = frame->left, .y = y + DRAWING_LEGEND_ROW};
    add_solids(frame, sketch, copper, &legend);
    drawing_legend_notes(frame, sketch, &legend);
    return legend.any ? legend.y : y;
}

/* The dielectric's and the plane's own names. */
static void name_layers(struct drawing_frame *frame, const struct sketch *sketch, double below) {
    for (size_t i = 0; i < sketch->solid_count; i++) {
        const struct sketch_solid *solid = &sketch->solids[i];
        if (solid->label == NULL || is_copper(solid))
            continue;
        if (solid->role == SKETCH_PLANE)
            drawing_label(frame, solid->label, frame->left, below, SCENE_LEFT);
        else if (named_elsewhere(frame, solid))
            drawing_label(frame, solid->label, frame->left + 5,
                          drawing_y(frame, solid->bottom) - 3.5, SCENE_LEFT);
    }
}

static double draw_below(struct drawing_frame *frame, const struct sketch *sketch, bool legend) {
    double y = frame->bottom + 11;
    name_layers(frame, sketch, y);
    /* Beside the plane's name where there is room, else in the column of the dimensions. */
    bool narrow = frame->right - frame->left < 150;
    drawing_scale_bar(frame, narrow ? frame->options->width : frame->right, y - 2.8,
                      0.3 * (frame->right - frame->left));
    y = draw_legend(frame, sketch, legend, y);
    if (frame->report.copper_enlarged || frame->report.plane_enlarged) {
        y += DRAWING_LEGEND_ROW;
        scene_text(frame->scene,
                   &(struct scene_text){.markup = frame->report.copper_enlarged
                                                      ? "Copper drawn thicker than to scale."
                                                      : "Plane drawn thicker than to scale.",
                                        .style = theme_style(THEME_NOTE),
                                        .x = frame->left,
                                        .y = y});
    }
    return y + 4;
}

static void draw(struct drawing_frame *frame, const struct sketch *sketch,
                 const struct extent *extent) {
    const char *name = frame->options->name;
    bool legend = !labels_fit(frame, sketch, extent);
    scene_group(frame->scene, name == NULL ? "section" : name);
    draw_solids(frame, sketch);
    if (!legend)
        name_copper(frame, sketch);
    drawing_dimensions(frame, sketch, frame->top);
    frame->scene->height = draw_below(frame, sketch, legend);
    scene_end(frame->scene);
}

struct scene *drawing_sketch(const struct sketch *sketch, const struct drawing_options *options,
                             struct text_setter *setter, struct arena *arena,
                             struct drawing_report *report, struct error *error) {
    struct error *kept = arena_new(arena, 1, struct error, error);
    if (kept == NULL)
        return NULL;
    struct drawing_frame frame = {
        .options = options, .setter = setter, .arena = arena, .error = kept};
    struct extent extent;
    frame.scene = scene_create(options->width, 1, arena, kept);
    if (frame.scene != NULL && sketch->plan)
        drawing_plan(&frame, sketch);
    else if (frame.scene != NULL && extent_of(sketch, &extent, kept)) {
        set_scale(&frame, sketch, &extent);
        if (frame.scale > 0 && frame.right - frame.left >= 40)
            draw(&frame, sketch, &extent);
        else
            error_set(kept, ERROR_INPUT, "a drawing %g pt wide is too small", options->width);
    }
    if (kept->kind != ERROR_NONE) {
        error_set(error, kept->kind, "%s", kept->message);
        error_in(error, "drawing");
        return NULL;
    }
    if (report != NULL)
        *report = frame.report;
    return frame.scene;
}

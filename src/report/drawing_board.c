#include "report/drawing_internal.h"
#include "report/spread.h"

#include <assert.h>
#include <math.h>
#include <stdio.h>
#include <string.h>

/* A board: heights to scale, widths only a strip; copper layers that carry signals show as traces,
 * planes run through. */

enum { MOST_LAYERS = SPREAD_MOST };
static const double STANDARD_HEIGHT = 200, LEAST_COPPER = 2.6, LEAST_DIELECTRIC = 5;
static const double STRIP = 0.30;    /* share of the width that the board takes */
static const double TOTAL_ROOM = 62; /* left of it, for the total thickness */
static const double LABEL_ROW = 11, LABEL_LEADING = 9.4, LEADER = 16;
enum { NAME_LINES = 2 };

/* A layer's name and figures beside the board. */
struct layer_label {
    const char *text;
    double height;
};

static double label_left(const struct drawing_frame *frame) {
    return frame->right + LEADER + 3;
}

static struct scene_text label_text(const struct drawing_frame *frame, const char *markup) {
    return (struct scene_text){.markup = markup,
                               .style = theme_style(THEME_LABEL),
                               .width = frame->options->width - label_left(frame),
                               .leading = LABEL_LEADING};
}

static double drawn(const struct study_layer *layer, double scale) {
    double least = layer->kind == STUDY_LAYER_COPPER ? LEAST_COPPER : LEAST_DIELECTRIC;
    return fmax(layer->thickness.value * scale, least);
}

static void print_tolerance(char *text, size_t size, const struct quantity *quantity) {
    char plus[32], minus[32];
    text[0] = '\0';
    if (!(quantity->plus > 0 || quantity->minus > 0))
        return;
    quantity_print(plus, sizeof plus, quantity->plus / quantity->value, DIMENSION_RATIO, -2,
                   QUANTITY_TYPOGRAPHIC, QUANTITY_MILLIMETRES);
    quantity_print(minus, sizeof minus, quantity->minus / quantity->value, DIMENSION_RATIO, -2,
                   QUANTITY_TYPOGRAPHIC, QUANTITY_MILLIMETRES);
    if (fabs(quantity->plus - quantity->minus) < 1e-6 * quantity->value)
        snprintf(text, size, " ±\u2009%s", plus);
    else
        snprintf(text, size, " +%s \u2212%s", plus, minus);
}

static const char *layer_name(struct drawing_frame *frame, const struct study_layer *layer) {
    if (layer->name == NULL)
        return "";
    const char *name = text_escape(frame->arena, layer->name, frame->error);
    struct scene_text text = label_text(frame, name);
    if (layer->kind == STUDY_LAYER_COPPER)
        text.style.weight = SCENE_BOLD;
    if (name == NULL)
        return "";
    return text_shorten(frame->setter, &text, NAME_LINES, frame->arena, frame->error);
}

static const char *layer_text(struct drawing_frame *frame, const struct study_layer *layer) {
    char thickness[64], tolerance[96], dk[32], dk_tolerance[96];
    bool copper = layer->kind == STUDY_LAYER_COPPER;
    quantity_print(thickness, sizeof thickness, layer->thickness.value, DIMENSION_LENGTH, -4,
                   QUANTITY_TYPOGRAPHIC, frame->options->lengths);
    print_tolerance(tolerance, sizeof tolerance, &layer->thickness);
    const char *name = layer_name(frame, layer);
    const char *gap = *name == '\0' ? "" : "  ";
    const char *kind = copper ? layer->plane ? "ground plane" : "copper" : "";
    if (copper)
        return arena_print(frame->arena, frame->error, "<b>%s</b>%s%s %s%s", name, gap, kind,
                           thickness, tolerance);
    quantity_print(dk, sizeof dk, layer->dk.value, DIMENSION_NUMBER, -4, QUANTITY_TYPOGRAPHIC,
                   frame->options->lengths);
    print_tolerance(dk_tolerance, sizeof dk_tolerance, &layer->dk);
    return arena_print(frame->arena, frame->error, "%s%s%s%s, dk %s%s", name, gap, thickness,
                       tolerance, dk, dk_tolerance);
}

static void draw_copper(struct drawing_frame *frame, const struct study_layer *layer, double y,
                        double height) {
    struct theme_solid look = theme_solid(layer->plane ? SKETCH_PLANE : SKETCH_TRACE);
    double width = frame->right - frame->left;
    if (layer->plane) {
        drawing_solid(frame, &look, frame->left, y, width, height);
        return;
    }
    /* Left edge and width of a few traces, as shares of the strip. */
    static const double TRACES[][2] = {{0.08, 0.10}, {0.26, 0.10}, {0.46, 0.22}, {0.78, 0.10}};
    for (size_t i = 0; i < sizeof TRACES / sizeof TRACES[0]; i++)
        drawing_solid(frame, &look, frame->left + TRACES[i][0] * width, y, TRACES[i][1] * width,
                      height);
}

/* Copper lies over the dielectrics, so that no hatch line's end peeps over its edge. */
static void draw_layers(struct drawing_frame *frame, const struct study_stackup *stackup,
                        double *middles) {
    struct theme_solid dielectric = theme_solid(SKETCH_DIELECTRIC);
    double tops[MOST_LAYERS], y = frame->top;
    for (size_t i = 0; i < stackup->layer_count; i++) {
        const struct study_layer *layer = &stackup->layers[i];
        double height = drawn(layer, frame->scale);
        if (layer->kind == STUDY_LAYER_DIELECTRIC)
            drawing_solid(frame, &dielectric, frame->left, y, frame->right - frame->left, height);
        tops[i] = y;
        middles[i] = y + height / 2;
        y += height;
    }
    for (size_t i = 0; i < stackup->layer_count; i++)
        if (stackup->layers[i].kind == STUDY_LAYER_COPPER)
            draw_copper(frame, &stackup->layers[i], tops[i],
                        drawn(&stackup->layers[i], frame->scale));
    frame->bottom = y;
}

static double measure_labels(struct drawing_frame *frame, const struct study_stackup *stackup,
                             struct layer_label *labels) {
    double tall = 0;
    for (size_t i = 0; i < stackup->layer_count; i++) {
        labels[i].text = layer_text(frame, &stackup->layers[i]);
        struct scene_text text = label_text(frame, labels[i].text);
        struct text_size size = {0};
        if (labels[i].text == NULL || !text_measure(frame->setter, &text, &size, frame->error))
            return 0;
        labels[i].height = LABEL_ROW + (double)(size.lines - 1) * LABEL_LEADING;
        tall += labels[i].height;
    }
    return tall;
}

static void draw_labels(struct drawing_frame *frame, const struct study_stackup *stackup,
                        const struct layer_label *labels, double tall, const double *middles) {
    double centres[MOST_LAYERS], heights[MOST_LAYERS];
    for (size_t i = 0; i < stackup->layer_count; i++) {
        centres[i] = middles[i];
        heights[i] = labels[i].height;
    }
    double low = fmin(frame->top - 4, (frame->top + frame->bottom - tall) / 2);
    double high = fmax(frame->bottom + 4, (frame->top + frame->bottom + tall) / 2);
    spread_apart(centres, heights, stackup->layer_count, low, high);
    for (size_t i = 0; i < stackup->layer_count; i++) {
        struct scene_segment leader[] = {
            {SCENE_MOVE, {frame->right + 1.5}, {middles[i]}},
            {SCENE_LINE, {frame->right + 5}, {middles[i]}},
            {SCENE_LINE, {frame->right + LEADER - 3}, {centres[i]}},
            {SCENE_LINE, {frame->right + LEADER}, {centres[i]}},
        };
        scene_path(frame->scene, &(struct scene_path){.segments = leader,
                                                      .count = 4,
                                                      .stroked = true,
                                                      .stroke = theme_colour(THEME_QUIET),
                                                      .width = 0.4});
        struct scene_text text = label_text(frame, labels[i].text);
        text.x = label_left(frame);
        text.y = centres[i] - (heights[i] - LABEL_ROW) / 2 + 2.8;
        scene_text(frame->scene, &text);
    }
}

static double total_thickness(const struct study_stackup *stackup) {
    double total = 0;
    for (size_t i = 0; i < stackup->layer_count; i++)
        total += stackup->layers[i].thickness.value;
    return total;
}

static void draw_total(struct drawing_frame *frame, const struct study_stackup *stackup) {
    char value[64];
    double x = frame->left - 8;
    struct scene_colour fine = theme_colour(THEME_QUIET);
    quantity_print(value, sizeof value, total_thickness(stackup), DIMENSION_LENGTH, -3,
                   QUANTITY_TYPOGRAPHIC, frame->options->lengths);
    scene_line(frame->scene, x - 3, frame->top, frame->left - 1, frame->top, 0.35, fine);
    scene_line(frame->scene, x - 3, frame->bottom, frame->left - 1, frame->bottom, 0.35, fine);
    drawing_arrows(frame, true, frame->top, frame->bottom, x);
    drawing_label(frame, value, x - 5, (frame->top + frame->bottom) / 2 + 2.8, SCENE_RIGHT);
}

static void set_scale(struct drawing_frame *frame, const struct study_stackup *stackup,
                      double labels) {
    const struct drawing_options *options = frame->options;
    double most = options->most_height > 0 ? options->most_height : STANDARD_HEIGHT;
    frame->scale = (most - 36) / total_thickness(stackup);
    for (size_t i = 0; i < stackup->layer_count; i++) {
        const struct study_layer *layer = &stackup->layers[i];
        bool larger = drawn(layer, frame->scale) > layer->thickness.value * frame->scale + 1e-9;
        if (layer->kind == STUDY_LAYER_COPPER && layer->plane)
            frame->report.plane_enlarged |= larger;
        else
            frame->report.copper_enlarged |= larger;
    }
    frame->report.scale = frame->scale;
    double tall = 0;
    for (size_t i = 0; i < stackup->layer_count; i++)
        tall += drawn(&stackup->layers[i], frame->scale);
    frame->top = 6 + fmax(0, (labels - tall) / 2);
}

static void draw(struct drawing_frame *frame, const struct study_stackup *stackup) {
    double middles[MOST_LAYERS];
    struct layer_label labels[MOST_LAYERS];
    frame->left = TOTAL_ROOM;
    frame->right = frame->left + STRIP * frame->options->width;
    double tall = measure_labels(frame, stackup, labels);
    if (frame->error->kind != ERROR_NONE)
        return;
    set_scale(frame, stackup, tall);
    const char *name = frame->options->name;
    scene_group(frame->scene, name == NULL ? "board" : name);
    draw_layers(frame, stackup, middles);
    draw_labels(frame, stackup, labels, tall, middles);
    draw_total(frame, stackup);
    double y = fmax(frame->bottom, (frame->top + frame->bottom + tall) / 2) + 12;
    bool enlarged = frame->report.copper_enlarged || frame->report.plane_enlarged;
    scene_text(frame->scene,
               &(struct scene_text){.markup = enlarged ? "Heights to scale; copper drawn thicker."
                                                       : "Heights to scale.",
                                    .style = theme_style(THEME_NOTE),
                                    .x = frame->left,
                                    .y = y});
    frame->scene->height = y + 4;
    scene_end(frame->scene);
}

/* The solder mask becomes a layer on either side. */
static void coat(const struct study_stackup *stackup, struct study_layer layers[MOST_LAYERS],
                 struct study_stackup *coated) {
    *coated = *stackup;
    if (!(stackup->mask.value > 0) || stackup->layer_count + 2 > MOST_LAYERS)
        return;
    struct study_layer mask = {.kind = STUDY_LAYER_DIELECTRIC,
                               .name = "solder mask",
                               .thickness = stackup->mask,
                               .dk = stackup->mask_dk};
    layers[0] = layers[stackup->layer_count + 1] = mask;
    memcpy(layers + 1, stackup->layers, stackup->layer_count * sizeof *layers);
    coated->layers = layers;
    coated->layer_count = stackup->layer_count + 2;
}

struct scene *drawing_stackup(const struct study_stackup *stackup,
                              const struct drawing_options *options, struct text_setter *setter,
                              struct arena *arena, struct drawing_report *report,
                              struct error *error) {
    struct error *kept = arena_new(arena, 1, struct error, error);
    if (kept == NULL)
        return NULL;
    struct drawing_frame frame = {
        .options = options, .setter = setter, .arena = arena, .error = kept};
    if (stackup->layer_count == 0 || stackup->layer_count > MOST_LAYERS)
        error_set(kept, ERROR_INPUT, "a board of %zu layers, 1 to %d can be drawn",
                  stackup->layer_count, (int)MOST_LAYERS);
    else if (!(total_thickness(stackup) > 0))
        error_set(kept, ERROR_INPUT, "a board without thickness");
    else
        frame.scene = scene_create(options->width, 1, arena, kept);
    if (frame.scene != NULL) {
        struct study_layer layers[MOST_LAYERS];
        struct study_stackup coated;
        coat(stackup, layers, &coated);
        draw(&frame, &coated);
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

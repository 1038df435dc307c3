#include "report/drawing_internal.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const double ARROW = 4.2, ARROW_HALF = 1.3, LINE = 0.5;
static const double OUTSIDE = 9; /* tails of arrows that point inwards */

static struct scene_colour ink(void) {
    return theme_colour(THEME_INK);
}

static void arrow(struct scene *scene, bool vertical, double tip, double at, double direction) {
    double back = tip - direction * ARROW;
    struct scene_segment segments[] = {
        {SCENE_MOVE, {vertical ? at : tip}, {vertical ? tip : at}},
        {SCENE_LINE, {vertical ? at - ARROW_HALF : back}, {vertical ? back : at - ARROW_HALF}},
        {SCENE_LINE, {vertical ? at + ARROW_HALF : back}, {vertical ? back : at + ARROW_HALF}},
        {SCENE_CLOSE, {0}, {0}},
    };
    scene_path(scene, &(struct scene_path){
                          .segments = segments, .count = 4, .filled = true, .fill = ink()});
}

static void line(struct scene *scene, bool vertical, double from, double to, double at) {
    scene_line(scene, vertical ? at : from, vertical ? from : at, vertical ? at : to,
               vertical ? to : at, LINE, ink());
}

void drawing_arrows(struct drawing_frame *frame, bool vertical, double from, double to, double at) {
    bool inside = to - from > 3 * ARROW;
    double low = inside ? from : from - OUTSIDE, high = inside ? to : to + OUTSIDE;
    if (inside) {
        line(frame->scene, vertical, low + ARROW, high - ARROW, at);
    } else {
        line(frame->scene, vertical, low, from - ARROW, at);
        line(frame->scene, vertical, to + ARROW, high, at);
    }
    arrow(frame->scene, vertical, from, at, inside ? -1 : 1);
    arrow(frame->scene, vertical, to, at, inside ? 1 : -1);
}

const char *drawing_dimension_text(struct drawing_frame *frame,
                                   const struct sketch_dimension *dimension) {
    const struct drawing_options *options = frame->options;
    char value[64];
    quantity_print(value, sizeof value, dimension->value, DIMENSION_LENGTH, -4,
                   QUANTITY_TYPOGRAPHIC, options->lengths);
    const char *name = NULL;
    if (options->input_symbol != NULL)
        name = options->input_symbol(dimension->input);
    char *made = arena_print(frame->arena, frame->error, "%s\u00a0%s",
                             name == NULL ? dimension->input : name, value);
    if (made == NULL)
        return "";
    for (char *at = name == NULL ? strchr(made, '_') : NULL; at != NULL; at = strchr(at, '_'))
        *at = ' ';
    return made;
}

/* A horizontal dimension with the room that its text takes. */
struct span {
    const struct sketch_dimension *dimension;
    const char *text;
    double from, to; /* pt, of the dimension */
    double text_x;   /* left edge of the text */
    double text_width;
    double low, high; /* all that it covers in its row */
    size_t row;
};

static int compare_spans(const void *a, const void *b) {
    const struct span *p = a, *q = b;
    double p_width = p->to - p->from, q_width = q->to - q->from;
    if (fabs(p_width - q_width) > 1e-6)
        return p_width < q_width ? -1 : 1;
    return p->from < q->from ? -1 : p->from > q->from;
}

static struct span span_of(struct drawing_frame *frame, const struct sketch_dimension *dimension) {
    struct span span = {.dimension = dimension, .text = drawing_dimension_text(frame, dimension)};
    span.from = drawing_x(frame, dimension->from);
    span.to = drawing_x(frame, dimension->to);
    span.text_width = drawing_width(frame, span.text);
    bool arrows_inside = span.to - span.from > 3 * ARROW;
    bool text_inside = span.text_width + 4 <= span.to - span.from;
    double reach = arrows_inside ? 0 : OUTSIDE;
    span.text_x = (span.from + span.to - span.text_width) / 2;
    if (!text_inside && span.text_x < frame->left)
        span.text_x = frame->left;
    if (!text_inside && span.text_x + span.text_width > frame->right)
        span.text_x = frame->right - span.text_width;
    span.low = fmin(span.from - reach, span.text_x) - 3;
    span.high = fmax(span.to + reach, span.text_x + span.text_width) + 3;
    return span;
}

/* A dimension may not be crossed by the extension lines of one in a higher row, so rows are filled
 * from the narrowest on and a row above takes what overlaps. */
static size_t place_spans(struct drawing_frame *frame, const struct sketch *sketch,
                          struct span *spans, size_t *count) {
    size_t rows = 0;
    *count = 0;
    for (size_t i = 0; i < sketch->dimension_count; i++)
        if (!sketch->dimensions[i].vertical)
            spans[(*count)++] = span_of(frame, &sketch->dimensions[i]);
    qsort(spans, *count, sizeof *spans, compare_spans);
    for (size_t i = 0; i < *count; i++) {
        for (size_t j = 0; j < i; j++)
            if (spans[j].low < spans[i].high && spans[i].low < spans[j].high &&
                spans[j].row + 1 > spans[i].row)
                spans[i].row = spans[j].row + 1;
        if (spans[i].row + 1 > rows)
            rows = spans[i].row + 1;
    }
    return rows;
}

size_t drawing_dimension_rows(struct drawing_frame *frame, const struct sketch *sketch) {
    struct span spans[SKETCH_MOST_DIMENSIONS];
    size_t count = 0;
    return place_spans(frame, sketch, spans, &count);
}

static double column_of(struct drawing_frame *frame, const struct sketch_dimension *dimension) {
    return 16 + drawing_width(frame, drawing_dimension_text(frame, dimension));
}

static double tallest_vertical(const struct sketch *sketch) {
    double tallest = 0;
    for (size_t i = 0; i < sketch->dimension_count; i++)
        if (sketch->dimensions[i].vertical)
            tallest = fmax(tallest, sketch->dimensions[i].value);
    return tallest;
}

/* The first one stands beside the picture always; further ones that are thin against the tallest,
 * or for which the picture would have to give way, are told under it. */
bool drawing_dimension_noted(struct drawing_frame *frame, const struct sketch *sketch,
                             size_t index) {
    const double thin = 0.2, share = 0.45;
    double room = 0, tallest = tallest_vertical(sketch);
    for (size_t i = 0; i <= index; i++) {
        const struct sketch_dimension *dimension = &sketch->dimensions[i];
        if (!dimension->vertical)
            continue;
        double wide = column_of(frame, dimension);
        bool noted = room > 0 && (dimension->value < thin * tallest ||
                                  room + wide > share * frame->options->width);
        if (i == index)
            return noted;
        room += noted ? 0 : wide;
    }
    return false;
}

double drawing_dimension_room(struct drawing_frame *frame, const struct sketch *sketch) {
    double room = 0;
    for (size_t i = 0; i < sketch->dimension_count; i++)
        if (sketch->dimensions[i].vertical && !drawing_dimension_noted(frame, sketch, i))
            room += column_of(frame, &sketch->dimensions[i]);
    return room;
}

static void draw_span(struct drawing_frame *frame, const struct span *span, double surface) {
    double at = surface - 8 - DRAWING_DIMENSION_ROW * (double)span->row;
    double edge = fmin(drawing_y(frame, span->dimension->at), surface) - 1.5;
    struct scene_colour fine = theme_colour(THEME_QUIET);
    scene_line(frame->scene, span->from, edge, span->from, at - 2, 0.35, fine);
    scene_line(frame->scene, span->to, edge, span->to, at - 2, 0.35, fine);
    drawing_arrows(frame, false, span->from, span->to, at);
    /* On white, for where an extension line of a wider dimension passes. */
    scene_rectangle(frame->scene, span->text_x - 1, at - 9.4, span->text_width + 2, 7.4,
                    theme_colour(THEME_PAPER));
    drawing_label(frame, span->text, span->text_x, at - 2.8, SCENE_LEFT);
}

static void draw_vertical(struct drawing_frame *frame, const struct sketch_dimension *dimension,
                          double x) {
    double from = drawing_y(frame, dimension->to), to = drawing_y(frame, dimension->from);
    struct scene_colour fine = theme_colour(THEME_QUIET);
    scene_line(frame->scene, frame->right + 1, from, x + 3, from, 0.35, fine);
    scene_line(frame->scene, frame->right + 1, to, x + 3, to, 0.35, fine);
    drawing_arrows(frame, true, from, to, x);
    drawing_label(frame, drawing_dimension_text(frame, dimension), x + 5, (from + to) / 2 + 2.8,
                  SCENE_LEFT);
}

void drawing_dimensions(struct drawing_frame *frame, const struct sketch *sketch, double surface) {
    struct span spans[SKETCH_MOST_DIMENSIONS];
    size_t count = 0;
    place_spans(frame, sketch, spans, &count);
    for (size_t i = count; i-- > 0;)
        draw_span(frame, &spans[i], surface);
    double x = frame->right + 8;
    for (size_t i = 0; i < sketch->dimension_count; i++) {
        if (!sketch->dimensions[i].vertical || drawing_dimension_noted(frame, sketch, i))
            continue;
        draw_vertical(frame, &sketch->dimensions[i], x);
        x += column_of(frame, &sketch->dimensions[i]);
    }
}

void drawing_scale_bar(struct drawing_frame *frame, double x, double y, double most) {
    double scale = 1, longest = most / frame->scale;
    quantity_axis_unit(longest, DIMENSION_LENGTH, QUANTITY_TYPOGRAPHIC, frame->options->lengths,
                       &scale);
    double decade = pow(10, floor(log10(longest * scale)));
    double mantissa = longest * scale / decade;
    double metres = (mantissa >= 5 ? 5 : mantissa >= 2 ? 2 : 1) * decade / scale;
    double length = metres * frame->scale;
    char text[64];
    quantity_print(text, sizeof text, metres, DIMENSION_LENGTH, -3, QUANTITY_TYPOGRAPHIC,
                   frame->options->lengths);
    struct scene_colour quiet = theme_colour(THEME_QUIET);
    scene_line(frame->scene, x - length, y, x, y, 0.8, quiet);
    scene_line(frame->scene, x - length, y - 2.5, x - length, y + 2.5, 0.8, quiet);
    scene_line(frame->scene, x, y - 2.5, x, y + 2.5, 0.8, quiet);
    drawing_label(frame, text, x - length - 4, y + 2.8, SCENE_RIGHT);
}

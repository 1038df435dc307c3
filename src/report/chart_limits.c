/* Limits: a line with its forbidden side hatched, and a name where it is in nothing's way. */

#include "report/chart_internal.h"

#include <math.h>

static const double HATCH_STEP = 4.5, HATCH_LENGTH = 5;
enum {
    PLACES = 9, /* along a line, on either side, that are tried for its name */
    LIFTS = 6,  /* and so many steps away from it */
};

static void draw_hatch(struct chart_frame *frame, double y, bool below) {
    struct scene_segment segments[512];
    size_t count = 0;
    double side = below ? HATCH_LENGTH : -HATCH_LENGTH;
    for (double x = frame->left; x + HATCH_LENGTH <= frame->right && count + 2 <= 512;
         x += HATCH_STEP) {
        segments[count++] = (struct scene_segment){SCENE_MOVE, {x}, {y}};
        segments[count++] = (struct scene_segment){SCENE_LINE, {x + HATCH_LENGTH}, {y + side}};
    }
    if (count > 0)
        scene_path(frame->scene, &(struct scene_path){.segments = segments,
                                                      .count = count,
                                                      .stroked = true,
                                                      .stroke = theme_colour(THEME_ALARM),
                                                      .width = 0.35});
}

/* ---- names ---- */

/* Where names stand already. */
struct names {
    struct chart_frame *frame;
    struct chart_box boxes[CHART_MOST_MARKS];
    size_t count;
};

static bool overlap(struct chart_box a, struct chart_box b) {
    return a.x < b.x + b.width && b.x < a.x + a.width && a.y < b.y + b.height &&
           b.y < a.y + a.height;
}

/* Inside the plot and on no other name. */
static bool is_possible(const struct names *names, struct chart_box box) {
    const struct chart_frame *frame = names->frame;
    if (box.y < frame->top || box.y + box.height > frame->bottom)
        return false;
    for (size_t i = 0; i < names->count; i++)
        if (overlap(box, names->boxes[i]))
            return false;
    return true;
}

static struct scene_text name_text(const struct names *names, const char *label) {
    struct chart_frame *frame = names->frame;
    struct scene_text text = {.markup = label,
                              .style = theme_style(THEME_LABEL),
                              .width = frame->right - frame->left - 10};
    text.style.colour = theme_colour(THEME_ALARM);
    text.markup = text_shorten(frame->setter, &text, 1, frame->arena, frame->error);
    text.width = 0;
    return text;
}

/* `ground`: curves and hatches below the name are taken out of its way. */
static void set_name(struct names *names, struct scene_text text, struct chart_box box,
                     bool ground) {
    struct scene_colour white = theme_colour(THEME_PAPER);
    white.alpha = 0.85;
    if (ground)
        scene_rectangle(names->frame->scene, box.x - 1.5, box.y, box.width + 3, box.height, white);
    if (names->count < CHART_MOST_MARKS)
        names->boxes[names->count++] = box;
    text.x = box.x;
    text.y = box.y + 0.82 * box.height;
    scene_text(names->frame->scene, &text);
}

/* The k-th place for the name of a limit at y: places along the line, on its forbidden and its
 * allowed side, then further from it. */
static struct chart_box place_at(const struct chart_frame *frame, double y, bool below,
                                 double width, double height, int k) {
    double room = fmax(0, frame->right - frame->left - width - 10);
    double lift = (height + 1.5) * (double)(k / (2 * PLACES));
    double down = y + (below ? HATCH_LENGTH + 1.5 : 2.5) + lift;
    double up = y - (below ? 2.5 : HATCH_LENGTH + 1.5) - height - lift;
    bool forbidden = k % 2 == 0;
    return (struct chart_box){frame->left + 5 + room * (k / 2 % PLACES) / (PLACES - 1),
                              forbidden == below ? down : up, width, height};
}

/* The first place that nothing crosses; else the first possible one, on a white ground. */
static void name_limit(struct names *names, const char *label, double y, bool below) {
    struct chart_frame *frame = names->frame;
    struct scene_text text = name_text(names, label);
    double width = text_width(frame->setter, text.markup, text.style, frame->error);
    struct chart_box chosen = place_at(frame, y, below, width, text.style.size, 0);
    bool possible = false;
    for (int k = 0; k < 2 * PLACES * LIFTS; k++) {
        struct chart_box box = place_at(frame, y, below, width, text.style.size, k);
        if (!is_possible(names, box))
            continue;
        if (!chart_crosses(frame, box)) {
            set_name(names, text, box, false);
            return;
        }
        if (!possible)
            chosen = box;
        possible = true;
    }
    set_name(names, text, chosen, true);
}

/* A limit beyond the plot is named at the edge that it lies behind, next to those that have been
 * named there. */
static void name_beyond(struct names *names, const char *label, bool above) {
    struct chart_frame *frame = names->frame;
    char *markup =
        arena_print(frame->arena, frame->error, "%s %s", above ? "\u2191" : "\u2193", label);
    if (markup == NULL)
        return;
    struct scene_text text = name_text(names, markup);
    double height = text.style.size, step = above ? height + 1.5 : -height - 1.5;
    struct chart_box box = {
        frame->left + 5, above ? frame->top + 2.5 : frame->bottom - 2.5 - height,
        text_width(frame->setter, text.markup, text.style, frame->error), height};
    for (int k = 0; k < LIFTS && !is_possible(names, box); k++)
        box.y += step;
    set_name(names, text, box, chart_crosses(frame, box));
}

static bool is_beyond(const struct chart_frame *frame, double y) {
    return y < frame->top - 0.01 || y > frame->bottom + 0.01;
}

void chart_draw_limits(struct chart_frame *frame) {
    for (size_t i = 0; i < frame->chart->limit_count; i++) {
        const struct chart_limit *limit = &frame->chart->limits[i];
        double y = chart_y(frame, limit->value);
        if (!isfinite(y) || is_beyond(frame, y))
            continue;
        scene_line(frame->scene, frame->left, y, frame->right, y, 0.9, theme_colour(THEME_ALARM));
        scene_clip(frame->scene, frame->left, frame->top, frame->right - frame->left,
                   frame->bottom - frame->top);
        draw_hatch(frame, y, limit->below);
        scene_end(frame->scene);
    }
}

void chart_name_limits(struct chart_frame *frame) {
    struct names names = {.frame = frame};
    for (size_t i = 0; i < frame->chart->limit_count; i++) {
        const struct chart_limit *limit = &frame->chart->limits[i];
        const char *label = limit->label == NULL ? "limit" : limit->label;
        double y = chart_y(frame, limit->value);
        if (!isfinite(y))
            continue;
        if (is_beyond(frame, y))
            name_beyond(&names, label, y < frame->top);
        else
            name_limit(&names, label, y, limit->below);
    }
}

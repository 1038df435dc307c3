#ifndef GROUNDRULES_SCENE_H
#define GROUNDRULES_SCENE_H

#include "groundrules/arena.h"

#include <stddef.h>

/* A page or a figure as data: points (1/72 inch), y down, origin top left.  Built by layout,
 * painted to PDF, SVG or PNG by one painter, dumped as text for goldens by one dumper.  Nothing
 * here is cairo's or Pango's. */

struct scene_colour {
    double red, green, blue, alpha;
};

enum scene_kind {
    SCENE_PATH,
    SCENE_TEXT,
    SCENE_CLIP,  /* clips to a rectangle until the matching SCENE_END */
    SCENE_GROUP, /* a named group (figure, table) until the matching SCENE_END */
    SCENE_END,
    SCENE_LINK,        /* a rectangle that leads to a destination */
    SCENE_DESTINATION, /* a named place */
};

enum scene_verb { SCENE_MOVE, SCENE_LINE, SCENE_CURVE, SCENE_CLOSE };

struct scene_segment {
    enum scene_verb verb;
    double x[3], y[3]; /* MOVE, LINE: [0]; CURVE: two controls and the end */
};

struct scene_path {
    const struct scene_segment *segments;
    size_t count;
    bool filled, stroked;
    struct scene_colour fill, stroke;
    double width; /* pt */
    double dashes[6];
    size_t dash_count;
    bool round; /* caps and joins */
};

enum scene_weight { SCENE_REGULAR, SCENE_MEDIUM, SCENE_BOLD };
enum scene_align { SCENE_LEFT, SCENE_CENTRE, SCENE_RIGHT };

struct scene_style {
    double size; /* pt */
    enum scene_weight weight;
    bool italic;
    struct scene_colour colour;
};

/* Text set by the text layer: lines already broken; `markup` may hold <sub>, <sup>, <b>, <i>. */
struct scene_text {
    const char *markup;
    struct scene_style style;
    double x, y; /* baseline of the first line, at the alignment point */
    enum scene_align align;
    double width;   /* > 0: wrapped to this width; 0: one line */
    double leading; /* pt between baselines; 0 = the standard */
    double turn;    /* degrees clockwise around (x, y): -90 for a vertical axis title */
};

struct scene_item {
    enum scene_kind kind;
    struct scene_path path;
    struct scene_text text;
    double x, y, width, height; /* CLIP, LINK */
    const char *name;           /* GROUP, LINK target, DESTINATION */
};

struct scene {
    double width, height; /* pt */
    struct scene_item *items;
    size_t count, capacity;
    struct arena *arena; /* owns items and copies of all text and segments */
    struct error *error; /* the first failure sticks; later calls do nothing */
};

struct scene *scene_create(double width, double height, struct arena *arena, struct error *error);

/* Everything is copied.  Each returns false once the scene has failed. */
bool scene_path(struct scene *scene, const struct scene_path *path);
bool scene_text(struct scene *scene, const struct scene_text *text);
bool scene_rectangle(struct scene *scene, double x, double y, double width, double height,
                     struct scene_colour fill);
bool scene_line(struct scene *scene, double x0, double y0, double x1, double y1, double width,
                struct scene_colour colour);
bool scene_clip(struct scene *scene, double x, double y, double width, double height);
bool scene_group(struct scene *scene, const char *name);
bool scene_end(struct scene *scene);
bool scene_link(struct scene *scene, double x, double y, double width, double height,
                const char *destination);
bool scene_destination(struct scene *scene, const char *name, double x, double y);
/* Appends all items of `part`, moved by (x, y): a chart on a page. */
bool scene_place(struct scene *scene, const struct scene *part, double x, double y);

#endif

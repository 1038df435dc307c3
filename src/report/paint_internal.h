#ifndef REPORT_PAINT_INTERNAL_H
#define REPORT_PAINT_INTERNAL_H

#include "report/paint.h"

#include <cairo.h>

/* What paint.c, paint_pdf.c and paint_svg.c share. */

/* Bytes growing in an arena.  cairo 1.16 aborts or forgets when its write callback fails, so the
 * callback always says yes and the failure is kept here. */
struct paint_sink {
    unsigned char *bytes;
    size_t length, capacity;
    struct arena *arena;
    struct error *error;
    bool failed;
};

void paint_sink_add(struct paint_sink *sink, const void *bytes, size_t length);
cairo_status_t paint_sink_write(void *sink, const unsigned char *bytes, unsigned length);

/* The scene has not failed, groups and clips are balanced, numbers are finite and within 1e6 pt. */
bool paint_check_scene(const struct scene *scene, struct error *error);

bool paint_cairo_ok(cairo_status_t status, struct error *error);

/* What a surface does with links and destinations; NULL functions do nothing. */
struct paint_places {
    void (*link)(cairo_t *cairo, const struct scene_item *item);
    void (*destination)(cairo_t *cairo, const struct scene_item *item);
};

bool paint_scene(struct text_setter *setter, const struct scene *scene, cairo_t *cairo,
                 const struct paint_places *places, struct error *error);

#endif

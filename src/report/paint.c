#include "report/paint_internal.h"
#include "report/text_layout.h"

#include <assert.h>
#include <math.h>
#include <pango/pangocairo.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

static const double FARTHEST = 1e6; /* pt; cairo's fixed point ends at 8e6 */
enum { MOST_PIXELS = 20000 };

void paint_sink_add(struct paint_sink *sink, const void *bytes, size_t length) {
    if (sink->failed)
        return;
    if (length > sink->capacity - sink->length) {
        size_t capacity = 2 * (sink->capacity + length) + (1 << 14);
        unsigned char *grown = arena_new(sink->arena, capacity, unsigned char, sink->error);
        if (grown == NULL) {
            sink->failed = true;
            return;
        }
        if (sink->length > 0)
            memcpy(grown, sink->bytes, sink->length);
        sink->bytes = grown;
        sink->capacity = capacity;
    }
    memcpy(sink->bytes + sink->length, bytes, length);
    sink->length += length;
}

cairo_status_t paint_sink_write(void *sink, const unsigned char *bytes, unsigned length) {
    paint_sink_add(sink, bytes, length);
    return CAIRO_STATUS_SUCCESS;
}

bool paint_cairo_ok(cairo_status_t status, struct error *error) {
    if (status == CAIRO_STATUS_SUCCESS)
        return true;
    return error_set(error, status == CAIRO_STATUS_NO_MEMORY ? ERROR_MEMORY : ERROR_SYSTEM,
                     "drawing failed: %s", cairo_status_to_string(status));
}

static bool reachable(double value) {
    return isfinite(value) && fabs(value) <= FARTHEST;
}

static bool path_is_sound(const struct scene_path *path) {
    double dashes = 0;
    for (size_t i = 0; i < path->dash_count; i++) {
        if (!(path->dashes[i] >= 0))
            return false;
        dashes += path->dashes[i];
    }
    if ((path->dash_count > 0 && !(dashes > 0)) || !reachable(path->width) || path->width < 0)
        return false;
    for (size_t i = 0; i < path->count; i++)
        for (size_t k = 0; k < 3; k++)
            if (!reachable(path->segments[i].x[k]) || !reachable(path->segments[i].y[k]))
                return false;
    return true;
}

static bool item_is_sound(const struct scene_item *item) {
    const struct scene_text *text = &item->text;
    if (item->kind == SCENE_PATH)
        return path_is_sound(&item->path);
    if (item->kind == SCENE_TEXT)
        return reachable(text->x) && reachable(text->y) && reachable(text->width) &&
               reachable(text->leading) && isfinite(text->turn) && text->style.size > 0 &&
               reachable(text->style.size);
    return reachable(item->x) && reachable(item->y) && reachable(item->width) &&
           reachable(item->height);
}

bool paint_check_scene(const struct scene *scene, struct error *error) {
    if (scene->error != NULL && scene->error->kind != ERROR_NONE) {
        error_set(error, scene->error->kind, "%s", scene->error->message);
        return false;
    }
    if (!(scene->width > 0) || !(scene->height > 0) || !reachable(scene->width) ||
        !reachable(scene->height))
        return error_set(error, ERROR_INTERNAL, "a scene of %g x %g pt", scene->width,
                         scene->height);
    size_t depth = 0;
    for (size_t i = 0; i < scene->count; i++) {
        const struct scene_item *item = &scene->items[i];
        if (!item_is_sound(item))
            return error_set(error, ERROR_INTERNAL,
                             "item %zu of the scene holds a number that cannot be drawn", i);
        if (item->kind == SCENE_GROUP || item->kind == SCENE_CLIP)
            depth++;
        if (item->kind == SCENE_END && depth-- == 0)
            return error_set(error, ERROR_INTERNAL, "item %zu of the scene ends nothing", i);
    }
    return depth == 0 ||
           error_set(error, ERROR_INTERNAL, "%zu groups of the scene are not ended", depth);
}

static void use_colour(cairo_t *cairo, struct scene_colour colour) {
    if (colour.alpha >= 1)
        cairo_set_source_rgb(cairo, colour.red, colour.green, colour.blue);
    else
        cairo_set_source_rgba(cairo, colour.red, colour.green, colour.blue, colour.alpha);
}

static void trace_path(cairo_t *cairo, const struct scene_path *path) {
    cairo_new_path(cairo);
    for (size_t i = 0; i < path->count; i++) {
        const struct scene_segment *s = &path->segments[i];
        switch (s->verb) {
        case SCENE_MOVE:
            cairo_move_to(cairo, s->x[0], s->y[0]);
            break;
        case SCENE_LINE:
            cairo_line_to(cairo, s->x[0], s->y[0]);
            break;
        case SCENE_CURVE:
            cairo_curve_to(cairo, s->x[0], s->y[0], s->x[1], s->y[1], s->x[2], s->y[2]);
            break;
        case SCENE_CLOSE:
            cairo_close_path(cairo);
            break;
        }
    }
}

static void draw_path(cairo_t *cairo, const struct scene_path *path) {
    trace_path(cairo, path);
    if (path->filled) {
        use_colour(cairo, path->fill);
        cairo_fill_preserve(cairo);
    }
    if (path->stroked) {
        use_colour(cairo, path->stroke);
        cairo_set_line_width(cairo, path->width);
        cairo_set_dash(cairo, path->dashes, (int)path->dash_count, 0);
        cairo_set_line_cap(cairo, path->round ? CAIRO_LINE_CAP_ROUND : CAIRO_LINE_CAP_BUTT);
        cairo_set_line_join(cairo, path->round ? CAIRO_LINE_JOIN_ROUND : CAIRO_LINE_JOIN_MITER);
        cairo_stroke_preserve(cairo);
    }
    cairo_new_path(cairo);
}

static bool draw_text(struct text_setter *setter, cairo_t *cairo, const struct scene_text *text,
                      struct error *error) {
    PangoLayout *layout = text_layout_create(setter, text, error);
    if (layout == NULL)
        return false;
    cairo_save(cairo);
    cairo_translate(cairo, text->x, text->y);
    if (text->turn != 0)
        cairo_rotate(cairo, text->turn * acos(-1.0) / 180);
    use_colour(cairo, text->style.colour);
    for (int i = 0; i < pango_layout_get_line_count(layout); i++) {
        double x = 0, y = 0;
        text_layout_origin(layout, text, i, &x, &y);
        cairo_move_to(cairo, x, y);
        pango_cairo_show_layout_line(cairo, pango_layout_get_line_readonly(layout, i));
    }
    cairo_restore(cairo);
    g_object_unref(layout);
    return true;
}

bool paint_scene(struct text_setter *setter, const struct scene *scene, cairo_t *cairo,
                 const struct paint_places *places, struct error *error) {
    for (size_t i = 0; i < scene->count; i++) {
        const struct scene_item *item = &scene->items[i];
        switch (item->kind) {
        case SCENE_PATH:
            draw_path(cairo, &item->path);
            break;
        case SCENE_TEXT:
            if (!draw_text(setter, cairo, &item->text, error))
                return false;
            break;
        case SCENE_CLIP:
            cairo_save(cairo);
            cairo_rectangle(cairo, item->x, item->y, item->width, item->height);
            cairo_clip(cairo);
            break;
        case SCENE_GROUP:
            cairo_save(cairo);
            break;
        case SCENE_END:
            cairo_restore(cairo);
            break;
        case SCENE_LINK:
            if (places->link != NULL)
                places->link(cairo, item);
            break;
        case SCENE_DESTINATION:
            if (places->destination != NULL)
                places->destination(cairo, item);
            break;
        }
    }
    return paint_cairo_ok(cairo_status(cairo), error);
}

bool paint_png(struct text_setter *setter, const struct scene *scene, double scale,
               struct arena *arena, struct paint_bytes *bytes, struct error *error) {
    if (!paint_check_scene(scene, error))
        return false;
    double width = ceil(scene->width * scale), height = ceil(scene->height * scale);
    if (!(width >= 1 && height >= 1 && width <= MOST_PIXELS && height <= MOST_PIXELS))
        return error_set(error, ERROR_INPUT, "an image of %g x %g pixels, allowed are 1 to %d",
                         width, height, MOST_PIXELS);
    struct paint_sink sink = {.arena = arena, .error = error};
    struct paint_places nowhere = {0};
    cairo_surface_t *surface =
        cairo_image_surface_create(CAIRO_FORMAT_RGB24, (int)width, (int)height);
    cairo_t *cairo = cairo_create(surface);
    cairo_set_source_rgb(cairo, 1, 1, 1);
    cairo_paint(cairo);
    cairo_scale(cairo, scale, scale);
    bool ok = paint_scene(setter, scene, cairo, &nowhere, error) &&
              paint_cairo_ok(cairo_surface_status(surface), error) &&
              paint_cairo_ok(cairo_surface_write_to_png_stream(surface, paint_sink_write, &sink),
                             error) &&
              !sink.failed;
    cairo_destroy(cairo);
    cairo_surface_destroy(surface);
    if (ok)
        *bytes = (struct paint_bytes){sink.bytes, sink.length};
    return ok;
}

static bool created_from_epoch(const char *text, char created[24], struct error *error) {
    char *end = NULL;
    long long seconds = strtoll(text, &end, 10);
    time_t moment = (time_t)seconds;
    struct tm tm = {0};
    if (end == text || *end != '\0' || seconds < 0 || seconds > 253402300799LL ||
        gmtime_r(&moment, &tm) == NULL || strftime(created, 24, "%Y-%m-%dT%H:%M:%SZ", &tm) == 0)
        return error_set(error, ERROR_INPUT,
                         "SOURCE_DATE_EPOCH is \"%s\", must be seconds since 1970", text);
    return true;
}

static bool is_date(const char *date) {
    static const char FORM[] = "dddd-dd-dd";
    for (size_t i = 0; i < sizeof FORM; i++) {
        bool digit = date[i] >= '0' && date[i] <= '9';
        if (FORM[i] == 'd' ? !digit : date[i] != FORM[i])
            return false;
    }
    static const int DAYS[] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    int year = 0, month = (date[5] - '0') * 10 + date[6] - '0';
    int day = (date[8] - '0') * 10 + date[9] - '0';
    for (size_t i = 0; i < 4; i++)
        year = 10 * year + date[i] - '0';
    bool leap = (year % 4 == 0 && year % 100 != 0) || year % 400 == 0;
    return month >= 1 && month <= 12 && day >= 1 &&
           day <= DAYS[month - 1] + (month == 2 && leap ? 1 : 0);
}

bool paint_created(const char *date, char created[24], struct error *error) {
    const char *epoch = getenv("SOURCE_DATE_EPOCH");
    if (epoch != NULL && *epoch != '\0')
        return created_from_epoch(epoch, created, error);
    if (date == NULL || !is_date(date))
        return error_set(error, ERROR_INPUT, "the date is \"%s\", must be like 2026-03-01",
                         date == NULL ? "" : date);
    snprintf(created, 24, "%.10sT00:00:00Z", date);
    return true;
}

#include "report/paint_internal.h"
#include "report/text_layout.h"

#include <math.h>
#include <pango/pangocairo.h>
#include <pango/pangofc-font.h>
#include <stdio.h>
#include <string.h>

/* Our own writer instead of cairo's: cairo's SVG counts identifiers through the whole process and
 * turns text into glyph shapes that nobody can search.  Here each glyph is defined once and used by
 * name, and a transparent <text> of the same width lies on top. */

static const double UNITS = 1000; /* glyph outlines: units per em */

struct glyph {
    const char *face; /* path of the font file, owned by the pattern of a font that stays loaded */
    PangoGlyph glyph;
};

enum { MOST_GLYPHS = 4096 };

struct svg {
    struct text_setter *setter;
    struct paint_sink definitions, body;
    struct glyph *glyphs;
    size_t glyph_count, clip_count;
    cairo_surface_t *surface; /* only there to ask a cairo_t for outlines */
    cairo_t *cairo;
    struct arena *arena;
    struct error *error;
};

__attribute__((format(printf, 2, 3))) static void put(struct paint_sink *sink, const char *format,
                                                      ...) {
    char text[1024];
    va_list arguments;
    va_start(arguments, format);
    int length = vsnprintf(text, sizeof text, format, arguments);
    va_end(arguments);
    if (length > 0)
        paint_sink_add(sink, text, (size_t)length < sizeof text ? (size_t)length : sizeof text - 1);
}

static void put_text(struct paint_sink *sink, const char *text, size_t length) {
    for (size_t i = 0; i < length; i++) {
        unsigned char letter = (unsigned char)text[i];
        if (letter == '&')
            put(sink, "&amp;");
        else if (letter == '<')
            put(sink, "&lt;");
        else if (letter == '>')
            put(sink, "&gt;");
        else if (letter == '"')
            put(sink, "&quot;");
        else if (letter >= ' ')
            paint_sink_add(sink, &text[i], 1);
        else
            put(sink, " ");
    }
}

/* Rounded to `decimals`, no trailing zeros, a point whatever the locale. */
static void put_number(struct paint_sink *sink, double value, int decimals) {
    char text[64];
    double rounding = pow(10, decimals), whole = round(value * rounding);
    if (whole == 0)
        whole = 0; /* no "-0" */
    g_ascii_formatd(text, sizeof text,
                    decimals == 2   ? "%.2f"
                    : decimals == 4 ? "%.4f"
                                    : "%.0f",
                    whole / rounding);
    size_t length = strlen(text);
    if (strchr(text, '.') != NULL) {
        while (text[length - 1] == '0')
            length--;
        if (text[length - 1] == '.')
            length--;
    }
    paint_sink_add(sink, text, length);
}

static void put_attribute(struct paint_sink *sink, const char *name, double value) {
    put(sink, " %s=\"", name);
    put_number(sink, value, 2);
    put(sink, "\"");
}

static void put_colour(struct paint_sink *sink, const char *name, struct scene_colour colour) {
    put(sink, " %s=\"#%02x%02x%02x\"", name, (unsigned)lround(colour.red * 255),
        (unsigned)lround(colour.green * 255), (unsigned)lround(colour.blue * 255));
    if (colour.alpha < 1) {
        char opacity[40];
        snprintf(opacity, sizeof opacity, "%s-opacity", name);
        put_attribute(sink, opacity, colour.alpha);
    }
}

static void write_path(struct svg *svg, const struct scene_path *path) {
    static const char LETTERS[] = {'M', 'L', 'C', 'Z'};
    struct paint_sink *to = &svg->body;
    put(to, "<path d=\"");
    for (size_t i = 0; i < path->count; i++) {
        const struct scene_segment *segment = &path->segments[i];
        put(to, "%c", LETTERS[segment->verb]);
        size_t points = segment->verb == SCENE_CURVE ? 3 : segment->verb == SCENE_CLOSE ? 0 : 1;
        for (size_t k = 0; k < points; k++) {
            put(to, "%s", k > 0 ? " " : "");
            put_number(to, segment->x[k], 2);
            put(to, " ");
            put_number(to, segment->y[k], 2);
        }
    }
    put(to, "\"");
    if (path->filled)
        put_colour(to, "fill", path->fill);
    else
        put(to, " fill=\"none\"");
    if (path->stroked) {
        put_colour(to, "stroke", path->stroke);
        put_attribute(to, "stroke-width", path->width);
        for (size_t i = 0; i < path->dash_count; i++) {
            put(to, "%s", i == 0 ? " stroke-dasharray=\"" : " ");
            put_number(to, path->dashes[i], 2);
        }
        put(to, "%s", path->dash_count > 0 ? "\"" : "");
        if (path->round)
            put(to, " stroke-linecap=\"round\" stroke-linejoin=\"round\"");
    }
    put(to, "/>\n");
}

static void define_glyph(struct svg *svg, cairo_font_face_t *face, size_t number,
                         PangoGlyph glyph) {
    static const char LETTERS[] = {'M', 'L', 'C', 'Z'}; /* in the order of cairo_path_data_type_t */
    cairo_glyph_t shape = {.index = glyph};
    cairo_new_path(svg->cairo);
    cairo_set_font_face(svg->cairo, face);
    cairo_set_font_size(svg->cairo, UNITS);
    cairo_glyph_path(svg->cairo, &shape, 1);
    cairo_path_t *path = cairo_copy_path(svg->cairo);
    put(&svg->definitions, "<path id=\"g%zu\" d=\"", number);
    for (int i = 0; i < path->num_data; i += path->data[i].header.length) {
        const cairo_path_data_t *data = &path->data[i];
        put(&svg->definitions, "%c", LETTERS[data->header.type]);
        for (int k = 1; k < data->header.length; k++) {
            put(&svg->definitions, "%s", k > 1 ? " " : "");
            put_number(&svg->definitions, data[k].point.x, 0);
            put(&svg->definitions, " ");
            put_number(&svg->definitions, data[k].point.y, 0);
        }
    }
    put(&svg->definitions, "\"/>\n");
    cairo_path_destroy(path);
}

static size_t glyph_number(struct svg *svg, PangoFont *font, PangoGlyph glyph) {
    FcChar8 *file = NULL;
    FcPattern *pattern = pango_fc_font_get_pattern(PANGO_FC_FONT(font));
    if (FcPatternGetString(pattern, FC_FILE, 0, &file) != FcResultMatch)
        file = (FcChar8 *)"";
    for (size_t i = 0; i < svg->glyph_count; i++)
        if (svg->glyphs[i].glyph == glyph && strcmp(svg->glyphs[i].face, (char *)file) == 0)
            return i + 1;
    if (svg->glyph_count == MOST_GLYPHS) {
        error_set(svg->error, ERROR_INTERNAL, "a figure with too many different glyphs");
        return 0;
    }
    const char *face = arena_copy(svg->arena, (char *)file, svg->error);
    if (face == NULL)
        return 0;
    svg->glyphs[svg->glyph_count++] = (struct glyph){face, glyph};
    cairo_scaled_font_t *scaled = pango_cairo_font_get_scaled_font(PANGO_CAIRO_FONT(font));
    define_glyph(svg, cairo_scaled_font_get_font_face(scaled), svg->glyph_count, glyph);
    return svg->glyph_count;
}

/* One run of glyphs of one font; x and y in pt; returns the run's width. */
static double write_run(struct svg *svg, const PangoGlyphItem *run, double x, double y) {
    PangoFont *font = run->item->analysis.font;
    cairo_matrix_t matrix;
    cairo_scaled_font_get_font_matrix(pango_cairo_font_get_scaled_font(PANGO_CAIRO_FONT(font)),
                                      &matrix);
    double scale = matrix.xx / UNITS;
    int advance = run->start_x_offset;
    y -= (double)run->y_offset / PANGO_SCALE;
    put(&svg->body, "<g transform=\"translate(");
    put_number(&svg->body, x, 2);
    put(&svg->body, " ");
    put_number(&svg->body, y, 2);
    put(&svg->body, ") scale(");
    put_number(&svg->body, scale, 4);
    put(&svg->body, ")\">");
    for (int i = 0; i < run->glyphs->num_glyphs; i++) {
        const PangoGlyphInfo *info = &run->glyphs->glyphs[i];
        if (info->glyph != PANGO_GLYPH_EMPTY && !(info->glyph & PANGO_GLYPH_UNKNOWN_FLAG)) {
            size_t number = glyph_number(svg, font, info->glyph);
            put(&svg->body, "<use xlink:href=\"#g%zu\"", number);
            put_attribute(&svg->body, "x",
                          (double)(advance + info->geometry.x_offset) / PANGO_SCALE / scale);
            if (info->geometry.y_offset != 0)
                put_attribute(&svg->body, "y",
                              (double)info->geometry.y_offset / PANGO_SCALE / scale);
            put(&svg->body, "/>");
        }
        advance += info->geometry.width;
    }
    put(&svg->body, "</g>");
    return (double)(advance + run->end_x_offset) / PANGO_SCALE;
}

static void write_line(struct svg *svg, PangoLayout *layout, const struct scene_text *text,
                       int index) {
    double x = 0, y = 0;
    text_layout_origin(layout, text, index, &x, &y);
    PangoLayoutLine *line = pango_layout_get_line_readonly(layout, index);
    double at = x;
    for (GSList *run = line->runs; run != NULL; run = run->next)
        at += write_run(svg, run->data, at, y);
    put(&svg->body, "<text");
    put_attribute(&svg->body, "x", x);
    put_attribute(&svg->body, "y", y);
    put_attribute(&svg->body, "font-size", text->style.size);
    if (at > x)
        put_attribute(&svg->body, "textLength", at - x);
    put(&svg->body, " lengthAdjust=\"spacingAndGlyphs\" fill-opacity=\"0\">");
    put_text(&svg->body, pango_layout_get_text(layout) + line->start_index, (size_t)line->length);
    put(&svg->body, "</text>\n");
}

static bool write_text(struct svg *svg, const struct scene_text *text) {
    PangoLayout *layout = text_layout_create(svg->setter, text, svg->error);
    if (layout == NULL)
        return false;
    put(&svg->body, "<g transform=\"translate(");
    put_number(&svg->body, text->x, 2);
    put(&svg->body, " ");
    put_number(&svg->body, text->y, 2);
    put(&svg->body, ")");
    if (text->turn != 0) {
        put(&svg->body, " rotate(");
        put_number(&svg->body, text->turn, 2);
        put(&svg->body, ")");
    }
    put(&svg->body, "\"");
    put_colour(&svg->body, "fill", text->style.colour);
    put(&svg->body, ">");
    for (int i = 0; i < pango_layout_get_line_count(layout); i++)
        write_line(svg, layout, text, i);
    put(&svg->body, "</g>\n");
    g_object_unref(layout);
    return true;
}

static void write_clip(struct svg *svg, const struct scene_item *item) {
    svg->clip_count++;
    put(&svg->definitions, "<clipPath id=\"c%zu\"><rect", svg->clip_count);
    put_attribute(&svg->definitions, "x", item->x);
    put_attribute(&svg->definitions, "y", item->y);
    put_attribute(&svg->definitions, "width", fmax(item->width, 0));
    put_attribute(&svg->definitions, "height", fmax(item->height, 0));
    put(&svg->definitions, "/></clipPath>\n");
    put(&svg->body, "<g clip-path=\"url(#c%zu)\">\n", svg->clip_count);
}

static bool write_item(struct svg *svg, const struct scene_item *item) {
    switch (item->kind) {
    case SCENE_PATH:
        write_path(svg, &item->path);
        break;
    case SCENE_TEXT:
        return write_text(svg, &item->text);
    case SCENE_CLIP:
        write_clip(svg, item);
        break;
    case SCENE_GROUP:
        put(&svg->body, "<g class=\"");
        if (item->name != NULL)
            put_text(&svg->body, item->name, strlen(item->name));
        put(&svg->body, "\">\n");
        break;
    case SCENE_END:
        put(&svg->body, "</g>\n");
        break;
    case SCENE_LINK:
    case SCENE_DESTINATION:
        break;
    }
    return true;
}

static void assemble(const struct svg *svg, const struct scene *scene, const char *title,
                     struct paint_sink *whole) {
    put(whole, "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n"
               "<svg xmlns=\"http://www.w3.org/2000/svg\""
               " xmlns:xlink=\"http://www.w3.org/1999/xlink\" version=\"1.1\" width=\"");
    put_number(whole, scene->width, 2);
    put(whole, "pt\" height=\"");
    put_number(whole, scene->height, 2);
    put(whole, "pt\" viewBox=\"0 0 ");
    put_number(whole, scene->width, 2);
    put(whole, " ");
    put_number(whole, scene->height, 2);
    put(whole, "\" font-family=\"Lato, sans-serif\" role=\"img\">\n<title>");
    put_text(whole, title, strlen(title));
    put(whole, "</title>\n<defs>\n");
    paint_sink_add(whole, svg->definitions.bytes, svg->definitions.length);
    put(whole, "</defs>\n<rect width=\"100%%\" height=\"100%%\" fill=\"#ffffff\"/>\n");
    paint_sink_add(whole, svg->body.bytes, svg->body.length);
    put(whole, "</svg>\n");
}

bool paint_svg(struct text_setter *setter, const struct scene *scene, const char *title,
               struct arena *arena, struct paint_bytes *bytes, struct error *error) {
    struct error kept = {0};
    struct svg svg = {.setter = setter, .arena = arena, .error = &kept};
    svg.definitions = svg.body = (struct paint_sink){.arena = arena, .error = &kept};
    struct paint_sink whole = svg.body;
    bool ok = paint_check_scene(scene, &kept);
    svg.glyphs = ok ? arena_new(arena, MOST_GLYPHS, struct glyph, &kept) : NULL;
    if (svg.glyphs == NULL)
        return error_set(error, kept.kind, "%s", kept.message);
    svg.surface = cairo_image_surface_create(CAIRO_FORMAT_A8, 1, 1);
    svg.cairo = cairo_create(svg.surface);
    cairo_font_options_t *options = cairo_font_options_create();
    cairo_font_options_set_hint_style(options, CAIRO_HINT_STYLE_NONE);
    cairo_set_font_options(svg.cairo, options);
    cairo_font_options_destroy(options);
    for (size_t i = 0; ok && i < scene->count; i++)
        ok = write_item(&svg, &scene->items[i]);
    if (ok)
        assemble(&svg, scene, title, &whole);
    paint_cairo_ok(cairo_status(svg.cairo), &kept);
    cairo_destroy(svg.cairo);
    cairo_surface_destroy(svg.surface);
    if (kept.kind != ERROR_NONE)
        return error_set(error, kept.kind, "%s", kept.message);
    *bytes = (struct paint_bytes){whole.bytes, whole.length};
    return true;
}

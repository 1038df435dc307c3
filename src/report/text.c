#include "report/text_layout.h"

#include "fonts_configuration.h"

#include <assert.h>
#include <fontconfig/fontconfig.h>
#include <math.h>
#include <pango/pangocairo.h>
#include <pango/pangofc-fontmap.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char FAMILY[] = "Lato";
static const char *const FACES[] = {
    "Lato-Regular.ttf", "Lato-Italic.ttf",       "Lato-Medium.ttf",
    "Lato-Bold.ttf",    "Lato-MediumItalic.ttf", "Lato-BoldItalic.ttf",
};

struct text_setter {
    FcConfig *configuration;
    PangoFontMap *map;
    PangoContext *context;
};

/* Named files instead of scanned folders: no font cache is read or written, and a face that
 * somebody adds to the folder changes nothing. */
static bool add_face(FcConfig *faces, FcConfig *folders, const char *face, struct error *error) {
    FcStrList *list = FcConfigGetFontDirs(folders);
    if (list == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    bool found = false;
    for (const FcChar8 *folder = NULL; !found && (folder = FcStrListNext(list)) != NULL;) {
        char path[4096];
        int length = snprintf(path, sizeof path, "%s/%s", (const char *)folder, face);
        if (length > 0 && (size_t)length < sizeof path)
            found = FcConfigAppFontAddFile(faces, (const FcChar8 *)path) == FcTrue;
    }
    FcStrListDone(list);
    if (!found)
        return error_set(error, ERROR_SYSTEM,
                         "the font file %s is missing: install the Debian package fonts-lato",
                         face);
    return true;
}

/* The configuration only says which folders to look into; the one in use holds the faces and no
 * folder, so fontconfig has nothing to scan. */
static bool load_faces(struct text_setter *setter, const char *configuration, struct error *error) {
    bool ok = false;
    FcConfig *folders = FcConfigCreate();
    setter->configuration = FcConfigCreate();
    if (folders == NULL || setter->configuration == NULL) {
        error_set(error, ERROR_MEMORY, "out of memory");
        goto out;
    }
    if (!FcConfigParseAndLoadFromMemory(folders, (const FcChar8 *)configuration, FcFalse)) {
        error_set(error, ERROR_SYSTEM, "the font configuration cannot be read");
        goto out;
    }
    ok = true;
    for (size_t i = 0; ok && i < sizeof FACES / sizeof FACES[0]; i++)
        ok = add_face(setter->configuration, folders, FACES[i], error);
out:
    if (folders != NULL)
        FcConfigDestroy(folders);
    return ok;
}

static bool open_context(struct text_setter *setter, struct error *error) {
    /* Pango would otherwise read the machine's configuration in a thread of its own. */
    if (!FcConfigSetCurrent(setter->configuration))
        return error_set(error, ERROR_MEMORY, "out of memory");
    setter->map = pango_cairo_font_map_new_for_font_type(CAIRO_FONT_TYPE_FT);
    if (setter->map == NULL)
        return error_set(error, ERROR_SYSTEM, "this cairo has no FreeType fonts");
    pango_fc_font_map_set_config(PANGO_FC_FONT_MAP(setter->map), setter->configuration);
    pango_cairo_font_map_set_resolution(PANGO_CAIRO_FONT_MAP(setter->map), 72.0);
    setter->context = pango_font_map_create_context(setter->map);
    pango_context_set_round_glyph_positions(setter->context, FALSE);
    pango_context_set_language(setter->context, pango_language_from_string("en"));
    pango_context_set_base_dir(setter->context, PANGO_DIRECTION_LTR);
    cairo_font_options_t *options = cairo_font_options_create();
    cairo_font_options_set_hint_style(options, CAIRO_HINT_STYLE_NONE);
    cairo_font_options_set_hint_metrics(options, CAIRO_HINT_METRICS_OFF);
    cairo_font_options_set_antialias(options, CAIRO_ANTIALIAS_GRAY);
    bool ok = cairo_font_options_status(options) == CAIRO_STATUS_SUCCESS;
    pango_cairo_context_set_font_options(setter->context, options);
    cairo_font_options_destroy(options);
    return ok || error_set(error, ERROR_MEMORY, "out of memory");
}

struct text_setter *text_setter_create(const char *configuration, struct error *error) {
    struct text_setter *setter = calloc(1, sizeof *setter);
    if (setter == NULL) {
        error_set(error, ERROR_MEMORY, "out of memory");
        return NULL;
    }
    if (!load_faces(setter, configuration == NULL ? FONTS_CONFIGURATION : configuration, error) ||
        !open_context(setter, error)) {
        text_setter_free(setter);
        return NULL;
    }
    return setter;
}

void text_setter_free(struct text_setter *setter) {
    if (setter == NULL)
        return;
    if (setter->context != NULL)
        g_object_unref(setter->context);
    if (setter->map != NULL)
        g_object_unref(setter->map);
    if (setter->configuration != NULL)
        FcConfigDestroy(setter->configuration);
    free(setter);
}

static PangoWeight weight_of(enum scene_weight weight) {
    return weight == SCENE_BOLD     ? PANGO_WEIGHT_BOLD
           : weight == SCENE_MEDIUM ? PANGO_WEIGHT_MEDIUM
                                    : PANGO_WEIGHT_NORMAL;
}

PangoLayout *text_layout_create(struct text_setter *setter, const struct scene_text *text,
                                struct error *error) {
    assert(text->style.size > 0);
    char *plain = NULL;
    PangoAttrList *attributes = NULL;
    if (!text_markup_parse(text->markup, text->style, &plain, &attributes, error))
        return NULL;
    PangoFontDescription *font = pango_font_description_new();
    pango_font_description_set_family_static(font, FAMILY);
    pango_font_description_set_absolute_size(font, text->style.size * PANGO_SCALE);
    pango_font_description_set_weight(font, weight_of(text->style.weight));
    pango_font_description_set_style(font,
                                     text->style.italic ? PANGO_STYLE_ITALIC : PANGO_STYLE_NORMAL);
    PangoLayout *layout = pango_layout_new(setter->context);
    pango_layout_set_font_description(layout, font);
    pango_layout_set_text(layout, plain, -1);
    pango_layout_set_attributes(layout, attributes);
    pango_layout_set_wrap(layout, PANGO_WRAP_WORD_CHAR);
    if (text->width > 0)
        pango_layout_set_width(layout, (int)ceil(text->width * PANGO_SCALE));
    pango_font_description_free(font);
    pango_attr_list_unref(attributes);
    g_free(plain);
    return layout;
}

static double line_width(PangoLayout *layout, int index) {
    PangoRectangle logical = {0};
    PangoLayoutLine *line = pango_layout_get_line_readonly(layout, index);
    if (line != NULL)
        pango_layout_line_get_extents(line, NULL, &logical);
    return (double)logical.width / PANGO_SCALE;
}

double text_layout_leading(const struct scene_text *text) {
    return text->leading > 0 ? text->leading : TEXT_LEADING * text->style.size;
}

void text_layout_origin(PangoLayout *layout, const struct scene_text *text, int index, double *x,
                        double *y) {
    double width = line_width(layout, index);
    *x = text->align == SCENE_RIGHT ? -width : text->align == SCENE_CENTRE ? -width / 2 : 0;
    *y = index * text_layout_leading(text);
}

bool text_measure(struct text_setter *setter, const struct scene_text *text, struct text_size *size,
                  struct error *error) {
    PangoLayout *layout = text_layout_create(setter, text, error);
    if (layout == NULL)
        return false;
    int lines = pango_layout_get_line_count(layout);
    struct text_size found = {.lines = (size_t)lines,
                              .leading = text_layout_leading(text),
                              .ascent = TEXT_ASCENT * text->style.size,
                              .descent = TEXT_DESCENT * text->style.size};
    for (int i = 0; i < lines; i++)
        found.width = fmax(found.width, line_width(layout, i));
    found.first = line_width(layout, 0);
    found.last = line_width(layout, lines - 1);
    found.height = found.ascent + (lines - 1) * found.leading + found.descent;
    g_object_unref(layout);
    *size = found;
    return true;
}

double text_width(struct text_setter *setter, const char *markup, struct scene_style style,
                  struct error *error) {
    struct text_size size = {0};
    struct scene_text text = {.markup = markup, .style = style};
    return text_measure(setter, &text, &size, error) ? size.width : (double)NAN;
}

bool text_missing(struct text_setter *setter, const char *markup, struct scene_style style,
                  size_t *missing, struct error *error) {
    struct scene_text text = {.markup = markup, .style = style};
    PangoLayout *layout = text_layout_create(setter, &text, error);
    if (layout == NULL)
        return false;
    *missing = (size_t)pango_layout_get_unknown_glyphs_count(layout);
    g_object_unref(layout);
    return true;
}

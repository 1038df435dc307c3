#include "report/text_layout.h"

#include <assert.h>
#include <stdio.h>
#include <string.h>

/* A small markup of our own instead of Pango's: sub- and superscripts get the size and shift that
 * suit Lato's x-height, and nothing else can slip in. */

enum tag { TAG_SUB, TAG_SUP, TAG_BOLD, TAG_ITALIC, TAGS };
static const char *const TAG_NAMES[TAGS] = {"sub", "sup", "b", "i"};

enum { MOST_DEPTH = 8 };
static const double SCRIPT_SIZE = 0.70, SUB_DROP = 0.17, SUP_RISE = 0.34;

struct open_tag {
    enum tag tag;
    guint start;
    double size; /* of the text around it */
};

struct parser {
    const char *at;
    GString *plain;
    PangoAttrList *attributes;
    struct open_tag open[MOST_DEPTH];
    size_t depth;
    double size, rise;
};

static void insert(struct parser *parser, PangoAttribute *attribute, guint start) {
    attribute->start_index = start;
    attribute->end_index = (guint)parser->plain->len;
    pango_attr_list_insert(parser->attributes, attribute);
}

static bool tag_find(const char *name, size_t length, enum tag *tag) {
    for (int i = 0; i < TAGS; i++)
        if (strlen(TAG_NAMES[i]) == length && memcmp(TAG_NAMES[i], name, length) == 0) {
            *tag = (enum tag)i;
            return true;
        }
    return false;
}

static void tag_close(struct parser *parser) {
    struct open_tag open = parser->open[--parser->depth];
    double size = parser->size;
    if (open.tag == TAG_BOLD)
        insert(parser, pango_attr_weight_new(PANGO_WEIGHT_BOLD), open.start);
    if (open.tag == TAG_ITALIC)
        insert(parser, pango_attr_style_new(PANGO_STYLE_ITALIC), open.start);
    if (open.tag == TAG_SUB || open.tag == TAG_SUP) {
        double shift = open.tag == TAG_SUB ? -SUB_DROP : SUP_RISE;
        insert(parser, pango_attr_size_new_absolute((int)(size * PANGO_SCALE)), open.start);
        insert(parser, pango_attr_rise_new((int)(shift * open.size * PANGO_SCALE)), open.start);
        parser->size = open.size;
    }
}

static bool tag_read(struct parser *parser, const char *markup, struct error *error) {
    bool closing = parser->at[1] == '/';
    const char *name = parser->at + (closing ? 2 : 1);
    const char *end = strchr(name, '>');
    enum tag tag = TAG_SUB;
    if (end == NULL || !tag_find(name, (size_t)(end - name), &tag))
        return error_set(error, ERROR_INTERNAL, "unknown tag in markup \"%s\"", markup);
    parser->at = end + 1;
    if (closing) {
        if (parser->depth == 0 || parser->open[parser->depth - 1].tag != tag)
            return error_set(error, ERROR_INTERNAL, "tag closed but not open in markup \"%s\"",
                             markup);
        tag_close(parser);
        return true;
    }
    if (parser->depth == MOST_DEPTH)
        return error_set(error, ERROR_INTERNAL, "tags too deep in markup \"%s\"", markup);
    parser->open[parser->depth++] = (struct open_tag){tag, (guint)parser->plain->len, parser->size};
    if (tag == TAG_SUB || tag == TAG_SUP)
        parser->size *= SCRIPT_SIZE;
    return true;
}

static bool entity_read(struct parser *parser, const char *markup, struct error *error) {
    static const struct {
        const char *text;
        char letter;
    } ENTITIES[] = {{"&amp;", '&'}, {"&lt;", '<'}, {"&gt;", '>'}};
    for (size_t i = 0; i < sizeof ENTITIES / sizeof ENTITIES[0]; i++)
        if (strncmp(parser->at, ENTITIES[i].text, strlen(ENTITIES[i].text)) == 0) {
            g_string_append_c(parser->plain, ENTITIES[i].letter);
            parser->at += strlen(ENTITIES[i].text);
            return true;
        }
    return error_set(error, ERROR_INTERNAL, "unknown entity in markup \"%s\"", markup);
}

static bool parse(struct parser *parser, const char *markup, struct error *error) {
    while (*parser->at != '\0') {
        if (*parser->at == '<') {
            if (!tag_read(parser, markup, error))
                return false;
        } else if (*parser->at == '&') {
            if (!entity_read(parser, markup, error))
                return false;
        } else {
            g_string_append_c(parser->plain, *parser->at++);
        }
    }
    if (parser->depth > 0)
        return error_set(error, ERROR_INTERNAL, "tag not closed in markup \"%s\"", markup);
    if (!g_utf8_validate(parser->plain->str, -1, NULL))
        return error_set(error, ERROR_INTERNAL, "markup is not UTF-8");
    return true;
}

/* Lato's thin space is an eighth of an em, too tight between a value and its unit; its six-per-em
 * space has the customary width and as many bytes.  No line may break there. */
static void set_thin_spaces(struct parser *parser) {
    static const char WRITTEN[] = "\u2009", THIN[] = "\u2006";
    char *plain = parser->plain->str;
    for (char *at = strstr(plain, WRITTEN); at != NULL; at = strstr(at, WRITTEN))
        memcpy(at, THIN, strlen(THIN));
    for (const char *at = strstr(plain, THIN); at != NULL; at = strstr(at + 1, THIN)) {
        PangoAttribute *attribute = pango_attr_allow_breaks_new(FALSE);
        attribute->start_index =
            at == plain ? 0 : (guint)(g_utf8_find_prev_char(plain, at) - plain);
        const char *next = g_utf8_next_char(at);
        attribute->end_index = (guint)((*next == '\0' ? next : g_utf8_next_char(next)) - plain);
        pango_attr_list_insert(parser->attributes, attribute);
    }
}

bool text_markup_parse(const char *markup, struct scene_style style, char **plain,
                       PangoAttrList **attributes, struct error *error) {
    struct parser parser = {.at = markup,
                            .plain = g_string_new(NULL),
                            .attributes = pango_attr_list_new(),
                            .size = style.size};
    bool ok = parse(&parser, markup, error);
    if (!ok) {
        g_string_free(parser.plain, TRUE);
        pango_attr_list_unref(parser.attributes);
        return false;
    }
    PangoAttribute *features = pango_attr_font_features_new("tnum=1, lnum=1");
    insert(&parser, features, 0);
    set_thin_spaces(&parser);
    *attributes = parser.attributes;
    *plain = g_string_free(parser.plain, FALSE);
    return true;
}

static bool minus_stands_here(const char *plain, const char *at) {
    bool first = at == plain || at[-1] == ' ' || at[-1] == '(';
    return *at == '-' && first && at[1] >= '0' && at[1] <= '9';
}

static const char *escaped(const char *plain, const char *at) {
    switch (*at) {
    case '&':
        return "&amp;";
    case '<':
        return "&lt;";
    case '>':
        return "&gt;";
    default:
        return minus_stands_here(plain, at) ? "\u2212" : NULL;
    }
}

char *text_escape(struct arena *arena, const char *plain, struct error *error) {
    char *markup = arena_take(arena, strlen(plain) + 1, 5, error);
    if (markup == NULL)
        return NULL;
    char *to = markup;
    for (const char *at = plain; *at != '\0'; at++) {
        const char *instead = escaped(plain, at);
        if (instead == NULL) {
            *to++ = *at;
            continue;
        }
        memcpy(to, instead, strlen(instead));
        to += strlen(instead);
    }
    *to = '\0';
    return markup;
}

char *text_plain(struct arena *arena, const char *markup, struct error *error) {
    char *plain = NULL;
    PangoAttrList *attributes = NULL;
    struct scene_style style = {.size = 10};
    if (!text_markup_parse(markup, style, &plain, &attributes, error))
        return NULL;
    pango_attr_list_unref(attributes);
    char *copy = arena_copy(arena, plain, error);
    g_free(plain);
    return copy;
}

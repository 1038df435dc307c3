#include "report/paint_internal.h"
#include "report/pdf_references.h"

#include <cairo-pdf.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const double LARGEST_PAGE = 14400; /* pt: 200 inches, the most that PDF readers show */
enum { MOST_LEVELS = 8, MOST_NAME = 200 };

/* cairo takes a link to a destination that does not exist as an error of the whole document, too
 * late to say which; so all places are checked first. */
struct places {
    const char **names;
    size_t count;
};

static int compare_names(const void *a, const void *b) {
    return strcmp(*(const char *const *)a, *(const char *const *)b);
}

static bool name_is_sound(const char *name) {
    static const char ALLOWED[] =
        "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789._-:/";
    return name != NULL && *name != '\0' && strlen(name) < MOST_NAME &&
           strspn(name, ALLOWED) == strlen(name);
}

static bool collect(const struct paint_document *document, struct arena *arena,
                    struct places *places, struct error *error) {
    size_t count = 0;
    for (size_t p = 0; p < document->page_count; p++)
        for (size_t i = 0; i < document->pages[p]->count; i++)
            count += document->pages[p]->items[i].kind == SCENE_DESTINATION;
    places->names = arena_new(arena, count, const char *, error);
    if (places->names == NULL)
        return false;
    for (size_t p = 0; p < document->page_count; p++)
        for (size_t i = 0; i < document->pages[p]->count; i++) {
            const struct scene_item *item = &document->pages[p]->items[i];
            if (item->kind != SCENE_DESTINATION)
                continue;
            if (!name_is_sound(item->name))
                return error_set(error, ERROR_INTERNAL, "page %zu: bad destination name", p + 1);
            places->names[places->count++] = item->name;
        }
    if (places->count > 1)
        qsort(places->names, places->count, sizeof *places->names, compare_names);
    for (size_t i = 1; i < places->count; i++)
        if (strcmp(places->names[i - 1], places->names[i]) == 0)
            return error_set(error, ERROR_INTERNAL, "two destinations are named %s",
                             places->names[i]);
    return true;
}

static bool exists(const struct places *places, const char *name) {
    return name != NULL && places->count > 0 &&
           bsearch(&name, places->names, places->count, sizeof *places->names, compare_names) !=
               NULL;
}

static bool check_page(const struct scene *page, const struct places *places, struct error *error) {
    if (!paint_check_scene(page, error))
        return false;
    if (page->width > LARGEST_PAGE || page->height > LARGEST_PAGE)
        return error_set(error, ERROR_INPUT, "the page is %g x %g pt, at most %g are allowed",
                         page->width, page->height, LARGEST_PAGE);
    for (size_t i = 0; i < page->count; i++)
        if (page->items[i].kind == SCENE_LINK && !exists(places, page->items[i].name))
            return error_set(error, ERROR_INTERNAL, "a link leads to %s, which does not exist",
                             page->items[i].name);
    return true;
}

static bool check_document(const struct paint_document *document, struct arena *arena,
                           struct error *error) {
    struct places places = {0};
    if (document->page_count == 0)
        return error_set(error, ERROR_INTERNAL, "a document without pages");
    if (!collect(document, arena, &places, error))
        return false;
    for (size_t p = 0; p < document->page_count; p++)
        if (!check_page(document->pages[p], &places, error))
            return error_in(error, "page %zu", p + 1);
    for (size_t i = 0; i < document->outline_count; i++) {
        const struct paint_entry *entry = &document->outline[i];
        unsigned deepest = i == 0 ? 0 : document->outline[i - 1].level + 1;
        if (entry->level > deepest || entry->level >= MOST_LEVELS)
            return error_set(error, ERROR_INTERNAL, "outline entry \"%s\" is too deep",
                             entry->title);
        if (!exists(&places, entry->destination))
            return error_set(error, ERROR_INTERNAL,
                             "outline entry \"%s\" leads to %s, which does not exist", entry->title,
                             entry->destination == NULL ? "nothing" : entry->destination);
    }
    return true;
}

/* %.3f would follow the locale; positions to 0.01 pt are written as whole hundredths. */
static void print_hundredths(char *buffer, size_t size, double value) {
    long hundredths = (long)(value * 100 + (value < 0 ? -0.5 : 0.5));
    long magnitude = labs(hundredths);
    snprintf(buffer, size, "%s%ld.%02ld", hundredths < 0 ? "-" : "", magnitude / 100,
             magnitude % 100);
}

static void add_link(cairo_t *cairo, const struct scene_item *item) {
    char x[24], y[24], width[24], height[24], attributes[MOST_NAME + 128];
    print_hundredths(x, sizeof x, item->x);
    print_hundredths(y, sizeof y, item->y);
    print_hundredths(width, sizeof width, item->width);
    print_hundredths(height, sizeof height, item->height);
    snprintf(attributes, sizeof attributes, "dest='%s' rect=[%s %s %s %s]", item->name, x, y, width,
             height);
    cairo_tag_begin(cairo, CAIRO_TAG_LINK, attributes);
    cairo_tag_end(cairo, CAIRO_TAG_LINK);
}

static void add_destination(cairo_t *cairo, const struct scene_item *item) {
    char x[24], y[24], attributes[MOST_NAME + 64];
    print_hundredths(x, sizeof x, item->x);
    print_hundredths(y, sizeof y, item->y);
    snprintf(attributes, sizeof attributes, "name='%s' x=%s y=%s", item->name, x, y);
    cairo_tag_begin(cairo, CAIRO_TAG_DEST, attributes);
    cairo_tag_end(cairo, CAIRO_TAG_DEST);
}

static void set_metadata(cairo_surface_t *surface, const struct paint_document *document) {
    const struct {
        cairo_pdf_metadata_t key;
        const char *text;
    } entries[] = {
        {CAIRO_PDF_METADATA_TITLE, document->title},
        {CAIRO_PDF_METADATA_AUTHOR, document->author},
        {CAIRO_PDF_METADATA_SUBJECT, document->subject},
        {CAIRO_PDF_METADATA_KEYWORDS, document->keywords},
        {CAIRO_PDF_METADATA_CREATOR, "groundrules"},
        {CAIRO_PDF_METADATA_CREATE_DATE, document->created},
        {CAIRO_PDF_METADATA_MOD_DATE, document->created},
    };
    for (size_t i = 0; i < sizeof entries / sizeof entries[0]; i++)
        if (entries[i].text != NULL)
            cairo_pdf_surface_set_metadata(surface, entries[i].key, entries[i].text);
}

static void set_outline(cairo_surface_t *surface, const struct paint_document *document) {
    int parents[MOST_LEVELS + 1] = {CAIRO_PDF_OUTLINE_ROOT};
    for (size_t i = 0; i < document->outline_count; i++) {
        const struct paint_entry *entry = &document->outline[i];
        char attributes[MOST_NAME + 16];
        snprintf(attributes, sizeof attributes, "dest='%s'", entry->destination);
        parents[entry->level + 1] =
            cairo_pdf_surface_add_outline(surface, parents[entry->level], entry->title, attributes,
                                          entry->level == 0 ? CAIRO_PDF_OUTLINE_FLAG_OPEN : 0);
    }
}

static bool paint_pages(struct text_setter *setter, const struct paint_document *document,
                        cairo_surface_t *surface, const struct paint_sink *sink,
                        struct error *error) {
    static const struct paint_places PLACES = {.link = add_link, .destination = add_destination};
    set_metadata(surface, document);
    for (size_t p = 0; p < document->page_count; p++) {
        const struct scene *page = document->pages[p];
        cairo_pdf_surface_set_size(surface, page->width, page->height);
        cairo_t *cairo = cairo_create(surface);
        bool ok = paint_scene(setter, page, cairo, &PLACES, error);
        if (ok) {
            cairo_show_page(cairo);
            ok = paint_cairo_ok(cairo_status(cairo), error);
        }
        cairo_destroy(cairo);
        if (!ok || sink->failed || !paint_cairo_ok(cairo_surface_status(surface), error))
            return error_in(error, "page %zu", p + 1);
    }
    set_outline(surface, document);
    return paint_cairo_ok(cairo_surface_status(surface), error);
}

bool paint_pdf(struct text_setter *setter, const struct paint_document *document,
               struct arena *arena, struct paint_bytes *bytes, struct error *error) {
    if (!check_document(document, arena, error))
        return false;
    struct paint_sink sink = {.arena = arena, .error = error};
    const struct scene *first = document->pages[0];
    cairo_surface_t *surface =
        cairo_pdf_surface_create_for_stream(paint_sink_write, &sink, first->width, first->height);
    bool ok = paint_pages(setter, document, surface, &sink, error);
    cairo_surface_finish(surface);
    ok = ok && paint_cairo_ok(cairo_surface_status(surface), error) && !sink.failed;
    cairo_surface_destroy(surface);
    if (ok) {
        pdf_references_repair((char *)sink.bytes, sink.length);
        *bytes = (struct paint_bytes){sink.bytes, sink.length};
    }
    return ok;
}

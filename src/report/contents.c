/* The contents, set last: how many pages they take is found by setting them on pages that are
 * thrown away. */

#include "pages.h"

#include <math.h>

static const double LINE = 15.0, CHAPTER_GAP = 4.0;
enum { TITLE_LINES = 3 };

static void line_of_dots(struct scene *scene, double from, double to, double y) {
    struct scene_segment segments[2] = {{SCENE_MOVE, {from}, {y}}, {SCENE_LINE, {to}, {y}}};
    struct scene_path path = {.segments = segments,
                              .count = 2,
                              .stroked = true,
                              .stroke = theme_colour(THEME_QUIET),
                              .width = 0.5,
                              .dashes = {0.5, 3.0},
                              .dash_count = 2};
    if (to > from)
        scene_path(scene, &path);
}

/* An entry as it will be set. */
struct entry {
    const struct flow_entry *source;
    enum theme_text style;
    const char *title, *number;
    double left, width;     /* of the title */
    double last, height;    /* width of its last line; of all its lines */
    double leading, digits; /* digits: width of the number */
};

static struct entry entry_of(struct flow *flow, const struct flow_entry *source, size_t number) {
    bool chapter = source->level == 0;
    struct entry entry = {.source = source, .style = chapter ? THEME_STRONG : THEME_BODY};
    entry.number = flow_print(flow, "%zu", number);
    entry.digits = text_width(flow->setter, entry.number, theme_style(entry.style), flow->error);
    entry.left = flow->page.left + (chapter ? 0.0 : 14.0);
    entry.width = flow->page.right - entry.left - 48.0;
    entry.title =
        flow_shorten(flow, entry.style, flow_escape(flow, source->title), entry.width, TITLE_LINES);
    entry.leading = theme_leading(entry.style);
    struct scene_text text = {.markup = entry.title,
                              .style = theme_style(entry.style),
                              .width = entry.width,
                              .leading = entry.leading};
    struct text_size size = {0};
    if (!flow_failed(flow))
        text_measure(flow->setter, &text, &size, flow->error);
    entry.last = size.last;
    entry.height = LINE + (size.lines > 1 ? (double)(size.lines - 1) * entry.leading : 0.0);
    return entry;
}

static void draw_entry(struct flow *flow, const struct entry *entry) {
    double right = flow->page.right, foot = flow->y + entry->height - LINE;
    flow_text_box(flow, entry->style, entry->title, entry->left, flow->y, entry->width);
    flow_text_box(flow, entry->style, entry->number, right - entry->digits, foot, 0.0);
    line_of_dots(flow->scene, entry->left + entry->last + 6.0, right - entry->digits - 6.0,
                 foot + 9.0);
    scene_link(flow->scene, flow->page.left, flow->y, right - flow->page.left, entry->height - 2.0,
               entry->source->destination);
    flow->y += entry->height;
}

static struct scene *start_page(struct flow *flow, bool first) {
    flow->scene = scene_create(flow->page.width, flow->page.height, flow->arena, flow->error);
    flow->y = flow->page.top;
    if (flow->scene != NULL)
        flow->y += flow_text_box(flow, THEME_CHAPTER, first ? "Contents" : "Contents, continued",
                                 flow->page.left, flow->y, 0.0) +
                   20.0;
    return flow->scene;
}

/* The entry that stands in the contents after `index`; entry_count when there is none. */
static size_t next_listed(const struct flow *flow, size_t index) {
    do
        index++;
    while (index < flow->entry_count && flow->entries[index].level > 1);
    return index;
}

/* A chapter's line takes the first of its rules with it. */
static double needed(struct flow *flow, const struct entry *entry, size_t index) {
    size_t next = next_listed(flow, index);
    if (entry->source->level > 0 || next >= flow->entry_count || flow->entries[next].level == 0)
        return entry->height;
    return entry->height + entry_of(flow, &flow->entries[next], 0).height;
}

/* Sets all entries; page numbers are those of the document when the contents take `shift` pages.
 * Returns the number of pages; pages[] gets the first `most`. */
static size_t set_pages(struct flow *flow, size_t shift, struct scene **pages, size_t most) {
    size_t count = 0;
    for (size_t i = 0; i < flow->entry_count && !flow_failed(flow); i = next_listed(flow, i)) {
        struct entry entry = entry_of(flow, &flow->entries[i], flow->entries[i].page + shift + 1);
        bool chapter = flow->entries[i].level == 0;
        if (count == 0 || flow->y + needed(flow, &entry, i) > flow->page.bottom) {
            struct scene *page = start_page(flow, count == 0);
            if (count < most)
                pages[count] = page;
            count++;
        } else if (chapter)
            flow->y += CHAPTER_GAP;
        if (!flow_failed(flow))
            draw_entry(flow, &entry);
    }
    return count;
}

size_t pages_contents_count(struct flow *flow) {
    return set_pages(flow, 0, NULL, 0);
}

void pages_contents(struct flow *flow, struct scene **contents, size_t count) {
    set_pages(flow, count, contents, count);
}

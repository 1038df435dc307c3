#include "flow.h"

#include "groundrules/text.h"

#include <ctype.h>
#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

static const double HARDLY_USED = 0.15; /* of a page */
static const double KEPT_WHOLE = 0.5;   /* of a page: a table up to that height is not parted */
enum { TITLE_LINES = 8 };               /* a title of more is cut; nobody names a chapter so */

bool flow_failed(const struct flow *flow) {
    return flow->error->kind != ERROR_NONE;
}

bool flow_start(struct flow *flow, const struct guideline *guideline, struct text_setter *setter,
                struct arena *arena, struct error *error) {
    *flow = (struct flow){.guideline = guideline, .setter = setter, .arena = arena, .error = error};
    flow->page = theme_page(guideline->study->document.page);
    flow->pages = arena_new(arena, FLOW_MOST_PAGES, struct scene *, error);
    flow->heads = arena_new(arena, FLOW_MOST_PAGES, const char *, error);
    flow->entries = arena_new(arena, FLOW_MOST_ENTRIES, struct flow_entry, error);
    flow->figures = arena_new(arena, FLOW_MOST_FIGURES, struct flow_figure, error);
    return !flow_failed(flow);
}

void flow_new_page(struct flow *flow, const char *running) {
    if (flow_failed(flow))
        return;
    if (flow->page_count == FLOW_MOST_PAGES) {
        error_set(flow->error, ERROR_INPUT, "the document has more than %d pages", FLOW_MOST_PAGES);
        return;
    }
    flow->scene = scene_create(flow->page.width, flow->page.height, flow->arena, flow->error);
    if (flow->scene == NULL)
        return;
    flow->heads[flow->page_count] = running;
    flow->pages[flow->page_count++] = flow->scene;
    flow->running = running;
    flow->y = flow->page.top;
}

double flow_room(const struct flow *flow) {
    return flow->page.bottom - flow->y;
}

void flow_need(struct flow *flow, double height) {
    if (!flow_failed(flow) && flow_room(flow) < height && flow->y > flow->page.top)
        flow_new_page(flow, flow->running);
}

void flow_gap(struct flow *flow, double height) {
    if (flow->y > flow->page.top)
        flow->y += height;
}

static struct scene_text set(enum theme_text style, const char *markup, double width) {
    return (struct scene_text){.markup = markup,
                               .style = theme_style(style),
                               .width = width,
                               .leading = theme_leading(style),
                               .align = SCENE_LEFT};
}

double flow_text_height(struct flow *flow, enum theme_text style, const char *markup,
                        double width) {
    struct text_size size;
    struct scene_text text = set(style, markup, width);
    if (flow_failed(flow) || !text_measure(flow->setter, &text, &size, flow->error))
        return 0.0;
    return (double)size.lines * size.leading;
}

double flow_text_box(struct flow *flow, enum theme_text style, const char *markup, double x,
                     double y, double width) {
    double height = flow_text_height(flow, style, markup, width);
    struct scene_text text = set(style, markup, width);
    text.x = x;
    /* The first baseline sits where an ascender's half leading puts it. */
    text.y = y + (theme_leading(style) - text.style.size) / 2.0 + 0.8 * text.style.size;
    if (!flow_failed(flow))
        scene_text(flow->scene, &text);
    return height;
}

void flow_text_at(struct flow *flow, enum theme_text style, const char *markup, size_t first,
                  size_t span) {
    double width;
    double x = theme_column(&flow->page, first, span, &width);
    double height = flow_text_height(flow, style, markup, width);
    flow_need(flow, height);
    flow->y += flow_text_box(flow, style, markup, x, flow->y, width);
}

void flow_text(struct flow *flow, enum theme_text style, const char *markup) {
    flow_text_at(flow, style, markup, 0, THEME_COLUMNS);
}

void flow_figure(struct flow *flow, const char *name, const char *title,
                 const struct scene *scene) {
    if (flow_failed(flow) || scene == NULL)
        return;
    if (flow->figure_count == FLOW_MOST_FIGURES) {
        error_set(flow->error, ERROR_INPUT, "more than %d figures", FLOW_MOST_FIGURES);
        return;
    }
    flow->figures[flow->figure_count++] = (struct flow_figure){name, title, scene};
}

void flow_entry(struct flow *flow, unsigned level, const char *title, const char *destination) {
    if (flow_failed(flow))
        return;
    if (flow->entry_count == FLOW_MOST_ENTRIES) {
        error_set(flow->error, ERROR_INPUT, "the document has more than %d headings",
                  FLOW_MOST_ENTRIES);
        return;
    }
    flow->entries[flow->entry_count++] =
        (struct flow_entry){title, destination, level, flow->page_count - 1};
    scene_destination(flow->scene, destination, flow->page.left, flow->y);
}

static double full_page(const struct flow *flow) {
    return flow->page.bottom - flow->page.top;
}

void flow_heading(struct flow *flow, unsigned level, const char *title, const char *destination,
                  double keep) {
    enum theme_text style = level == 0 ? THEME_CHAPTER : THEME_SECTION;
    double width = flow->page.right - flow->page.left;
    const char *markup = flow_shorten(flow, style, flow_escape(flow, title), width, TITLE_LINES);
    double height = flow_text_height(flow, style, markup, width);
    double used = flow->y - flow->page.top;
    if (level == 0 && used > 0 && used < HARDLY_USED * full_page(flow)) {
        flow_gap(flow, 28.0); /* what runs over from the chapter before has no page of its own */
        flow->running = title;
    } else if (level == 0)
        flow_new_page(flow, title);
    else {
        flow_gap(flow, 14.0);
        flow_need(flow, height + keep + 8.0);
    }
    if (flow_failed(flow))
        return;
    flow_entry(flow, level, title, destination);
    flow->y += flow_text_box(flow, style, markup, flow->page.left, flow->y, width);
    flow->y += level == 0 ? 6.0 : 4.0;
    if (level == 0) {
        scene_rectangle(flow->scene, flow->page.left, flow->y, 42.0, 2.0,
                        theme_colour(THEME_ACCENT));
        flow->y += 12.0;
    }
}

void flow_place(struct flow *flow, const struct scene *scene, double x) {
    if (scene == NULL || flow_failed(flow))
        return;
    flow_need(flow, scene->height);
    scene_place(flow->scene, scene, x, flow->y);
    flow->y += scene->height;
}

/* Where the next part ends.  What is kept together goes to a new page when it does not fit here,
 * and is parted when no page holds it. */
static size_t part(struct flow *flow, const struct table_layout *layout, size_t first) {
    size_t end = table_fit(layout, first, flow_room(flow));
    bool kept = table_fit(layout, first, full_page(flow)) > first;
    if (end == first && !kept)
        end = table_fit_anyhow(layout, first, flow_room(flow));
    return end;
}

/* What the page must have room for before the table begins on it. */
static double start_of(const struct flow *flow, const struct table_layout *layout) {
    double whole = table_height(layout, 0, table_rows(layout));
    return whole <= KEPT_WHOLE * full_page(flow) ? whole
                                                 : fmin(table_start(layout), full_page(flow));
}

static void table_block(struct flow *flow, const struct table *table) {
    struct table_layout *layout = table_layout(table, flow->page.right - flow->page.left,
                                               flow->setter, flow->arena, flow->error);
    if (layout == NULL)
        return;
    flow_need(flow, start_of(flow, layout));
    size_t first = 0;
    while (first < table->row_count && !flow_failed(flow)) {
        size_t end = part(flow, layout, first);
        if (end == first && flow->y > flow->page.top) {
            flow_new_page(flow, flow->running);
            continue;
        }
        if (end == first) {
            error_set(flow->error, ERROR_INPUT, "table %s: a row is higher than a page",
                      table->name);
            return;
        }
        table_draw(layout, first, end, flow->scene, flow->page.left, flow->y);
        flow->y += table_height(layout, first, end);
        first = end;
    }
}

static struct table *blocks_of(struct flow *flow, const struct table *table, size_t *count) {
    if (flow_failed(flow))
        return NULL;
    return table_split(table, flow->page.right - flow->page.left, flow->setter, flow->arena, count,
                       flow->error);
}

void flow_table(struct flow *flow, const struct table *table) {
    size_t count = 0;
    struct table *blocks = blocks_of(flow, table, &count);
    for (size_t i = 0; blocks != NULL && i < count && !flow_failed(flow); i++) {
        if (i > 0)
            flow_gap(flow, 8.0);
        table_block(flow, &blocks[i]);
    }
}

double flow_table_start(struct flow *flow, const struct table *table) {
    size_t count = 0;
    struct table *blocks = blocks_of(flow, table, &count);
    struct table_layout *layout = blocks == NULL
                                      ? NULL
                                      : table_layout(&blocks[0], flow->page.right - flow->page.left,
                                                     flow->setter, flow->arena, flow->error);
    return layout == NULL ? 0.0 : start_of(flow, layout);
}

const char *flow_shorten(struct flow *flow, enum theme_text style, const char *markup, double width,
                         size_t lines) {
    struct scene_text text = set(style, markup, width);
    if (flow_failed(flow))
        return "";
    return text_shorten(flow->setter, &text, lines, flow->arena, flow->error);
}

const char *flow_print(struct flow *flow, const char *format, ...) {
    va_list arguments, again;
    va_start(arguments, format);
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    char *text = length < 0 || flow_failed(flow)
                     ? NULL
                     : arena_new(flow->arena, (size_t)length + 1, char, flow->error);
    if (text != NULL)
        vsnprintf(text, (size_t)length + 1, format, again);
    va_end(again);
    va_end(arguments);
    return text != NULL ? text : "";
}

/* Whether a number and its unit, or a name and its number at the end, meet at this space. */
static bool binds(const char *text, const char *space) {
    static const char *const units[] = {"mm",  "um", "\xC2\xB5m", "mil", "m",        "ns",
                                        "ps",  "V",  "mV",        "ohm", "\xCE\xA9", "MHz",
                                        "GHz", "dB", "pF",        "nH",  "%"};
    bool after_digit = space > text && isdigit((unsigned char)space[-1]);
    bool after_letter = space > text && isalpha((unsigned char)space[-1]);
    for (size_t i = 0; after_digit && i < sizeof units / sizeof *units; i++) {
        size_t length = strlen(units[i]);
        if (strncmp(space + 1, units[i], length) == 0 && !isalnum((unsigned char)space[1 + length]))
            return true;
    }
    size_t digits = strspn(space + 1, "0123456789");
    return after_letter && digits > 0 && space[1 + digits] == '\0';
}

/* Numbers stay with their units. */
static const char *bind(struct flow *flow, const char *text) {
    struct text bound = text_start(flow->arena, flow->error);
    for (const char *at = text; *at != '\0'; at++)
        if (*at == ' ' && binds(text, at))
            text_add(&bound, "\xC2\xA0");
        else
            text_add_length(&bound, at, 1);
    const char *made = text_end(&bound);
    return made != NULL ? made : "";
}

const char *flow_escape(struct flow *flow, const char *plain) {
    if (plain == NULL || flow_failed(flow))
        return "";
    const char *markup = text_escape(flow->arena, plain, flow->error);
    return markup != NULL ? bind(flow, markup) : "";
}

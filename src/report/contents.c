#include "pages.h"

enum { LINES_A_PAGE = 44 };
static const double LINE = 15.0;

static size_t listed(const struct flow *flow) {
    size_t count = 0;
    for (size_t i = 0; i < flow->entry_count; i++)
        count += flow->entries[i].level <= 1;
    return count;
}

size_t pages_contents_count(const struct flow *flow) {
    return (listed(flow) + LINES_A_PAGE - 1) / LINES_A_PAGE;
}

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

static void line(struct flow *flow, const struct flow_entry *entry, size_t page_number) {
    bool chapter = entry->level == 0;
    double left = flow->page.left + (chapter ? 0.0 : 14.0), right = flow->page.right;
    enum theme_text style = chapter ? THEME_STRONG : THEME_BODY;
    const char *title = flow_escape(flow, entry->title);
    const char *number = flow_print(flow, "%zu", page_number);
    double title_width = text_width(flow->setter, title, theme_style(style), flow->error);
    double number_width = text_width(flow->setter, number, theme_style(style), flow->error);
    double most = right - left - number_width - 24.0;
    flow_text_box(flow, style, title, left, flow->y, title_width > most ? most : 0.0);
    flow_text_box(flow, style, number, right - number_width, flow->y, 0.0);
    line_of_dots(flow->scene, left + title_width + 6.0, right - number_width - 6.0, flow->y + 9.0);
    scene_link(flow->scene, flow->page.left, flow->y, right - flow->page.left, LINE - 2.0,
               entry->destination);
    flow->y += LINE;
}

void pages_contents(struct flow *flow, struct scene **contents, size_t count) {
    size_t next = 0;
    for (size_t page = 0; page < count && !flow_failed(flow); page++) {
        flow->scene = scene_create(flow->page.width, flow->page.height, flow->arena, flow->error);
        if (flow->scene == NULL)
            return;
        contents[page] = flow->scene;
        flow->y = flow->page.top;
        flow->y +=
            flow_text_box(flow, THEME_CHAPTER, page == 0 ? "Contents" : "Contents, continued",
                          flow->page.left, flow->y, 0.0);
        flow->y += 20.0;
        for (size_t lines = 0; next < flow->entry_count && lines < LINES_A_PAGE; next++)
            if (flow->entries[next].level <= 1) {
                if (flow->entries[next].level == 0 && lines > 0)
                    flow->y += 4.0;
                line(flow, &flow->entries[next], flow->entries[next].page + count + 1);
                lines++;
            }
    }
}

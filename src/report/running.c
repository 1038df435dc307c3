/* The running head and foot.  What is too long for its half of the line is cut. */

#include "pages.h"

static double width_of(struct flow *flow, const char *markup) {
    return text_width(flow->setter, markup, theme_style(THEME_RUNNING), flow->error);
}

static void set_at(struct flow *flow, struct scene *scene, const char *markup,
                   enum scene_align align, double y) {
    struct scene_text text = {.markup = markup,
                              .style = theme_style(THEME_RUNNING),
                              .x = align == SCENE_LEFT ? flow->page.left : flow->page.right,
                              .y = y,
                              .align = align};
    if (!flow_failed(flow))
        scene_text(scene, &text);
}

/* The left text gets what the right one leaves, the right one no more than its share when both are
 * long. */
static void set_line(struct flow *flow, struct scene *scene, const char *left, const char *right,
                     double share, double y) {
    const double between = 18.0;
    double all = flow->page.right - flow->page.left, wanted = width_of(flow, left);
    double most = wanted + between < (1.0 - share) * all ? all - wanted - between : share * all;
    right = flow_shorten(flow, THEME_RUNNING, right, most, 1);
    left = flow_shorten(flow, THEME_RUNNING, left, all - width_of(flow, right) - between, 1);
    set_at(flow, scene, left, SCENE_LEFT, y);
    set_at(flow, scene, right, SCENE_RIGHT, y);
}

void pages_running(struct flow *flow, struct scene *const *pages, const char *const *heads,
                   size_t count) {
    const struct study_document *document = &flow->guideline->study->document;
    const char *foot =
        flow_print(flow, "%s, revision %s%s%s", flow_escape(flow, document->number),
                   flow_escape(flow, document->revision), document->status != NULL ? ", " : "",
                   flow_escape(flow, document->status));
    for (size_t i = 1; i < count && !flow_failed(flow); i++) {
        struct scene *scene = pages[i];
        scene_line(scene, flow->page.left, flow->page.foot - 10.0, flow->page.right,
                   flow->page.foot - 10.0, 0.4, theme_colour(THEME_HAIR));
        set_line(flow, scene, foot,
                 flow_print(flow, "%.12s      page %zu of %zu", flow->guideline->fingerprint, i + 1,
                            count),
                 0.5, flow->page.foot);
        if (heads[i] != NULL)
            set_line(flow, scene, flow_escape(flow, document->title), flow_escape(flow, heads[i]),
                     0.5, flow->page.head);
    }
}

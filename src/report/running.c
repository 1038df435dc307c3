#include "pages.h"

static void right_aligned(struct scene *scene, const char *markup, double x, double y) {
    struct scene_text text = {.markup = markup,
                              .style = theme_style(THEME_RUNNING),
                              .x = x,
                              .y = y,
                              .align = SCENE_RIGHT};
    scene_text(scene, &text);
}

static void left_aligned(struct scene *scene, const char *markup, double x, double y) {
    struct scene_text text = {
        .markup = markup, .style = theme_style(THEME_RUNNING), .x = x, .y = y, .align = SCENE_LEFT};
    scene_text(scene, &text);
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
        left_aligned(scene, foot, flow->page.left, flow->page.foot);
        right_aligned(scene,
                      flow_print(flow, "%.12s      page %zu of %zu", flow->guideline->fingerprint,
                                 i + 1, count),
                      flow->page.right, flow->page.foot);
        if (heads[i] != NULL) {
            left_aligned(scene, flow_escape(flow, document->title), flow->page.left,
                         flow->page.head);
            right_aligned(scene, flow_escape(flow, heads[i]), flow->page.right, flow->page.head);
        }
    }
}

#include "pages.h"

#include "groundrules/model.h"
#include "report/drawing.h"
#include "words.h"

#include <ctype.h>
#include <stdbool.h>
#include <string.h>

/* What the cover has room for; a title of more is cut with an ellipsis. */
enum { TITLE_LINES = 5, SUBTITLE_LINES = 4, FACT_LINES = 3, BOARD_LINES = 3, MOST_NAMED = 6 };

const char *pages_destination(struct flow *flow, const char *kind, const char *id) {
    char *name = arena_print(flow->arena, flow->error, "%s.%s", kind, id);
    for (char *at = name; at != NULL && *at != '\0'; at++)
        if (!isalnum((unsigned char)*at) && strchr("._-:/", *at) == NULL)
            *at = '-';
    return name != NULL ? name : "none";
}

static void fact(struct flow *flow, const char *name, const char *value) {
    if (value == NULL || *value == '\0')
        return;
    double label, width;
    double left = theme_column(&flow->page, 0, 1, &label);
    double right = theme_column(&flow->page, 1, 4, &width);
    flow_text_box(flow, THEME_NOTE, name, left, flow->y + 1.0, label + flow->page.gutter);
    const char *text = flow_shorten(flow, THEME_BODY, flow_escape(flow, value), width, FACT_LINES);
    flow->y += flow_text_box(flow, THEME_BODY, text, right, flow->y, width) + 3.0;
}

static const char *reviewers(struct flow *flow) {
    const struct study_document *document = &flow->guideline->study->document;
    const char *all = "";
    for (size_t i = 0; i < document->reviewer_count; i++)
        all = flow_print(flow, "%s%s%s", all, i > 0 ? "; " : "", document->reviewers[i]);
    return all;
}

static void facts(struct flow *flow) {
    const struct study_document *document = &flow->guideline->study->document;
    fact(flow, "Number", document->number);
    fact(flow, "Revision", document->revision);
    fact(flow, "Status", document->status);
    fact(flow, "Date", document->date);
    fact(flow, "Owner", document->owner);
    fact(flow, "Reviewers", reviewers(flow));
    fact(flow, "Fingerprint", flow_print(flow, "%.16s", flow->guideline->fingerprint));
}

/* The family's sections side by side at one scale: what the document is about. */
static void motif(struct flow *flow, double top, double height) {
    const struct study *study = flow->guideline->study;
    double deepest = 0.0;
    for (size_t i = 0; i < study->stackup_count; i++)
        if (study->stackups[i].height.value > deepest)
            deepest = study->stackups[i].height.value;
    if (!(deepest > 0.0) || study->stackup_count == 0)
        return;
    double gutter = 14.0, width = flow->page.right - flow->page.left;
    double each =
        (width - gutter * (double)(study->stackup_count - 1)) / (double)study->stackup_count;
    const double traces = 0.3e-3;
    double scale = height / (1.35 * deepest);
    if (traces * scale > 0.18 * each) /* a near plane alone: the width decides */
        scale = 0.18 * each / traces;
    for (size_t i = 0; i < study->stackup_count; i++) {
        const struct study_stackup *stackup = &study->stackups[i];
        double x = flow->page.left + (each + gutter) * (double)i;
        double foot = top + height - 0.2 * height, depth = stackup->height.value * scale;
        double copper = stackup->thickness.value * scale;
        copper = copper < 2.0 ? 2.0 : copper;
        struct theme_solid dielectric = theme_solid(SKETCH_DIELECTRIC),
                           plane = theme_solid(SKETCH_PLANE);
        scene_rectangle(flow->scene, x, foot - depth, each, depth, dielectric.fill);
        scene_rectangle(flow->scene, x, foot, each, copper, plane.fill);
        double trace = traces * scale;
        scene_rectangle(flow->scene, x + each * 0.32 - trace, foot - depth - copper, trace, copper,
                        theme_solid(SKETCH_AGGRESSOR).fill);
        scene_rectangle(flow->scene, x + each * 0.62, foot - depth - copper, trace, copper,
                        theme_solid(SKETCH_VICTIM).fill);
        if (study->stackup_count > MOST_NAMED)
            continue;
        const char *name =
            flow_shorten(flow, THEME_NOTE, flow_escape(flow, stackup->name), each, BOARD_LINES);
        flow_text_box(flow, THEME_NOTE, name, x, foot + copper + 6.0, each);
    }
}

static const char *product_board(const struct study *study, const struct study_product *product) {
    const struct study_stackup *stackup = study_find_stackup(study, product->stackup);
    return stackup != NULL ? stackup->name : product->stackup;
}

static const char *product_text(struct flow *flow, size_t i) {
    const struct study *study = flow->guideline->study;
    return flow_print(flow, "%s, on %s", study->products[i].name,
                      product_board(study, &study->products[i]));
}

static bool products_fit(struct flow *flow, double room) {
    const struct study *study = flow->guideline->study;
    double width, height = 10.0 + theme_leading(THEME_STRONG);
    theme_column(&flow->page, 1, 4, &width);
    for (size_t i = 0; i < study->product_count; i++)
        height +=
            flow_text_height(flow, THEME_BODY, flow_escape(flow, product_text(flow, i)), width) +
            3.0;
    return height <= room;
}

static void products(struct flow *flow) {
    const struct study *study = flow->guideline->study;
    flow->y += 10.0;
    flow_text(flow, THEME_STRONG, "Products");
    for (size_t i = 0; i < study->product_count; i++)
        fact(flow, flow_escape(flow, study->products[i].id), product_text(flow, i));
}

void pages_products(struct flow *flow) {
    const struct study *study = flow->guideline->study;
    if (study->product_count == 0 || flow->products_set)
        return;
    struct table_row *rows =
        arena_new(flow->arena, study->product_count, struct table_row, flow->error);
    for (size_t i = 0; rows != NULL && i < study->product_count; i++) {
        const char **cells = arena_new(flow->arena, 3, const char *, flow->error);
        if (cells == NULL)
            return;
        cells[0] = flow_print(flow, "<b>%s</b>", flow_escape(flow, study->products[i].id));
        cells[1] = flow_escape(flow, study->products[i].name);
        cells[2] = flow_escape(flow, product_board(study, &study->products[i]));
        rows[i].cells = cells;
    }
    const struct table_column columns[3] = {{0}};
    const struct table_head heads[3] = {{"Product", 1}, {"Name", 1}, {"Board", 1}};
    const struct table_head_row head = {heads, 3};
    struct table table = {.name = "products",
                          .columns = columns,
                          .column_count = 3,
                          .heads = &head,
                          .head_count = 1,
                          .rows = rows,
                          .row_count = study->product_count,
                          .stretch = true};
    flow_heading(flow, 1, "Products", "part.products", flow_table_start(flow, &table));
    flow_table(flow, &table);
}

void pages_cover(struct flow *flow) {
    const struct study_document *document = &flow->guideline->study->document;
    flow_new_page(flow, NULL);
    if (flow_failed(flow))
        return;
    double width = flow->page.right - flow->page.left;
    if (document->organisation != NULL)
        flow_text_box(
            flow, THEME_STRONG,
            flow_shorten(flow, THEME_STRONG, flow_escape(flow, document->organisation), width, 1),
            flow->page.left, flow->page.top, width);
    scene_rectangle(flow->scene, flow->page.left, flow->page.top + 18.0, width, 0.6,
                    theme_colour(THEME_INK));
    motif(flow, flow->page.top + 60.0, 190.0);
    flow->y = flow->page.top + 280.0;
    scene_rectangle(flow->scene, flow->page.left, flow->y, 42.0, 3.0, theme_colour(THEME_ACCENT));
    flow->y += 14.0;
    flow_text(
        flow, THEME_TITLE,
        flow_shorten(flow, THEME_TITLE, flow_escape(flow, document->title), width, TITLE_LINES));
    if (document->subtitle != NULL) {
        flow->y += 4.0;
        flow_text(flow, THEME_LEAD,
                  flow_shorten(flow, THEME_LEAD, flow_escape(flow, document->subtitle), width,
                               SUBTITLE_LINES));
    }
    flow->y += 24.0;
    facts(flow);
    const char *note =
        "Crosstalk and ground layout only. No promise on emission, immunity, electrostatic "
        "discharge or insulation; see Cautions.";
    double height = flow_text_height(flow, THEME_NOTE, note, width);
    flow->products_set = products_fit(flow, flow_room(flow) - height - 12.0);
    if (flow->products_set && flow->guideline->study->product_count > 0)
        products(flow);
    flow_text_box(flow, THEME_NOTE, note, flow->page.left, flow->page.bottom - height, width);
}

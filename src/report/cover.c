#include "pages.h"

#include "groundrules/model.h"
#include "report/drawing.h"
#include "words.h"

#include <ctype.h>
#include <math.h>
#include <string.h>

/* What the cover has room for; a title of more is cut with an ellipsis. */
enum { TITLE_LINES = 5, SUBTITLE_LINES = 4, PRODUCT_LINES = 3, BOARD_LINES = 3, MOST_NAMED = 6 };

static const double LEAST_MOTIF = 60.0;

const char *pages_destination(struct flow *flow, const char *kind, const char *id) {
    char *name = arena_print(flow->arena, flow->error, "%s.%s", kind, id);
    for (char *at = name; at != NULL && *at != '\0'; at++)
        if (!isalnum((unsigned char)*at) && strchr("._-:/", *at) == NULL)
            *at = '-';
    return name != NULL ? name : "none";
}

static const char *fact_text(struct flow *flow, const char *value, double width, size_t lines) {
    return flow_shorten(flow, THEME_BODY, flow_escape(flow, value), width, lines);
}

/* Draws it when `draw` is set; returns its height. */
static double fact(struct flow *flow, const char *name, const char *value, size_t lines,
                   bool draw) {
    if (value == NULL || *value == '\0')
        return 0.0;
    double label, width;
    double left = theme_column(&flow->page, 0, 1, &label);
    double right = theme_column(&flow->page, 1, 4, &width);
    const char *text = fact_text(flow, value, width, lines);
    if (draw) {
        flow_text_box(flow, THEME_NOTE, name, left, flow->y + 1.0, label + flow->page.gutter);
        flow->y += flow_text_box(flow, THEME_BODY, text, right, flow->y, width) + 3.0;
    }
    return flow_text_height(flow, THEME_BODY, text, width) + 3.0;
}

static const char *reviewers(struct flow *flow) {
    const struct study_document *document = &flow->guideline->study->document;
    const char *all = "";
    for (size_t i = 0; i < document->reviewer_count; i++)
        all = flow_print(flow, "%s%s%s", all, i > 0 ? "; " : "", document->reviewers[i]);
    return all;
}

static double facts(struct flow *flow, bool draw) {
    const struct study_document *document = &flow->guideline->study->document;
    const struct {
        const char *name, *value;
        size_t lines;
    } all[] = {{"Number", document->number, 2},
               {"Revision", document->revision, 2},
               {"Status", document->status, 2},
               {"Date", document->date, 1},
               {"Owner", document->owner, 2},
               {"Reviewers", reviewers(flow), 8},
               {"Fingerprint", flow_print(flow, "%.16s", flow->guideline->fingerprint), 1}};
    double height = 0.0;
    for (size_t i = 0; i < sizeof all / sizeof *all; i++)
        height += fact(flow, all[i].name, all[i].value, all[i].lines, draw);
    return height;
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
    double gutter = study->stackup_count > MOST_NAMED ? 4.0 : 14.0,
           width = flow->page.right - flow->page.left;
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
    double height = 10.0 + theme_leading(THEME_STRONG);
    for (size_t i = 0; i < study->product_count; i++)
        height += fact(flow, "", product_text(flow, i), PRODUCT_LINES, false);
    return height <= room;
}

static void products(struct flow *flow) {
    const struct study *study = flow->guideline->study;
    flow->y += 10.0;
    flow_text(flow, THEME_STRONG, "Products");
    for (size_t i = 0; i < study->product_count; i++)
        fact(flow, flow_escape(flow, study->products[i].id), product_text(flow, i), PRODUCT_LINES,
             true);
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

/* Title, subtitle and facts; draws them at the cursor when `draw` is set; returns their height. */
static double block(struct flow *flow, bool draw) {
    const struct study_document *document = &flow->guideline->study->document;
    double width = flow->page.right - flow->page.left;
    const char *title =
        flow_shorten(flow, THEME_TITLE, flow_escape(flow, document->title), width, TITLE_LINES);
    const char *subtitle = flow_shorten(flow, THEME_LEAD, flow_escape(flow, document->subtitle),
                                        width, SUBTITLE_LINES);
    double height = 14.0 + flow_text_height(flow, THEME_TITLE, title, width) + 24.0;
    if (document->subtitle != NULL)
        height += 4.0 + flow_text_height(flow, THEME_LEAD, subtitle, width);
    if (!draw)
        return height + facts(flow, false);
    scene_rectangle(flow->scene, flow->page.left, flow->y, 42.0, 3.0, theme_colour(THEME_ACCENT));
    flow->y += 14.0;
    flow_text(flow, THEME_TITLE, title);
    if (document->subtitle != NULL) {
        flow->y += 4.0;
        flow_text(flow, THEME_LEAD, subtitle);
    }
    flow->y += 24.0;
    return height + facts(flow, true);
}

/* The sections stand above the title; a long title leaves them less height. */
static void title_page(struct flow *flow, double room) {
    double start = fmin(flow->page.top + 280.0, flow->page.top + room - block(flow, false));
    double height = start - flow->page.top - 90.0;
    if (height >= LEAST_MOTIF)
        motif(flow, flow->page.top + 60.0, height);
    flow->y = start;
    block(flow, true);
}

void pages_cover(struct flow *flow) {
    static const char note[] =
        "Crosstalk and ground layout only. No promise on emission, immunity, electrostatic "
        "discharge or insulation; see Cautions.";
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
    double height = flow_text_height(flow, THEME_NOTE, note, width);
    title_page(flow, flow_room(flow) - height - 12.0);
    flow->products_set = products_fit(flow, flow_room(flow) - height - 12.0);
    if (flow->products_set && flow->guideline->study->product_count > 0)
        products(flow);
    flow_text_box(flow, THEME_NOTE, note, flow->page.left, flow->page.bottom - height, width);
}

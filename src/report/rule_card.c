/* A rule as a card: what it asks, on which board, over what it was proven, why, and how to check
 * it. */

#include "pages.h"

#include "words.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

static const char CROSSTALK_NOTE[] = "Valid over uncut ground, for the stated drivers, "
                                     "terminations and lengths; crosstalk only, no promise on "
                                     "emission, immunity, electrostatic discharge or insulation.";
static const char GEOMETRY_NOTE[] = "Valid over uncut ground, for the geometry stated; no promise "
                                    "on emission, immunity, electrostatic discharge or insulation.";

enum { CARD_COLUMNS = 6 };

/* ---- over what it was proven ---- */

static bool is_range(const struct study_setting *setting) {
    return setting->range.to > setting->range.from;
}

static const char *range_words(struct flow *flow, const struct model_input *input,
                               const struct study_setting *setting) {
    if (input->words != NULL)
        return flow_print(flow, "%s %s or %s", words_name(flow, input->name),
                          words_input(flow, input, setting->range.from),
                          words_input(flow, input, setting->range.to));
    return flow_print(flow, "%s %s", words_name(flow, input->name),
                      words_range(flow, setting->range, input->dimension));
}

/* Ranges and tolerances that all variants share; what differs by board is the board's own. */
static const char *proven_over(struct flow *flow, const struct study_chapter *chapter,
                               const struct study_rule *rule) {
    const char *text = "";
    bool tolerance = false;
    for (size_t i = 0; i < chapter->model->input_count; i++) {
        const struct study_setting *setting = &rule->variants[0].settings[i];
        if (i != rule->find && is_range(setting))
            text = flow_print(flow, "%s%s%s", text, *text != '\0' ? "; " : "",
                              range_words(flow, &chapter->model->inputs[i], setting));
        tolerance = tolerance || setting->minus > 0.0 || setting->plus > 0.0;
    }
    const struct model_input *input = &chapter->model->inputs[rule->find];
    const char *found = flow_print(
        flow, "every %s%s %s %s", input->dimension == DIMENSION_COUNT ? "number of " : "",
        words_name(flow, input->name),
        rule->find_smallest ? "from the bound up to" : "from the bound down to",
        words_value(flow, rule->find_smallest ? rule->within.to : rule->within.from,
                    chapter->model->inputs[rule->find].dimension));
    text = flow_print(flow, "%s%s%s", text, *text != '\0' ? "; " : "", found);
    if (rule->nominal)
        return flow_print(flow, "%s; nominal boards, tolerances left out on purpose.", text);
    return flow_print(flow, "%s%s.", text, tolerance ? "; all tolerances of the board" : "");
}

/* ---- the table of findings ---- */

/* Where the worst case was: only inputs that may vary. */
static const char *where(struct flow *flow, const struct study_chapter *chapter,
                         const struct study_rule *rule, const struct study_variant *variant,
                         const struct guideline_finding *finding) {
    const char *text = "";
    for (size_t i = 0; i < chapter->model->input_count; i++) {
        const struct study_setting *setting = &variant->settings[i];
        bool varies = i == rule->find || is_range(setting) ||
                      (!rule->nominal && (setting->minus > 0.0 || setting->plus > 0.0));
        if (varies)
            text =
                flow_print(flow, "%s%s%s %s", text, *text != '\0' ? ", " : "",
                           words_name(flow, chapter->model->inputs[i].name),
                           words_input(flow, &chapter->model->inputs[i], finding->worst_inputs[i]));
    }
    return text;
}

static void finding_cells(struct flow *flow, const struct study_chapter *chapter,
                          const struct guideline_rule *rule, size_t v, const char **cells) {
    const struct guideline_finding *finding = &rule->findings[v];
    const struct study_variant *variant = &rule->rule->variants[v];
    enum dimension dimension = chapter->model->outputs[rule->rule->condition.output].dimension;
    cells[0] = variant->label != NULL ? flow_escape(flow, variant->label) : "As given";
    cells[1] = words_finding(flow, rule->rule, chapter, finding);
    if (finding->status == GUIDELINE_BELOW_FAB || isnan(finding->worst))
        return;
    cells[2] = words_value(flow, finding->worst, dimension);
    cells[3] = words_value(flow, finding->limit, dimension);
    cells[4] = where(flow, chapter, rule->rule, variant, finding);
    cells[5] = flow_print(flow, "%zu", finding->solutions);
}

static struct table_layout *findings(struct flow *flow, const struct study_chapter *chapter,
                                     const struct guideline_rule *rule, double width) {
    size_t count = rule->rule->variant_count;
    struct table_row *rows = arena_new(flow->arena, count, struct table_row, flow->error);
    struct table_column *columns =
        arena_new(flow->arena, CARD_COLUMNS, struct table_column, flow->error);
    struct table_head *heads = arena_new(flow->arena, CARD_COLUMNS, struct table_head, flow->error);
    struct table_head_row *head = arena_new(flow->arena, 1, struct table_head_row, flow->error);
    struct table *table = arena_new(flow->arena, 1, struct table, flow->error);
    if (rows == NULL || columns == NULL || heads == NULL || head == NULL || table == NULL)
        return NULL;
    const char *titles[CARD_COLUMNS] = {
        "Board or case", words_capital(flow, chapter->model->inputs[rule->rule->find].name),
        "Worst",         "Limit",
        "Worst where",   "Solutions"};
    for (size_t i = 0; i < CARD_COLUMNS; i++)
        heads[i].text = titles[i];
    columns[0].most = 130.0;
    columns[1].most = 110.0;
    columns[4].most = 165.0;
    columns[5].align = TABLE_RIGHT;
    for (size_t v = 0; v < count; v++) {
        const char **cells = arena_new(flow->arena, CARD_COLUMNS, const char *, flow->error);
        if (cells == NULL)
            return NULL;
        finding_cells(flow, chapter, rule, v, cells);
        rows[v] = (struct table_row){.cells = cells};
    }
    *head = (struct table_head_row){heads, CARD_COLUMNS};
    *table = (struct table){.name = rule->rule->id,
                            .columns = columns,
                            .column_count = CARD_COLUMNS,
                            .heads = head,
                            .head_count = 1,
                            .rows = rows,
                            .row_count = count,
                            .stretch = true};
    return table_layout(table, width, flow->setter, flow->arena, flow->error);
}

/* ---- the card ---- */

struct line {
    const char *name, *text;
};

enum { MOST_LINES = 7, REMEDY_LINES = 40 };

/* "gap at least 3.2 mm" */
static const char *bound_words(struct flow *flow, const struct model_input *input, bool at_least,
                               double value, double grid) {
    return flow_print(flow, "%s %s %s%s", words_name(flow, input->name),
                      at_least ? "at least" : "at most",
                      words_grid(flow, value, grid, input->dimension),
                      strcmp(input->name, "edge") == 0 ? " (0–100 %)" : "");
}

static const char *remedy_words(struct flow *flow, const struct study_chapter *chapter,
                                const struct study_rule *rule,
                                const struct guideline_remedy *remedy) {
    const struct model_input *found = &chapter->model->inputs[rule->find];
    const char *bound = bound_words(flow, &chapter->model->inputs[remedy->input], remedy->at_least,
                                    remedy->value, remedy->grid);
    if (remedy->kind == GUIDELINE_TIED_COPPER)
        return flow_print(flow,
                          "with a ground strip of %s between, tied along its whole length, %s",
                          words_value(flow, remedy->strip_width, DIMENSION_LENGTH), bound);
    if (remedy->kind == GUIDELINE_OTHER_BOARD)
        return flow_print(flow, "on the board “%s” %s", flow_escape(flow, remedy->stackup->name),
                          bound);
    return flow_print(flow, "%s at %s of %s", bound, words_article(flow, found->name),
                      words_value(flow, rule->find_smallest ? rule->within.to : rule->within.from,
                                  found->dimension));
}

/* The boards beside it that can. */
static const char *other_boards(struct flow *flow, const struct study_chapter *chapter,
                                const struct guideline_rule *rule, size_t v, const char *text) {
    const struct study_rule *stated = rule->rule;
    const struct study_variant *own = &stated->variants[v];
    for (size_t w = 0; w < stated->variant_count; w++) {
        const struct guideline_finding *finding = &rule->findings[w];
        const struct study_variant *other = &stated->variants[w];
        bool met =
            finding->status == GUIDELINE_FOUND || finding->status == GUIDELINE_MET_EVERYWHERE;
        if (!met || other->stackup == own->stackup || other->stackup == NULL ||
            other->aggressor != own->aggressor || other->victim != own->victim)
            continue;
        text = flow_print(
            flow, "%s%son the board “%s” %s", text, *text != '\0' ? "; or " : "",
            flow_escape(flow, other->label != NULL ? other->label : other->stackup->name),
            bound_words(flow, &chapter->model->inputs[stated->find], stated->find_smallest,
                        finding->value, stated->grid));
    }
    return text;
}

/* "Two layers: length at most 12 mm at a gap of 12 mm; or on the board “Four layers” gap at least
 * 0.4 mm." */
static const char *would_do(struct flow *flow, const struct study_chapter *chapter,
                            const struct guideline_rule *rule) {
    const struct study_rule *stated = rule->rule;
    const char *all = "";
    for (size_t v = 0; v < stated->variant_count; v++) {
        const struct guideline_finding *finding = &rule->findings[v];
        const char *label = stated->variants[v].label, *text = "";
        if (finding->status != GUIDELINE_CANNOT_BE_MET)
            continue;
        for (size_t i = 0; i < finding->remedy_count; i++)
            text = flow_print(flow, "%s%s%s", text, i > 0 ? "; or " : "",
                              remedy_words(flow, chapter, stated, &finding->remedies[i]));
        text = other_boards(flow, chapter, rule, v, text);
        if (*text != '\0')
            all = flow_print(flow, "%s%s%s%s%s.", all, *all != '\0' ? " " : "",
                             label != NULL ? flow_escape(flow, label) : "",
                             label != NULL ? ": " : "", text);
    }
    return all;
}

/* A rule on the peak of a single edge says nothing on the sequences that the stated bit time
 * allows, however plainly the card shows that bit time among what is given. */
static const char *condition_words(struct flow *flow, const struct study_rule *rule,
                                   const struct study_chapter *chapter) {
    static const char *const of_one_edge[] = {"near_end_peak",  "far_end_peak",   "worst_peak",
                                              "receiver_peak",  "near_end_ratio", "far_end_ratio",
                                              "near_end_level", "far_end_level"};
    const char *words = words_condition(flow, rule, chapter, &rule->variants[0]);
    const char *output = chapter->model->outputs[rule->condition.output].name;
    size_t bit_time = model_input_index(chapter->model, "bit_time");
    bool many = false;
    for (size_t v = 0; bit_time < chapter->model->input_count && v < rule->variant_count; v++)
        many = many || rule->variants[v].settings[bit_time].range.to > 0.0;
    for (size_t i = 0; many && i < sizeof of_one_edge / sizeof *of_one_edge; i++)
        if (strcmp(output, of_one_edge[i]) == 0)
            return flow_print(
                flow, "%s, for a single edge: sequences at the bit time are not counted", words);
    return words;
}

static size_t lines_of(struct flow *flow, const struct study_chapter *chapter,
                       const struct guideline_rule *result, double width, struct line *lines) {
    const struct study_rule *rule = result->rule;
    const char *remedies = would_do(flow, chapter, result);
    size_t count = 0;
    lines[count++] = (struct line){"So that", condition_words(flow, rule, chapter)};
    if (*remedies != '\0')
        lines[count++] = (struct line){
            "Would do", flow_shorten(flow, THEME_BODY, remedies, width, REMEDY_LINES)};
    if (rule->applies_to != NULL)
        lines[count++] = (struct line){"Applies to", flow_escape(flow, rule->applies_to)};
    lines[count++] = (struct line){"Proven over", proven_over(flow, chapter, rule)};
    if (rule->why != NULL)
        lines[count++] = (struct line){"Why", flow_escape(flow, rule->why)};
    if (rule->check != NULL)
        lines[count++] = (struct line){"Check", flow_escape(flow, rule->check)};
    bool driven = model_input_index(chapter->model, "edge") != SIZE_MAX;
    lines[count++] = (struct line){"Standing", driven ? CROSSTALK_NOTE : GEOMETRY_NOTE};
    return count;
}

static const double INSET = 10.0, NAME_WIDTH = 58.0, PAD = 8.0, STRENGTH_ROOM = 60.0;
enum { TITLE_LINES = 8 };

/* A card as it is set, in one piece when a page holds it. */
struct card {
    struct flow *flow;
    const struct study_rule *rule;
    const char *title; /* markup, identifier and title */
    const struct table_layout *table;
    const struct line *lines;
    size_t line_count;
    double x, width;
    double top; /* of its part on this page */
};

static const char *card_title(struct flow *flow, const struct study_chapter *chapter,
                              const struct study_rule *rule, double width) {
    const char *title = rule->title != NULL ? rule->title : chapter->title;
    const char *markup =
        flow_print(flow, "%s   %s", flow_escape(flow, rule->id), flow_escape(flow, title));
    return flow_shorten(flow, THEME_SECTION, markup, width, TITLE_LINES);
}

static double title_height(const struct card *card, const char *title) {
    return flow_text_height(card->flow, THEME_SECTION, title, card->width - STRENGTH_ROOM) + 2.0;
}

static void draw_head(struct card *card, bool again) {
    struct flow *flow = card->flow;
    const char *title =
        again ? flow_print(flow, "%s, continued", flow_escape(flow, card->rule->id)) : card->title;
    const char *strength = words_strength(card->rule->strength);
    double strength_width =
        text_width(flow->setter, strength, theme_style(THEME_STRONG), flow->error);
    card->top = flow->y;
    flow->y += PAD;
    flow_text_box(flow, THEME_SECTION, title, card->x, flow->y, card->width - STRENGTH_ROOM);
    flow_text_box(flow, THEME_STRONG, strength, card->x + card->width - strength_width,
                  flow->y + 2.0, 0.0);
    flow->y += title_height(card, title);
}

/* The bar beside what of the card stands on this page. */
static void draw_bar(struct card *card) {
    struct flow *flow = card->flow;
    if (!flow_failed(flow))
        scene_rectangle(flow->scene, flow->page.left, card->top, 3.0, flow->y - card->top,
                        theme_colour(THEME_ACCENT));
}

static void need_in_card(struct card *card, double height) {
    struct flow *flow = card->flow;
    if (flow_failed(flow) || flow_room(flow) >= height)
        return;
    draw_bar(card);
    flow_new_page(flow, flow->running);
    if (!flow_failed(flow))
        draw_head(card, true);
}

/* The row after the last that stands on this page. */
static size_t part(const struct card *card, size_t first, bool fresh) {
    double room = flow_room(card->flow) - PAD;
    size_t end = table_fit(card->table, first, room);
    return end == first && fresh ? table_fit_anyhow(card->table, first, room) : end;
}

static void draw_findings(struct card *card) {
    struct flow *flow = card->flow;
    size_t first = 0, count = card->rule->variant_count;
    for (bool fresh = false; first < count && !flow_failed(flow); fresh = true) {
        size_t end = part(card, first, fresh);
        if (end == first && fresh)
            error_set(flow->error, ERROR_INPUT, "rule %s: a row is higher than a page",
                      card->rule->id);
        if (end > first) {
            table_draw(card->table, first, end, flow->scene, card->x, flow->y);
            flow->y += table_height(card->table, first, end) + 6.0;
            first = end;
        }
        if (first < count)
            need_in_card(card, flow->page.bottom - flow->page.top);
    }
}

static enum theme_text line_style(const struct card *card, size_t i) {
    return i + 1 == card->line_count ? THEME_NOTE : THEME_BODY;
}

static double line_height(const struct card *card, size_t i) {
    return flow_text_height(card->flow, line_style(card, i), card->lines[i].text,
                            card->width - NAME_WIDTH) +
           2.0;
}

static void draw_line(struct card *card, size_t i) {
    struct flow *flow = card->flow;
    enum theme_text style = line_style(card, i);
    need_in_card(card, line_height(card, i));
    flow_text_box(flow, THEME_NOTE, card->lines[i].name, card->x,
                  flow->y + (style == THEME_BODY ? 1.0 : 0.0), NAME_WIDTH);
    flow->y += flow_text_box(flow, style, card->lines[i].text, card->x + NAME_WIDTH, flow->y,
                             card->width - NAME_WIDTH) +
               2.0;
}

/* The whole card; only its head and the start of its table when no page holds the whole. */
static double wanted(const struct card *card) {
    const struct theme_page *page = &card->flow->page;
    double head = 2.0 * PAD + title_height(card, card->title), whole = head + 6.0;
    whole += table_height(card->table, 0, card->rule->variant_count);
    for (size_t i = 0; i < card->line_count; i++)
        whole += line_height(card, i);
    return whole <= page->bottom - page->top ? whole : head + table_start(card->table);
}

static void draw_card(struct card *card) {
    struct flow *flow = card->flow;
    flow_gap(flow, 14.0);
    flow_need(flow, wanted(card));
    if (flow_failed(flow))
        return;
    flow_entry(flow, 1,
               flow_print(flow, "%s %s", card->rule->id,
                          card->rule->title != NULL ? card->rule->title : ""),
               pages_destination(flow, "rule", card->rule->id));
    draw_head(card, false);
    draw_findings(card);
    for (size_t i = 0; i < card->line_count; i++)
        draw_line(card, i);
    flow->y += PAD;
    draw_bar(card);
}

void pages_rule_card(struct flow *flow, const struct guideline_chapter *chapter,
                     const struct guideline_rule *rule) {
    double x = flow->page.left + INSET, width = flow->page.right - x;
    struct line lines[MOST_LINES];
    struct card card = {
        .flow = flow,
        .rule = rule->rule,
        .title = card_title(flow, chapter->chapter, rule->rule, width - STRENGTH_ROOM),
        .table = findings(flow, chapter->chapter, rule, width),
        .lines = lines,
        .line_count = lines_of(flow, chapter->chapter, rule, width - NAME_WIDTH, lines),
        .x = x,
        .width = width};
    if (card.table != NULL && !flow_failed(flow))
        draw_card(&card);
}

/* Rules at a glance: a row a rule (and a row more for every other thing set side by side), a column
 * a board. */

#include "pages.h"

#include "words.h"

#include <string.h>

enum {
    LEADING_COLUMNS = 3,
    MOST_BOARDS = TABLE_MOST_COLUMNS - LEADING_COLUMNS - 1,
    MOST_ROWS = 4000
};

struct glance {
    struct flow *flow;
    struct table_row *rows;
    size_t row_count;
    size_t columns;
    bool boardless; /* some rule speaks of no board of the study: one column more */
};

/* What distinguishes variants beside the board. */
static bool same_but_for_the_board(const struct study_chapter *chapter,
                                   const struct study_variant *a, const struct study_variant *b) {
    if (a->aggressor != b->aggressor || a->victim != b->victim)
        return false;
    for (size_t i = 0; i < chapter->model->input_count; i++)
        if (a->settings[i].origin == STUDY_COMPARED && a->settings[i].value != b->settings[i].value)
            return false;
    return true;
}

static const char *variety(struct flow *flow, const struct study_chapter *chapter,
                           const struct study_variant *variant) {
    const char *text = "";
    for (size_t i = 0; i < chapter->model->input_count; i++)
        if (variant->settings[i].origin == STUDY_COMPARED) {
            const struct model_input *input = &chapter->model->inputs[i];
            text = flow_print(flow, "%s%s%s %s", text, *text != '\0' ? ", " : "",
                              words_name(flow, input->name),
                              words_input(flow, input, variant->settings[i].value));
        }
    return text;
}

static size_t board_column(const struct glance *glance, const struct study_stackup *stackup) {
    const struct study *study = glance->flow->guideline->study;
    for (size_t i = 0; i < study->stackup_count; i++)
        if (&study->stackups[i] == stackup)
            return LEADING_COLUMNS + i;
    return LEADING_COLUMNS + study->stackup_count;
}

static void add_rows(struct glance *glance, const struct guideline_chapter *chapter,
                     const struct guideline_rule *rule) {
    struct flow *flow = glance->flow;
    const struct study_rule *stated = rule->rule;
    for (size_t v = 0; v < stated->variant_count; v++) {
        size_t first = 0;
        while (!same_but_for_the_board(chapter->chapter, &stated->variants[first],
                                       &stated->variants[v]))
            first++;
        if (first != v || glance->row_count == MOST_ROWS)
            continue;
        if (v > 0) /* the rows of one rule stay together */
            glance->rows[glance->row_count - 1].keep = true;
        const char **cells = arena_new(flow->arena, TABLE_MOST_COLUMNS, const char *, flow->error);
        if (cells == NULL)
            return;
        const char *what = variety(flow, chapter->chapter, &stated->variants[v]);
        const char *title =
            flow_escape(flow, stated->title != NULL ? stated->title : chapter->chapter->title);
        cells[0] = v == 0 ? flow_print(flow, "<b>%s</b>", flow_escape(flow, stated->id)) : "";
        cells[1] =
            v == 0 ? flow_print(flow, "%s%s%s", title, *what != '\0' ? "; " : "", what) : what;
        cells[2] = v == 0 ? words_strength(stated->strength) : "";
        for (size_t other = v; other < stated->variant_count; other++)
            if (same_but_for_the_board(chapter->chapter, &stated->variants[v],
                                       &stated->variants[other]))
                cells[board_column(glance, stated->variants[other].stackup)] =
                    words_finding_short(flow, stated, chapter->chapter, &rule->findings[other]);
        glance->rows[glance->row_count++] = (struct table_row){.cells = cells, .rule = v == 0};
    }
}

static bool has_boardless(const struct guideline *guideline) {
    for (size_t c = 0; c < guideline->study->chapter_count; c++)
        for (size_t r = 0; r < guideline->chapters[c].chapter->rule_count; r++)
            for (size_t v = 0; v < guideline->chapters[c].rules[r].rule->variant_count; v++)
                if (guideline->chapters[c].rules[r].rule->variants[v].stackup == NULL)
                    return true;
    return false;
}

static void heading_row(struct glance *glance, const struct guideline_chapter *chapter) {
    struct flow *flow = glance->flow;
    const char **cells = arena_new(flow->arena, TABLE_MOST_COLUMNS, const char *, flow->error);
    if (cells == NULL || glance->row_count == MOST_ROWS)
        return;
    cells[0] = flow_escape(flow, chapter->chapter->title);
    glance->rows[glance->row_count++] =
        (struct table_row){.cells = cells, .heading = true, .strong = true};
}

static void draw(struct glance *glance) {
    struct flow *flow = glance->flow;
    const struct study *study = flow->guideline->study;
    struct table_column columns[TABLE_MOST_COLUMNS] = {0};
    struct table_head heads[TABLE_MOST_COLUMNS] = {{"Rule", 1}, {"What", 1}, {"Strength", 1}};
    columns[1].least = 84.0;
    columns[1].most = 170.0;
    for (size_t i = 0; i < study->stackup_count; i++)
        heads[LEADING_COLUMNS + i].text = flow_escape(flow, study->stackups[i].name);
    if (glance->boardless)
        heads[LEADING_COLUMNS + study->stackup_count].text = "Without a board";
    struct table_head_row head = {heads, glance->columns};
    const char *notes[] = {
        "≥ at least, ≤ at most. A rule holds for everything that it permits; its card says for "
        "which lengths, edges, drivers and tolerances."};
    struct table table = {.name = "glance",
                          .leading = 2,
                          .columns = columns,
                          .column_count = glance->columns,
                          .heads = &head,
                          .head_count = 1,
                          .rows = glance->rows,
                          .row_count = glance->row_count,
                          .notes = notes,
                          .note_count = 1,
                          .stretch = true};
    flow_table(flow, &table);
}

void pages_glance(struct flow *flow) {
    const struct guideline *guideline = flow->guideline;
    struct glance glance = {.flow = flow, .boardless = has_boardless(guideline)};
    glance.columns = LEADING_COLUMNS + guideline->study->stackup_count + (glance.boardless ? 1 : 0);
    flow_heading(flow, 0, "Rules at a glance", "part.glance", 0.0);
    glance.rows = arena_new(flow->arena, MOST_ROWS, struct table_row, flow->error);
    if (flow_failed(flow))
        return;
    if (glance.columns > TABLE_MOST_COLUMNS) {
        error_set(flow->error, ERROR_INPUT, "more than %d boards do not fit side by side",
                  MOST_BOARDS);
        return;
    }
    for (size_t c = 0; c < guideline->study->chapter_count; c++) {
        const struct guideline_chapter *chapter = &guideline->chapters[c];
        if (chapter->chapter->rule_count > 0)
            heading_row(&glance, chapter);
        for (size_t r = 0; r < chapter->chapter->rule_count; r++)
            add_rows(&glance, chapter, &chapter->rules[r]);
    }
    if (glance.row_count == 0)
        flow_text(flow, THEME_BODY, "This study states no rules.");
    else
        draw(&glance);
}

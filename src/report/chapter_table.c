#include "chapter.h"

#include "words.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* ---- numbers in one unit a column group ---- */

/* Three digits at most, never more decimals than four; a real minus. */
static const char *number(struct flow *flow, double value) {
    if (!isfinite(value))
        return "–";
    double size = fabs(value);
    int decimals = size >= 100.0 ? 0 : size >= 10.0 ? 1 : size >= 1.0 ? 2 : 3;
    if (size > 0.0 && size < 0.1)
        decimals = 4;
    double coarse = size >= 1000.0 ? pow(10.0, floor(log10(size)) - 2.0) : 0.0;
    const char *text =
        flow_print(flow, "%.*f", decimals, coarse > 0.0 ? round(size / coarse) * coarse : size);
    return value < 0.0 ? flow_print(flow, "−%s", text) : text;
}

/* The unit that suits most numbers of a group is that of their geometric middle. */
static double typical_of(const struct guideline_chapter *chapter, size_t output) {
    double largest = 0.0, smallest = INFINITY;
    for (size_t c = 0; c < chapter->curve_count; c++)
        for (size_t i = 0;
             chapter->curves[c].output == output && i < chapter->chapter->vary.point_count; i++) {
            double size = fabs(chapter->curves[c].y[i]);
            if (!isfinite(size) || size == 0.0)
                continue;
            largest = fmax(largest, size);
            smallest = fmin(smallest, size);
        }
    return largest > 0.0 ? sqrt(largest * smallest) : 0.0;
}

/* Every output that some chart draws, once. */
static size_t outputs_of(const struct study_chapter *chapter, size_t *outputs, size_t most) {
    size_t count = 0;
    for (size_t c = 0; c < chapter->chart_count; c++)
        for (size_t o = 0; o < chapter->charts[c].output_count; o++) {
            bool seen = false;
            for (size_t i = 0; i < count; i++)
                seen = seen || outputs[i] == chapter->charts[c].outputs[o];
            if (!seen && count < most)
                outputs[count++] = chapter->charts[c].outputs[o];
        }
    return count;
}

static size_t point_index(const struct study_vary *vary, double wanted) {
    size_t best = 0;
    for (size_t i = 1; i < vary->point_count; i++)
        if (fabs(vary->points[i] - wanted) < fabs(vary->points[best] - wanted))
            best = i;
    return best;
}

/* ---- the chapter's table ---- */

enum { MOST_OUTPUTS = 8 };

static void one_table(struct flow *flow, const struct guideline_chapter *chapter,
                      const size_t *outputs, size_t output_count, const char *name) {
    const struct study_chapter *asked = chapter->chapter;
    const struct model_input *input = &asked->model->inputs[asked->vary.input];
    size_t variants = asked->variant_count, columns = 1 + output_count * variants;
    struct table_column *declared =
        arena_new(flow->arena, columns, struct table_column, flow->error);
    struct table_head *groups =
        arena_new(flow->arena, 1 + output_count, struct table_head, flow->error);
    struct table_head *names = arena_new(flow->arena, columns, struct table_head, flow->error);
    struct table_row *rows =
        arena_new(flow->arena, asked->table_point_count, struct table_row, flow->error);
    if (declared == NULL || groups == NULL || names == NULL || rows == NULL)
        return;
    double scales[MOST_OUTPUTS];
    groups[0] = (struct table_head){"", 1};
    names[0].text = words_capital(flow, input->name);
    for (size_t o = 0; o < output_count; o++) {
        const struct model_output *output = &asked->model->outputs[outputs[o]];
        const char *unit = quantity_axis_unit(typical_of(chapter, outputs[o]), output->dimension,
                                              QUANTITY_TYPOGRAPHIC,
                                              flow->guideline->study->document.lengths, &scales[o]);
        groups[1 + o] = (struct table_head){
            *unit != '\0' ? flow_print(flow, "%s, %s", output->title, unit) : output->title,
            variants};
        for (size_t v = 0; v < variants; v++)
            names[1 + o * variants + v].text =
                asked->variants[v].label != NULL ? flow_escape(flow, asked->variants[v].label) : "";
    }
    for (size_t i = 1; i < columns; i++)
        declared[i].align = TABLE_DECIMAL;
    for (size_t r = 0; r < asked->table_point_count; r++) {
        const char **cells = arena_new(flow->arena, columns, const char *, flow->error);
        if (cells == NULL)
            return;
        size_t point = point_index(&asked->vary, asked->table_points[r]);
        cells[0] = words_value(flow, asked->vary.points[point], input->dimension);
        for (size_t o = 0; o < output_count; o++)
            for (size_t v = 0; v < variants; v++) {
                const struct guideline_curve *curve = guideline_find_curve(chapter, v, outputs[o]);
                cells[1 + o * variants + v] =
                    curve == NULL ? "" : number(flow, curve->y[point] * scales[o]);
            }
        rows[r].cells = cells;
    }
    struct table_head_row heads[2] = {{groups, 1 + output_count}, {names, columns}};
    struct table table = {.name = name,
                          .leading = 1,
                          .columns = declared,
                          .column_count = columns,
                          .heads = heads,
                          .head_count = variants > 1 || asked->variants[0].label != NULL ? 2 : 1,
                          .rows = rows,
                          .row_count = asked->table_point_count,
                          .stretch = columns > 5};
    flow_gap(flow, 10.0);
    flow_table(flow, &table);
}

void chapter_table(struct flow *flow, const struct guideline_chapter *chapter) {
    const struct study_chapter *asked = chapter->chapter;
    size_t outputs[MOST_OUTPUTS];
    size_t count = outputs_of(asked, outputs, MOST_OUTPUTS);
    if (asked->table_point_count == 0 || flow_failed(flow))
        return;
    /* As many outputs side by side as leave columns that can be read. */
    size_t side = asked->variant_count >= 5   ? 1
                  : asked->variant_count >= 4 ? 2
                                              : 9 / asked->variant_count;
    if (side > 3)
        side = 3;
    for (size_t first = 0; first < count; first += side)
        one_table(flow, chapter, outputs + first, count - first < side ? count - first : side,
                  flow_print(flow, "%s-table-%zu", asked->id, first / side + 1));
}

/* ---- a rule's table ---- */

static const char *const row_note =
    "Each cell is proven like a rule, over everything that its row permits.";
static const char *const cells_note =
    "Each cell is proven like a rule, over everything that its row and column permit.";

static void board_table(struct flow *flow, const struct guideline_chapter *chapter,
                        const struct guideline_rule *rule, size_t v) {
    const struct study_rule *stated = rule->rule;
    size_t row_count = stated->rows.count,
           column_count = stated->columns.count > 0 ? stated->columns.count : 1;
    struct table_row *rows = arena_new(flow->arena, row_count, struct table_row, flow->error);
    struct table_column *columns =
        arena_new(flow->arena, column_count + 1, struct table_column, flow->error);
    struct table_head *heads =
        arena_new(flow->arena, column_count + 1, struct table_head, flow->error);
    if (rows == NULL || columns == NULL || heads == NULL)
        return;
    heads[0].text = words_capital(flow, stated->rows.name);
    for (size_t c = 0; c < column_count; c++) {
        columns[1 + c].align = TABLE_CENTRE;
        heads[1 + c].text =
            stated->columns.count == 0
                ? words_capital(flow, chapter->chapter->model->inputs[stated->find].name)
                : flow_escape(flow, stated->columns.labels[c]);
    }
    bool grouped = stated->columns.count > 0;
    const struct table_head groups[2] = {
        {"", 1}, {grouped ? words_capital(flow, stated->columns.name) : "", column_count}};
    for (size_t r = 0; r < row_count; r++) {
        const char **cells = arena_new(flow->arena, column_count + 1, const char *, flow->error);
        if (cells == NULL)
            return;
        cells[0] = flow_escape(flow, stated->rows.labels[r]);
        for (size_t c = 0; c < column_count; c++)
            cells[1 + c] =
                words_finding_short(flow, stated, chapter->chapter,
                                    &rule->cells[(v * row_count + r) * column_count + c]);
        rows[r].cells = cells;
    }
    const struct table_head_row head[2] = {{groups, 2}, {heads, column_count + 1}};
    const char *label = stated->variants[v].label;
    const char *found = words_name(flow, chapter->chapter->model->inputs[stated->find].name);
    struct table table = {.name = flow_print(flow, "%s-table-%zu", stated->id, v + 1),
                          .caption =
                              flow_print(flow, "%s: %s%s%s", flow_escape(flow, stated->id), found,
                                         label != NULL ? " on " : "", flow_escape(flow, label)),
                          .leading = 1,
                          .columns = columns,
                          .column_count = column_count + 1,
                          .heads = grouped ? head : &head[1],
                          .head_count = grouped ? 2 : 1,
                          .rows = rows,
                          .row_count = row_count,
                          .notes = &cells_note,
                          .note_count = v + 1 == stated->variant_count ? 1 : 0,
                          .stretch = column_count > 4};
    flow_gap(flow, 8.0);
    flow_table(flow, &table);
}

/* A table of one input: the boards are its columns. */
static void boards_table(struct flow *flow, const struct guideline_chapter *chapter,
                         const struct guideline_rule *rule) {
    const struct study_rule *stated = rule->rule;
    size_t row_count = stated->rows.count, variants = stated->variant_count;
    struct table_row *rows = arena_new(flow->arena, row_count, struct table_row, flow->error);
    struct table_column *columns =
        arena_new(flow->arena, variants + 1, struct table_column, flow->error);
    struct table_head *heads = arena_new(flow->arena, variants + 1, struct table_head, flow->error);
    if (rows == NULL || columns == NULL || heads == NULL)
        return;
    heads[0].text = words_capital(flow, stated->rows.name);
    for (size_t v = 0; v < variants; v++) {
        columns[1 + v].align = TABLE_CENTRE;
        heads[1 + v].text = flow_escape(flow, stated->variants[v].label);
    }
    for (size_t r = 0; r < row_count; r++) {
        const char **cells = arena_new(flow->arena, variants + 1, const char *, flow->error);
        if (cells == NULL)
            return;
        cells[0] = flow_escape(flow, stated->rows.labels[r]);
        for (size_t v = 0; v < variants; v++)
            cells[1 + v] = words_finding_short(flow, stated, chapter->chapter,
                                               &rule->cells[v * row_count + r]);
        rows[r].cells = cells;
    }
    const struct table_head_row head = {heads, variants + 1};
    const struct study_chapter *asked = chapter->chapter;
    struct table table = {.name = flow_print(flow, "%s-table", stated->id),
                          .caption =
                              flow_print(flow, "%s: %s against %s", flow_escape(flow, stated->id),
                                         words_name(flow, asked->model->inputs[stated->find].name),
                                         words_name(flow, stated->rows.name)),
                          .columns = columns,
                          .column_count = variants + 1,
                          .heads = &head,
                          .head_count = 1,
                          .rows = rows,
                          .row_count = row_count,
                          .notes = &row_note,
                          .note_count = 1,
                          .leading = 1,
                          .stretch = variants > 3};
    flow_gap(flow, 8.0);
    flow_table(flow, &table);
}

void chapter_rule_table(struct flow *flow, const struct guideline_chapter *chapter,
                        const struct guideline_rule *rule) {
    if (rule->rule->rows.count == 0 || rule->cells == NULL)
        return;
    bool side_by_side = rule->rule->columns.count == 0 && rule->rule->variant_count > 1;
    if (side_by_side)
        boards_table(flow, chapter, rule);
    for (size_t v = 0; v < rule->rule->variant_count && !side_by_side && !flow_failed(flow); v++)
        board_table(flow, chapter, rule, v);
}

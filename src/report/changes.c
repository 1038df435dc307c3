/* What became stricter, what looser, and why, against the issue before. */

#include "pages.h"

#include "words.h"

#include <math.h>

static const char *kind_words(enum guideline_change_kind kind) {
    switch (kind) {
    case GUIDELINE_NEW:
        return "new";
    case GUIDELINE_GONE:
        return "gone";
    case GUIDELINE_STRICTER:
        return "<b>stricter</b>";
    case GUIDELINE_LOOSER:
        return "looser";
    case GUIDELINE_SAME:
        break;
    }
    return "unchanged";
}

static const char *value(struct flow *flow, double number, enum dimension dimension) {
    return isnan(number) ? "–" : words_value(flow, number, dimension);
}

void pages_changes(struct flow *flow) {
    const struct guideline *guideline = flow->guideline;
    if (guideline->previous_revision == NULL)
        return;
    flow_heading(flow, 0, "What changed", "part.changes", 0.0);
    flow_text(
        flow, THEME_BODY,
        flow_print(flow, "Against revision %s.", flow_escape(flow, guideline->previous_revision)));
    flow_gap(flow, 6.0);
    struct table_row *rows =
        arena_new(flow->arena, guideline->change_count, struct table_row, flow->error);
    for (size_t i = 0; rows != NULL && i < guideline->change_count; i++) {
        const struct guideline_change *change = &guideline->changes[i];
        const char **cells = arena_new(flow->arena, 6, const char *, flow->error);
        if (cells == NULL)
            return;
        cells[0] = flow_print(flow, "<b>%s</b>", flow_escape(flow, change->rule_id));
        cells[1] = flow_escape(flow, change->variant);
        cells[2] = kind_words(change->kind);
        cells[3] = value(flow, change->before, change->dimension);
        cells[4] = value(flow, change->after, change->dimension);
        cells[5] = flow_escape(flow, change->why);
        rows[i].cells = cells;
    }
    const struct table_column columns[6] = {{0}, {.most = 110.0}, {0}, {0}, {0}, {.most = 180.0}};
    const struct table_head heads[6] = {{"Rule", 1},   {"Board or case", 1}, {"Became", 1},
                                        {"Before", 1}, {"Now", 1},           {"Because", 1}};
    const struct table_head_row head = {heads, 6};
    struct table table = {.name = "changes",
                          .columns = columns,
                          .column_count = 6,
                          .heads = &head,
                          .head_count = 1,
                          .rows = rows,
                          .row_count = guideline->change_count,
                          .stretch = true};
    if (guideline->change_count == 0)
        flow_text(flow, THEME_BODY, "No rule changed.");
    else
        flow_table(flow, &table);
}

#include "rule.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

enum { MOST_ENTRIES = 30, MOST_CELLS = 400 };

static bool check_axis_input(const struct reader *reader, const struct draft *draft,
                             const struct node *node, const struct rule_draft *rule, size_t input) {
    const struct model_input *declared = &draft->chapter.model->inputs[input];
    if (rule->found && input == rule->rule.find)
        return reader_refuse_key(reader, node,
                                 "%s is what the rule finds; it cannot be a row or a "
                                 "column too",
                                 declared->name);
    if (draft_is_compared(draft, declared->name))
        return reader_refuse_key(reader, node,
                                 "%s is compared in this chapter; it cannot be a row "
                                 "or a column too",
                                 declared->name);
    return declared->not_yet == NULL ||
           reader_refuse_key(reader, node, "%s is not yet supported: %s", declared->name,
                             declared->not_yet);
}

static bool read_entries(const struct reader *reader, const struct node *node,
                         const struct model_input *input, struct study_cell_axis *axis) {
    if (node->kind != NODE_LIST)
        return reader_refuse(reader, node, "found %s; expected a list [ ] of values or ranges",
                             tree_kind_name(node->kind));
    if (node->count == 0 || node->count > MOST_ENTRIES)
        return reader_refuse(reader, node, "%zu entries; 1 to %d are accepted", node->count,
                             MOST_ENTRIES);
    struct interval *ranges = arena_new(reader->arena, node->count, struct interval, reader->error);
    const char **labels = arena_new(reader->arena, node->count, const char *, reader->error);
    if (ranges == NULL || labels == NULL)
        return false;
    bool ok = true;
    for (const struct node *child = node->first; child != NULL; child = child->next) {
        if (!given_interval(reader, child, input, &ranges[axis->count])) {
            ok = false;
            continue;
        }
        labels[axis->count++] = child->text;
    }
    axis->ranges = ranges;
    axis->labels = labels;
    return ok;
}

static bool is_signal_axis(const char *key) {
    return strcmp(key, "aggressor") == 0 || strcmp(key, "victim") == 0;
}

/* Signal classes, each with what it sets; a victim needs a budget when the rule is held to it. */
static bool read_signals(const struct reader *reader, const struct draft *draft,
                         const struct node *node, const struct rule_draft *rule,
                         struct study_cell_axis *axis) {
    if (draft_is_compared(draft, node->key))
        return reader_refuse_key(reader, node,
                                 "%s is compared in this chapter; it cannot be a row or a column "
                                 "too",
                                 node->key);
    if (node->kind != NODE_LIST)
        return reader_refuse(reader, node, "found %s; expected a list [ ] of signals",
                             tree_kind_name(node->kind));
    if (node->count == 0 || node->count > MOST_ENTRIES)
        return reader_refuse(reader, node, "%zu entries; 1 to %d are accepted", node->count,
                             MOST_ENTRIES);
    const struct study_signal **signals =
        arena_new(reader->arena, node->count, const struct study_signal *, reader->error);
    const char **labels = arena_new(reader->arena, node->count, const char *, reader->error);
    if (signals == NULL || labels == NULL)
        return false;
    bool ok = true, budget = rule->rule.condition.against == STUDY_BUDGET;
    for (const struct node *child = node->first; child != NULL; child = child->next) {
        if (child->kind != NODE_TEXT) {
            ok = reader_refuse(reader, child, "found %s; expected the name of a signal",
                               tree_kind_name(child->kind));
            continue;
        }
        const struct study_signal *signal = signals_find(reader, child);
        if (signal == NULL) {
            ok = false;
            continue;
        }
        if (budget && strcmp(node->key, "victim") == 0 && !signal->is_victim)
            ok = reader_refuse(reader, child, "the signal \"%s\" has no \"victim\" and no budget",
                               reader_shown(reader, child));
        labels[axis->count] = signal->name;
        signals[axis->count++] = signal;
    }
    axis->signals = signals;
    axis->labels = labels;
    return ok;
}

static bool read_axis(const struct reader *reader, const struct draft *draft,
                      const struct node *node, const struct rule_draft *rule,
                      struct study_cell_axis *axis) {
    const struct model *model = draft->chapter.model;
    if (node->kind != NODE_OBJECT || node->count != 1)
        return reader_refuse(reader, node,
                             "found %s; expected one input with its values, {\"length\": [\"up to "
                             "50 mm\", \"up to 100 mm\"]}",
                             node->kind != NODE_OBJECT ? tree_kind_name(node->kind)
                             : node->count > 1         ? "more than one input"
                                                       : "no input");
    const struct node *child = node->first;
    axis->name = child->key;
    if (is_signal_axis(child->key))
        return read_signals(reader, draft, child, rule, axis);
    axis->input = given_input(reader, child, model, &keys_cells);
    return axis->input != SIZE_MAX && check_axis_input(reader, draft, child, rule, axis->input) &&
           read_entries(reader, child, &model->inputs[axis->input], axis);
}

static bool check_cell(const struct reader *reader, const struct draft *draft,
                       const struct rule_draft *rule, const struct node *node,
                       const struct study_variant *variant, size_t input, double value) {
    const struct model *model = draft->chapter.model;
    const double ends[] = {rule->rule.within.from, rule->rule.within.to};
    for (size_t end = 0; end < 2; end++) {
        double inputs[MODEL_MOST_INPUTS];
        struct error error = {0};
        for (size_t k = 0; k < model->input_count; k++)
            inputs[k] = variant->settings[k].value;
        inputs[input] = value;
        inputs[rule->rule.find] = ends[end];
        if (!model_resolve(model, inputs, &error) || !model_check(model, inputs, &error))
            return reader_refuse(reader, node, "this cannot be built: %s", error.message);
    }
    return true;
}

static bool check_cells(const struct reader *reader, const struct draft *draft,
                        const struct rule_draft *rule, const struct node *node,
                        const struct study_cell_axis *axis) {
    bool ok = true;
    size_t i = 0;
    if (axis->ranges == NULL)
        return true;
    for (const struct node *child = node->first->first; child != NULL; child = child->next, i++)
        for (size_t v = 0; v < rule->variant_count && ok; v++)
            ok = check_cell(reader, draft, rule, child, &rule->variants[v], axis->input,
                            axis->ranges[i].from) &&
                 check_cell(reader, draft, rule, child, &rule->variants[v], axis->input,
                            axis->ranges[i].to);
    return ok;
}

static void put_signal(struct given *given, const struct study_cell_axis *axis, size_t index,
                       const struct node *node) {
    const struct node *child = node->first->first;
    for (size_t i = 0; i < index; i++)
        child = child->next;
    if (strcmp(axis->name, "aggressor") == 0) {
        given->aggressor = axis->signals[index];
        given->aggressor_node = child;
    } else {
        given->victim = axis->signals[index];
        given->victim_node = child;
    }
}

/* Where an axis has signals every cell is a case of its own, resolved as if the rule gave them. */
static bool build_cells(const struct reader *reader, const struct draft *draft,
                        struct rule_draft *rule, const struct node *rows,
                        const struct node *columns) {
    struct study_rule *read = &rule->rule;
    size_t row_count = read->rows.count, column_count = columns == NULL ? 1 : read->columns.count;
    if (read->rows.signals == NULL && read->columns.signals == NULL)
        return true;
    struct study_variant *cells =
        arena_new(reader->arena, rule->variant_count * row_count * column_count,
                  struct study_variant, reader->error);
    if (cells == NULL)
        return false;
    bool ok = true;
    for (size_t i = 0; i < row_count * column_count; i++) {
        struct rule_draft cell = *rule;
        if (read->rows.signals != NULL)
            put_signal(&cell.given, &read->rows, i / column_count, rows);
        if (read->columns.signals != NULL)
            put_signal(&cell.given, &read->columns, i % column_count, columns);
        if (!draft_resolve(reader, draft, &cell.given, &cell.variants, &cell.variant_count,
                           &cell.nodes))
            return false;
        rule_place_sweeps(draft, &cell);
        ok = rule_check_variants(reader, draft, &cell) && ok;
        for (size_t v = 0; v < cell.variant_count; v++)
            cells[v * row_count * column_count + i] = cell.variants[v];
    }
    read->cells = cells;
    return ok;
}

bool rule_read_table(const struct reader *reader, const struct draft *draft,
                     struct rule_draft *rule) {
    const struct node *node = tree_get(rule->node, "table");
    const struct node *rows = tree_get(node, "rows");
    const struct node *columns = tree_get(node, "columns");
    struct study_rule *read = &rule->rule;
    if (node == NULL)
        return true;
    if (rows == NULL)
        return false;
    bool ok = read_axis(reader, draft, rows, rule, &read->rows);
    if (columns != NULL)
        ok = read_axis(reader, draft, columns, rule, &read->columns) && ok;
    if (!ok)
        return false;
    if (columns != NULL && strcmp(read->rows.name, read->columns.name) == 0)
        return reader_refuse(reader, columns, "rows and columns are the same input");
    size_t cells =
        read->rows.count * (columns == NULL ? 1 : read->columns.count) * rule->variant_count;
    if (cells > MOST_CELLS)
        return reader_refuse(reader, node, "%zu cells in all variants; at most %d are accepted",
                             cells, MOST_CELLS);
    return !rule->found || rule->variant_count == 0 ||
           (build_cells(reader, draft, rule, rows, columns) &&
            check_cells(reader, draft, rule, rows, &read->rows) &&
            (columns == NULL || check_cells(reader, draft, rule, columns, &read->columns)));
}

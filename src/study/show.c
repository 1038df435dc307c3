#include "draft.h"

#include <stdint.h>
#include <string.h>

enum { MOST_CHARTS = 12, MOST_CURVE_SETS = 8, MOST_LIMITS = 12 };

static bool read_outputs(const struct reader *reader, const struct draft *draft,
                         const struct node *node, struct study_chart *chart) {
    const struct model *model = draft->chapter.model;
    if (node->count == 0 || node->count > MOST_CURVE_SETS)
        return reader_refuse(reader, node, "%zu outputs in one chart; 1 to %d are accepted",
                             node->count, MOST_CURVE_SETS);
    size_t *outputs = arena_new(reader->arena, node->count, size_t, reader->error);
    bool ok = outputs != NULL;
    for (const struct node *child = node->first; child != NULL && outputs != NULL;
         child = child->next) {
        size_t output = SIZE_MAX;
        if (child->kind != NODE_TEXT)
            ok = reader_refuse(reader, child, "found %s; expected the name of an output",
                               tree_kind_name(child->kind));
        else if ((output = given_output_word(reader, child, child->text, model)) == SIZE_MAX)
            ok = false;
        if (output == SIZE_MAX)
            continue;
        for (size_t i = 0; i < chart->output_count; i++)
            if (outputs[i] == output)
                ok = reader_refuse(reader, child, "%s is shown twice in one chart", child->text);
        outputs[chart->output_count++] = output;
        const struct model_output *first = &model->outputs[outputs[0]];
        if (model->outputs[output].dimension != first->dimension)
            ok = reader_refuse(reader, child, "%s is %s, but %s in the same chart is %s",
                               child->text, dimension_name(model->outputs[output].dimension),
                               first->name, dimension_name(first->dimension));
    }
    chart->outputs = outputs;
    return ok;
}

static bool read_single(const struct reader *reader, const struct draft *draft,
                        const struct node *node, struct study_chart *chart) {
    size_t *outputs = arena_new(reader->arena, 1, size_t, reader->error);
    if (outputs == NULL)
        return false;
    *outputs = given_output_word(reader, node, node->text, draft->chapter.model);
    chart->outputs = outputs;
    chart->output_count = 1;
    return *outputs != SIZE_MAX;
}

static bool check_x_scale(const struct reader *reader, const struct draft *draft,
                          const struct node *node, const struct study_chart *chart) {
    if (!chart->x_logarithmic || draft->vary_node == NULL || draft->chapter.vary.points[0] > 0)
        return true;
    return reader_refuse(reader, node, "the sweep starts at zero, a logarithmic axis cannot");
}

static bool check_y_scale(const struct reader *reader, const struct draft *draft,
                          const struct node *node, const struct study_chart *chart) {
    if (!chart->y_logarithmic)
        return true;
    const struct model_output *output = &draft->chapter.model->outputs[chart->outputs[0]];
    return (output->dimension != DIMENSION_LEVEL && output->dimension != DIMENSION_ATTENUATION) ||
           reader_refuse(reader, node, "%s is in decibels, its axis must be linear", output->name);
}

static bool read_detailed(const struct reader *reader, const struct draft *draft, struct node *node,
                          struct study_chart *chart) {
    keys_check(reader, node, &keys_chart);
    const struct node *outputs = tree_get(node, "outputs");
    const struct node *x = tree_get(node, "x");
    const struct node *y = tree_get(node, "y");
    chart->title = reader_text(tree_get(node, "title"));
    if (x != NULL)
        chart->x_logarithmic = reader_word(reader, x, keys_scales) == 1;
    if (y != NULL)
        chart->y_logarithmic = reader_word(reader, y, keys_scales) == 1;
    return outputs != NULL && read_outputs(reader, draft, outputs, chart) &&
           check_x_scale(reader, draft, x, chart) && check_y_scale(reader, draft, y, chart);
}

static bool read_chart(const struct reader *reader, const struct draft *draft, struct node *node,
                       struct study_chart *chart) {
    *chart = (struct study_chart){.x_logarithmic = draft->chapter.vary.logarithmic};
    switch (node->kind) {
    case NODE_TEXT:
        return read_single(reader, draft, node, chart);
    case NODE_LIST:
        return read_outputs(reader, draft, node, chart);
    case NODE_OBJECT:
        return read_detailed(reader, draft, node, chart);
    default:
        return reader_refuse(reader, node,
                             "found %s; expected an output, a list of outputs or {\"outputs\": "
                             "[...], ...}",
                             tree_kind_name(node->kind));
    }
}

bool draft_read_show(const struct reader *reader, struct draft *draft) {
    const struct node *node = tree_get(draft->node, "show");
    if (node == NULL)
        return false;
    if (node->kind != NODE_LIST)
        return reader_refuse(reader, node,
                             "found %s; expected a list of charts, such as "
                             "[\"worst_peak\"]",
                             tree_kind_name(node->kind));
    if (node->count == 0 || node->count > MOST_CHARTS)
        return reader_refuse(reader, node, "%zu charts; 1 to %d are accepted", node->count,
                             MOST_CHARTS);
    struct study_chart *charts =
        arena_new(reader->arena, node->count, struct study_chart, reader->error);
    if (charts == NULL)
        return false;
    bool ok = true;
    for (struct node *child = node->first; child != NULL; child = child->next)
        if (!read_chart(reader, draft, child, &charts[draft->chapter.chart_count++]))
            ok = false;
    draft->chapter.charts = charts;
    return ok;
}

static bool read_limit(const struct reader *reader, const struct draft *draft,
                       const struct node *node, struct study_limit *limit) {
    const struct model *model = draft->chapter.model;
    /* The output stands in the key, so the finding belongs there. */
    struct node key = *node;
    key.offset = node->key_offset;
    struct quantity quantity;
    limit->output = given_output_word(reader, &key, node->key, model);
    if (limit->output == SIZE_MAX ||
        !reader_quantity(reader, node, model->outputs[limit->output].dimension,
                         (struct bounds){-1e30, 1e30}, true, &quantity))
        return false;
    limit->value = quantity.value;
    limit->label = NULL;
    return true;
}

bool draft_read_limits(const struct reader *reader, struct draft *draft) {
    const struct node *node = tree_get(draft->node, "limits");
    if (node == NULL)
        return true;
    if (node->kind != NODE_OBJECT)
        return reader_refuse(reader, node, "found %s; expected {OUTPUT: VALUE}",
                             tree_kind_name(node->kind));
    if (node->count > MOST_LIMITS)
        return reader_refuse(reader, node, "%zu limits; at most %d are accepted", node->count,
                             MOST_LIMITS);
    struct study_limit *limits =
        arena_new(reader->arena, node->count, struct study_limit, reader->error);
    if (limits == NULL)
        return false;
    bool ok = true;
    for (const struct node *child = node->first; child != NULL; child = child->next)
        if (child->bad || !read_limit(reader, draft, child, &limits[draft->chapter.limit_count++]))
            ok = false;
    draft->chapter.limits = limits;
    return ok;
}

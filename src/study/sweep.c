#include "draft.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

static bool can_vary(const struct reader *reader, const struct draft *draft,
                     const struct node *node, const struct model_input *input) {
    if (input->kind == MODEL_CHOICE)
        return reader_refuse_key(reader, node,
                                 "%s is a choice of words and cannot be swept; put it in "
                                 "\"compare\"",
                                 input->name);
    if (input->not_yet != NULL)
        return reader_refuse_key(reader, node, "%s is not yet supported: %s", input->name,
                                 input->not_yet);
    const struct node *given =
        draft->given.input_nodes[model_input_index(draft->chapter.model, input->name)];
    if (given != NULL)
        return reader_refuse_key(reader, given,
                                 "%s is given and varied; it can be only one of them", input->name);
    return true;
}

static bool in_declaration(const struct reader *reader, const struct node *node,
                           const struct model_input *input, double value) {
    struct error error = {0};
    return model_check_input(input, value, &error) ||
           reader_refuse(reader, node, "%s", error.message);
}

static bool read_points(const struct reader *reader, const struct node *node,
                        const struct model_input *input, struct study_vary *vary) {
    struct error error = {0};
    struct levels levels = {0.0, 1.0};
    const char *text = node->text;
    double *points = arena_new(reader->arena, STUDY_MOST_POINTS, double, reader->error);
    if (points == NULL)
        return false;
    if ((given_is_edge(input) &&
         !reader_split_levels(text, reader->arena, &text, &levels, &error)) ||
        !quantity_parse_points(text, input->dimension, points, STUDY_MOST_POINTS,
                               &vary->point_count, &vary->logarithmic, &error))
        return reader_refuse(reader, node, "%s", error.message);
    for (size_t i = 0; i < vary->point_count; i++)
        points[i] /= levels.high - levels.low;
    vary->points = points;
    return in_declaration(reader, node, input, points[0]) &&
           in_declaration(reader, node, input, points[vary->point_count - 1]);
}

/* A list of single values, smallest first. */
static bool read_list(const struct reader *reader, const struct node *node,
                      const struct model_input *input, size_t fewest, const double **values,
                      size_t *count) {
    if (node->count < fewest || node->count > STUDY_MOST_POINTS)
        return reader_refuse(reader, node, "%zu value%s; %zu to %d are accepted", node->count,
                             node->count == 1 ? "" : "s", fewest, STUDY_MOST_POINTS);
    double *read = arena_new(reader->arena, node->count, double, reader->error);
    bool ok = read != NULL;
    size_t used = 0;
    for (const struct node *child = node->first; child != NULL && read != NULL;
         child = child->next) {
        if (!given_value(reader, child, input, &read[used])) {
            ok = false;
            continue;
        }
        if (ok && used > 0 && !(read[used] > read[used - 1]))
            ok = reader_refuse(reader, child,
                               "\"%s\" is not above the value before it; list the values in "
                               "ascending order",
                               reader_shown(reader, child));
        used++;
    }
    if (!ok)
        return false;
    *values = read;
    *count = used;
    return true;
}

bool draft_read_vary(const struct reader *reader, struct draft *draft) {
    const struct node *node = tree_get(draft->node, "vary");
    const struct model *model = draft->chapter.model;
    struct study_vary *vary = &draft->chapter.vary;
    if (node == NULL)
        return false;
    if (node->kind != NODE_OBJECT || node->count != 1)
        return reader_refuse(
            reader, node,
            "found %s; expected one input with its sweep, {\"gap\": \"0.15 mm .. 6 "
            "mm in 40 points log\"}%s",
            node->kind != NODE_OBJECT ? tree_kind_name(node->kind)
            : node->count > 1         ? "more than one input"
                                      : "no input",
            node->kind == NODE_OBJECT && node->count > 1 ? "; put the others in \"compare\"" : "");
    const struct node *child = node->first;
    if (given_is_source(child->key))
        return reader_refuse_key(
            reader, child, "a %s cannot be swept; put it in \"compare\" or \"given\"", child->key);
    size_t input = given_input(reader, child, model, NULL);
    if (input == SIZE_MAX || !can_vary(reader, draft, child, &model->inputs[input]))
        return false;
    vary->input = input;
    draft->swept_node = child;
    bool ok;
    if (child->kind == NODE_LIST)
        ok = read_list(reader, child, &model->inputs[input], 2, &vary->points, &vary->point_count);
    else if (child->kind == NODE_TEXT)
        ok = read_points(reader, child, &model->inputs[input], vary);
    else
        ok = reader_refuse(reader, child,
                           "found %s; expected a sweep, such as \"0.15 mm .. 6 mm in 40 points\", "
                           "or a list of values",
                           tree_kind_name(child->kind));
    ok = ok && given_begins_soundly(reader, child, &model->inputs[input], vary->points[0]);
    draft->vary_node = ok ? child : NULL;
    return ok;
}

enum { STANDARD_ROWS = 8 };

/* Some of the sweep's points, evenly spaced among them, both ends included. */
static bool choose_rows(const struct reader *reader, struct study_chapter *chapter) {
    size_t points = chapter->vary.point_count;
    size_t rows = points < STANDARD_ROWS ? points : STANDARD_ROWS;
    double *chosen = arena_new(reader->arena, rows, double, reader->error);
    if (chosen == NULL)
        return false;
    for (size_t i = 0; i < rows; i++)
        chosen[i] =
            chapter->vary.points[rows > 1 ? (i * (points - 1) + (rows - 1) / 2) / (rows - 1) : 0];
    chapter->table_points = chosen;
    chapter->table_point_count = rows;
    return true;
}

/* Rows are solved, not looked up beside the sweep's points: what the sweep does not have yet is put
 * between its points. */
static bool merge_rows(const struct reader *reader, struct study_chapter *chapter) {
    struct study_vary *vary = &chapter->vary;
    size_t count = vary->point_count;
    double *all =
        arena_new(reader->arena, count + chapter->table_point_count, double, reader->error);
    if (all == NULL)
        return false;
    memcpy(all, vary->points, count * sizeof *all);
    for (size_t r = 0; r < chapter->table_point_count; r++) {
        double row = chapter->table_points[r];
        size_t at = count;
        while (at > 0 && all[at - 1] > row * (1 + 1e-9))
            at--;
        if (at > 0 && all[at - 1] >= row * (1 - 1e-9))
            continue;
        memmove(&all[at + 1], &all[at], (count - at) * sizeof *all);
        all[at] = row;
        count++;
    }
    vary->points = all;
    vary->point_count = count;
    return true;
}

bool draft_read_table(const struct reader *reader, struct draft *draft) {
    const struct node *node = tree_get(draft->node, "table");
    struct study_chapter *chapter = &draft->chapter;
    const struct study_vary *vary = &chapter->vary;
    const struct model_input *input = &chapter->model->inputs[vary->input];
    if (node == NULL)
        return choose_rows(reader, chapter);
    if (node->kind != NODE_LIST)
        return reader_refuse(reader, node, "found %s; expected a list of values of %s",
                             tree_kind_name(node->kind), input->name);
    if (!read_list(reader, node, input, 1, &chapter->table_points, &chapter->table_point_count))
        return false;
    double low = vary->points[0] * (1 - 1e-9);
    double high = vary->points[vary->point_count - 1] * (1 + 1e-9);
    bool ok = true;
    size_t i = 0;
    for (const struct node *child = node->first; child != NULL; child = child->next, i++)
        if (chapter->table_points[i] < low || chapter->table_points[i] > high)
            ok = reader_refuse(reader, child, "\"%s\" lies outside the sweep of %s",
                               reader_shown(reader, child), input->name);
    return ok && merge_rows(reader, chapter);
}

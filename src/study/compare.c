#include "draft.h"
#include "groundrules/text.h"

#include <ctype.h>
#include <stdint.h>
#include <string.h>

static enum axis_kind kind_of(const char *key) {
    if (strcmp(key, "stackup") == 0)
        return AXIS_STACKUP;
    if (strcmp(key, "aggressor") == 0)
        return AXIS_AGGRESSOR;
    return strcmp(key, "victim") == 0 ? AXIS_VICTIM : AXIS_INPUT;
}

bool draft_is_compared(const struct draft *draft, const char *key) {
    for (size_t i = 0; i < draft->axis_count; i++)
        if (strcmp(draft->axes[i].key, key) == 0)
            return true;
    return false;
}

/* "gap" and "vary" say where else the key stands. */
static bool stands_alone(const struct reader *reader, const struct draft *draft,
                         const struct node *node, const struct axis *axis) {
    const struct given *given = &draft->given;
    const struct node *other = axis->kind == AXIS_STACKUP     ? given->stackup_node
                               : axis->kind == AXIS_AGGRESSOR ? given->aggressor_node
                               : axis->kind == AXIS_VICTIM    ? given->victim_node
                                                              : given->input_nodes[axis->input];
    if (other != NULL)
        return reader_refuse_key(reader, other,
                                 "%s is given and compared; it can be only one of "
                                 "them",
                                 axis->key);
    if (axis->kind == AXIS_INPUT && draft->vary_node != NULL &&
        draft->chapter.vary.input == axis->input)
        return reader_refuse_key(
            reader, node, "%s is varied and compared; it can be only one of them", axis->key);
    return true;
}

/* The unit at `at` as it is printed, and how much it takes; NULL: no unit that is written
 * otherwise. */
static const char *printed_unit(const char *text, const char *at, size_t *length) {
    static const char *const units[][2] = {{"um", "\xC2\xB5m"}, {"ohm", "\xCE\xA9"}};
    bool starts = at > text && (at[-1] == ' ' || isdigit((unsigned char)at[-1]));
    for (size_t i = 0; starts && i < sizeof units / sizeof *units; i++) {
        *length = strlen(units[i][0]);
        if (strncmp(at, units[i][0], *length) == 0 && !isalpha((unsigned char)at[*length]))
            return units[i][1];
    }
    return NULL;
}

/* "gap 0.3 mm", "aggressors 2"; a word such as "floating" speaks for itself. */
static const char *input_label(const struct reader *reader, const struct model_input *input,
                               const char *value) {
    struct text text = text_start(reader->arena, reader->error);
    bool named = input->words == NULL || isdigit((unsigned char)value[0]);
    for (const char *at = input->name; named && *at != '\0'; at++)
        text_format(&text, "%c", *at == '_' ? ' ' : *at);
    if (named)
        text_add(&text, " ");
    for (const char *at = value; *at != '\0';) {
        size_t length = 1;
        const char *unit = input->words == NULL ? printed_unit(value, at, &length) : NULL;
        if (unit != NULL)
            text_add(&text, unit);
        else
            text_format(&text, "%c", input->words != NULL && *at == '-' ? ' ' : *at);
        at += unit != NULL ? length : 1;
    }
    return text_end(&text);
}

static bool read_option(const struct reader *reader, const struct draft *draft,
                        const struct node *node, const struct axis *axis,
                        struct axis_option *option) {
    *option = (struct axis_option){.node = node, .label = node->text};
    if (axis->kind == AXIS_INPUT) {
        const struct model_input *input = &draft->chapter.model->inputs[axis->input];
        bool ok = given_setting(reader, node, input, &option->setting);
        option->setting.origin = STUDY_COMPARED;
        option->label = ok ? input_label(reader, input, node->text) : NULL;
        return ok && option->label != NULL;
    }
    if (axis->kind == AXIS_STACKUP) {
        option->stackup = boards_find(reader, node);
        option->label = option->stackup == NULL ? NULL : option->stackup->name;
        return option->stackup != NULL;
    }
    option->signal = signals_find(reader, node);
    option->label = option->signal == NULL ? NULL : option->signal->name;
    return option->signal != NULL;
}

static bool is_same(const struct axis_option *one, const struct axis_option *two) {
    return one->stackup == two->stackup && one->signal == two->signal &&
           one->setting.value == two->setting.value &&
           one->setting.range.from == two->setting.range.from &&
           one->setting.range.to == two->setting.range.to &&
           one->setting.minus == two->setting.minus && one->setting.plus == two->setting.plus;
}

static bool is_new(const struct reader *reader, const struct axis *axis, const struct node *node,
                   const struct axis_option *option) {
    for (size_t i = 0; i < axis->count; i++)
        if (is_same(&axis->options[i], option))
            return reader_refuse(reader, node, "\"%s\" is compared with itself",
                                 reader_shown(reader, node));
    return true;
}

static bool read_options(const struct reader *reader, const struct draft *draft,
                         const struct node *node, struct axis *axis) {
    if (node->kind != NODE_LIST)
        return reader_refuse(reader, node, "found %s; expected a list [ ] of what is compared",
                             tree_kind_name(node->kind));
    if (node->count == 0 || node->count > STUDY_MOST_VARIANTS)
        return reader_refuse(reader, node, "%zu entries to compare; 1 to %d are accepted",
                             node->count, STUDY_MOST_VARIANTS);
    axis->options = arena_new(reader->arena, node->count, struct axis_option, reader->error);
    if (axis->options == NULL)
        return false;
    bool ok = true;
    for (const struct node *child = node->first; child != NULL; child = child->next) {
        struct axis_option option;
        if (child->bad || !read_option(reader, draft, child, axis, &option) ||
            !is_new(reader, axis, child, &option))
            ok = false;
        else
            axis->options[axis->count++] = option;
    }
    return ok;
}

static bool read_axis(const struct reader *reader, struct draft *draft, const struct node *node) {
    struct axis axis = {.kind = kind_of(node->key), .key = node->key};
    if (axis.kind == AXIS_INPUT) {
        axis.input = given_input(reader, node, draft->chapter.model, &keys_compare);
        if (axis.input == SIZE_MAX)
            return false;
    }
    if (!stands_alone(reader, draft, node, &axis) || !read_options(reader, draft, node, &axis))
        return false;
    draft->axes[draft->axis_count++] = axis;
    return true;
}

bool draft_read_compare(const struct reader *reader, struct draft *draft) {
    const struct node *node = tree_get(draft->node, "compare");
    if (node == NULL)
        return true;
    if (node->count < 1 || node->count > DRAFT_MOST_AXES)
        return reader_refuse(reader, node, "%zu keys are compared; 1 or 2 are accepted",
                             node->count);
    bool ok = true;
    for (const struct node *child = node->first; child != NULL; child = child->next)
        if (child->bad || !read_axis(reader, draft, child))
            ok = false;
    size_t variants = 1;
    for (size_t i = 0; i < draft->axis_count; i++)
        variants *= draft->axes[i].count;
    if (variants > STUDY_MOST_VARIANTS)
        ok = reader_refuse(reader, node, "%zu combinations are compared; at most %d are accepted",
                           variants, STUDY_MOST_VARIANTS);
    return ok;
}

#include "rule.h"

#include "groundrules/text.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

static const double most_grid_steps = 1e6;

static bool refuse_direction(const struct reader *reader, const struct node *node) {
    static const char *const directions[] = {"smallest", "largest"};
    const char *word =
        arena_copy_length(reader->arena, node->text, strcspn(node->text, " "), reader->error);
    const char *nearest = word == NULL ? NULL : text_nearest(word, directions, 2);
    return reader_refuse(reader, node,
                         "\"%s\": expected \"smallest INPUT\" or \"largest INPUT\", such as "
                         "\"smallest gap\"%s%s%s",
                         reader_shown(reader, node), nearest == NULL ? "" : "; did you mean \"",
                         nearest == NULL ? "" : nearest, nearest == NULL ? "" : "\"?");
}

/* "smallest gap", "largest length" */
static bool read_find(const struct reader *reader, const struct draft *draft,
                      struct rule_draft *rule) {
    const struct node *node = tree_get(rule->node, "find");
    const struct model *model = draft->chapter.model;
    if (node == NULL)
        return false;
    bool smallest = strncmp(node->text, "smallest ", 9) == 0;
    if (!smallest && strncmp(node->text, "largest ", 8) != 0)
        return refuse_direction(reader, node);
    const char *word = node->text + (smallest ? 9 : 8);
    size_t input = given_input_word(reader, node, word + strspn(word, " "), model);
    if (input == SIZE_MAX)
        return false;
    const struct model_input *declared = &model->inputs[input];
    if (declared->kind == MODEL_CHOICE)
        return reader_refuse(reader, node, "%s is a choice of words; only a value can be found",
                             declared->name);
    if (declared->not_yet != NULL)
        return reader_refuse(reader, node, "%s is not yet supported: %s", declared->name,
                             declared->not_yet);
    rule->rule.find = input;
    rule->rule.find_smallest = smallest;
    rule->found = true;
    return true;
}

static bool is_own(const struct draft *draft, const struct rule_draft *rule) {
    return draft->vary_node != NULL && draft->chapter.vary.input == rule->rule.find;
}

/* Whether the sweep, which was refused, may have been meant to give the range. */
static bool is_swept(const struct draft *draft, const struct rule_draft *rule) {
    return draft->swept_node == NULL || draft->chapter.vary.input == rule->rule.find;
}

/* What is found must not be fixed or spread elsewhere. */
static bool check_find(const struct reader *reader, const struct draft *draft,
                       const struct rule_draft *rule) {
    const struct node *node = tree_get(rule->node, "find");
    const struct model_input *input = &draft->chapter.model->inputs[rule->rule.find];
    if (draft_is_compared(draft, input->name))
        return reader_refuse(reader, node, "%s is compared in this chapter; it cannot be found too",
                             input->name);
    if (rule->given.input_nodes[rule->rule.find] != NULL)
        return reader_refuse_key(reader, rule->given.input_nodes[rule->rule.find],
                                 "%s is what the rule finds; it cannot be given too", input->name);
    for (size_t i = 0; i < rule->variant_count; i++) {
        struct interval range = rule->variants[i].settings[rule->rule.find].range;
        if (range.from < range.to)
            return reader_refuse(reader, node,
                                 "%s is given as a range here; what is found must not be",
                                 input->name);
    }
    return true;
}

static bool read_within(const struct reader *reader, const struct draft *draft,
                        struct rule_draft *rule) {
    const struct node *node = tree_get(rule->node, "within");
    const struct study_vary *vary = &draft->chapter.vary;
    const struct model_input *input = &draft->chapter.model->inputs[rule->rule.find];
    rule->within_node = node;
    if (node == NULL && is_own(draft, rule)) {
        rule->rule.within = (struct interval){vary->points[0], vary->points[vary->point_count - 1]};
        return true;
    }
    if (node == NULL && (keys_refused(rule->node, "within") || is_swept(draft, rule)))
        return false; /* refused where it stands */
    if (node == NULL)
        return reader_refuse(reader, rule->node,
                             "\"within\" is missing: the chapter does not sweep %s, so the rule "
                             "must say where to look for it",
                             input->name);
    if (!given_interval(reader, node, input, &rule->rule.within))
        return false;
    return rule->rule.within.from < rule->rule.within.to ||
           reader_refuse(reader, node,
                         "\"%s\" is no range; expected one such as \"0.1 mm .. 12 "
                         "mm\"",
                         reader_shown(reader, node));
}

static bool read_grid(const struct reader *reader, const struct draft *draft,
                      struct rule_draft *rule) {
    const struct node *node = tree_get(rule->node, "grid");
    const struct model_input *input = &draft->chapter.model->inputs[rule->rule.find];
    if (node == NULL || !reader_number(reader, node, input->dimension, (struct bounds){-1e30, 1e30},
                                       &rule->rule.grid))
        return false;
    return rule->rule.grid > 0 || reader_refuse(reader, node, "\"%s\": a grid must be above zero",
                                                reader_shown(reader, node));
}

static bool check_grid(const struct reader *reader, const struct rule_draft *rule) {
    const struct node *node = tree_get(rule->node, "grid");
    const struct interval *within = &rule->rule.within;
    double grid = rule->rule.grid;
    if ((within->to - within->from) / grid > most_grid_steps)
        return reader_refuse(reader, node,
                             "\"%s\" is too fine: %.3g steps in the range searched, at most %.3g "
                             "are accepted",
                             reader_shown(reader, node), (within->to - within->from) / grid,
                             most_grid_steps);
    return quantity_grid_up(within->from, grid) <= quantity_grid_down(within->to, grid) ||
           reader_refuse(reader, node, "\"%s\" is too coarse: no step lies in the range searched",
                         reader_shown(reader, node));
}

static bool check_given(const struct reader *reader, const struct draft *draft,
                        const struct rule_draft *rule) {
    bool ok = true;
    for (const struct node *child = rule->given.node == NULL ? NULL : rule->given.node->first;
         child != NULL; child = child->next)
        if (!child->bad && draft_is_compared(draft, child->key))
            ok = reader_refuse_key(
                reader, child, "%s is compared in this chapter; a rule cannot give it", child->key);
    return ok;
}

/* The input that is found and, unless the rule gives it, the one that the chapter sweeps: what a
 * rule says holds over the whole sweep. */
void rule_place_sweeps(const struct draft *draft, struct rule_draft *rule) {
    const struct study_vary *vary = &draft->chapter.vary;
    size_t find = rule->rule.find;
    double start = rule->rule.within.from;
    for (size_t i = 0; i < rule->variant_count; i++) {
        struct study_setting *settings = rule->variants[i].settings;
        if (vary->input != find && rule->given.input_nodes[vary->input] == NULL)
            settings[vary->input].range =
                (struct interval){vary->points[0], vary->points[vary->point_count - 1]};
        settings[find] =
            (struct study_setting){.value = start, .range = {start, start}, .origin = STUDY_VARIED};
    }
}

bool rule_check_variants(const struct reader *reader, const struct draft *draft,
                         const struct rule_draft *rule) {
    const struct node *place = rule->within_node != NULL ? rule->within_node
                               : is_own(draft, rule)     ? draft->vary_node
                                                         : NULL;
    /* Without a "given" of its own the rule has its troubles from the chapter. */
    const struct node *fallback = rule->given.node != NULL ? rule->given.node : draft->place;
    bool ok = true;
    for (size_t i = 0; i < rule->variant_count; i++)
        ok = draft_check_variant(reader, draft, &rule->variants[i], rule->nodes[i], fallback,
                                 rule->rule.find, rule->rule.within, place) &&
             ok;
    return ok;
}

/* Where and how finely what is found is looked for. */
static bool read_search(const struct reader *reader, const struct draft *draft,
                        struct rule_draft *rule) {
    bool ok = check_find(reader, draft, rule);
    bool ranged = read_within(reader, draft, rule);
    bool stepped = read_grid(reader, draft, rule);
    return ranged && stepped && check_grid(reader, rule) && ok;
}

static void read_texts(const struct reader *reader, struct rule_draft *rule) {
    const struct node *node = rule->node;
    const struct node *strength = tree_get(node, "strength");
    const struct node *tolerance = tree_get(node, "tolerance");
    struct study_rule *read = &rule->rule;
    read->id = reader_text(tree_get(node, "id"));
    read->title = reader_text(tree_get(node, "title"));
    read->applies_to = reader_text(tree_get(node, "applies_to"));
    read->why = reader_text(tree_get(node, "why"));
    read->check = reader_text(tree_get(node, "check"));
    if (strength != NULL)
        read->strength = (enum study_strength)reader_word(reader, strength, keys_strengths);
    read->nominal = tolerance != NULL && reader_word(reader, tolerance, keys_tolerances) == 1;
    source_position(reader->source, node->offset, &read->line, &read->column);
}

static bool read_rule(const struct reader *reader, const struct draft *draft,
                      struct rule_draft *rule) {
    read_texts(reader, rule);
    given_read(reader, tree_get(rule->node, "given"), draft->chapter.model, &rule->given);
    bool ok = check_given(reader, draft, rule);
    ok = read_find(reader, draft, rule) && ok;
    if (draft->vary_node != NULL && !draft_resolve(reader, draft, &rule->given, &rule->variants,
                                                   &rule->variant_count, &rule->nodes))
        return false;
    ok = rule_read_condition(reader, draft, rule) && ok;
    ok = rule->found && read_search(reader, draft, rule) && ok;
    /* Cases are only built when all else is sound; without them the rest is read for itself. */
    if (ok && draft->vary_node != NULL) {
        rule_place_sweeps(draft, rule);
        ok = rule_check_variants(reader, draft, rule);
    }
    if (!ok)
        rule->variant_count = 0;
    ok = rule_read_reference(reader, draft, rule) && ok;
    ok = rule_read_table(reader, draft, rule) && ok;
    rule->rule.variants = rule->variants;
    rule->rule.variant_count = rule->variant_count;
    return ok;
}

bool draft_read_rules(const struct reader *reader, struct draft *draft, size_t *rules_left) {
    const struct node *node = tree_get(draft->node, "rules");
    if (node == NULL)
        return true;
    if (node->count > *rules_left)
        return reader_refuse(reader, node, "more than %d rules in the study", STUDY_MOST_RULES);
    *rules_left -= node->count;
    struct study_rule *rules =
        arena_new(reader->arena, node->count, struct study_rule, reader->error);
    if (rules == NULL)
        return false;
    for (const struct node *child = node->first; child != NULL; child = child->next) {
        struct rule_draft rule = {.node = child};
        if (child->kind != NODE_OBJECT)
            continue;
        read_rule(reader, draft, &rule);
        rules[draft->chapter.rule_count++] = rule.rule;
    }
    draft->chapter.rules = rules;
    return reader->error->kind == ERROR_NONE;
}

#include "rule.h"

#include "groundrules/text.h"

#include <stdint.h>
#include <string.h>

struct parts {
    const char *output;
    bool at_most;
    const char *against;
};

static char *trimmed(const struct reader *reader, const char *from, const char *to) {
    while (from < to && *from == ' ')
        from++;
    while (to > from && to[-1] == ' ')
        to--;
    return arena_copy_length(reader->arena, from, (size_t)(to - from), reader->error);
}

static const char form[] =
    "expected \"OUTPUT <= VALUE\" or \"OUTPUT >= VALUE\"; in place of the value, \"budget\", "
    "\"reference\" or a share of it, \"105 % of reference\"";

static bool split(const struct reader *reader, const struct node *node, struct parts *parts) {
    static const struct {
        const char *sign;
        bool at_most;
    } signs[] = {{"<=", true}, {">=", false}, {"\xE2\x89\xA4", true}, {"\xE2\x89\xA5", false}};
    for (size_t i = 0; i < sizeof signs / sizeof signs[0]; i++) {
        const char *sign = strstr(node->text, signs[i].sign);
        if (sign == NULL)
            continue;
        const char *rest = sign + strlen(signs[i].sign);
        parts->at_most = signs[i].at_most;
        parts->output = trimmed(reader, node->text, sign);
        parts->against = trimmed(reader, rest, rest + strlen(rest));
        if (parts->output == NULL || parts->against == NULL)
            return false;
        if (parts->output[0] == '\0' || parts->against[0] == '\0')
            break;
        return true;
    }
    return reader_refuse(reader, node, "\"%s\" is no condition; %s", reader_shown(reader, node),
                         form);
}

static bool check_budget(const struct reader *reader, const struct draft *draft,
                         const struct node *node, const struct model_output *output,
                         const struct rule_draft *rule) {
    if (output->dimension != DIMENSION_VOLTAGE)
        return reader_refuse(reader, node, "a budget is a voltage, %s is %s", output->name,
                             dimension_name(output->dimension));
    if (!rule->rule.condition.at_most)
        return reader_refuse(reader, node, "a budget is not to be exceeded: write \"%s <= budget\"",
                             output->name);
    for (size_t i = 0; i < rule->variant_count; i++) {
        const struct study_signal *victim = rule->variants[i].victim;
        if (victim == NULL && (rule->given.victim_node != NULL || draft->given.victim_node != NULL))
            return false; /* refused where it is named */
        if (victim == NULL)
            return reader_refuse(reader, node,
                                 "a budget needs a \"victim\" in \"given\" or \"compare\"");
        if (!victim->is_victim)
            return reader_refuse(reader, node,
                                 "the signal \"%s\" has no \"victim\" with a noise margin and a "
                                 "share, so it has no budget",
                                 victim->id);
    }
    return true;
}

static bool is_signed(enum dimension dimension) {
    return dimension == DIMENSION_LEVEL || dimension == DIMENSION_SLOWNESS ||
           dimension == DIMENSION_ATTENUATION || dimension == DIMENSION_NUMBER;
}

static const char *nearest_word(const struct reader *reader, const char *text) {
    static const char *const words[] = {"budget", "reference"};
    const char *nearest = text_nearest(text, words, 2);
    const char *advice = nearest == NULL ? ""
                                         : arena_print(reader->arena, reader->error,
                                                       "; did you mean \"%s\"?", nearest);
    return advice == NULL ? "" : advice;
}

static bool read_constant(const struct reader *reader, const struct node *node,
                          const struct model_output *output, const char *text, double *limit) {
    struct error error = {0};
    struct quantity quantity;
    if (!quantity_parse(text, output->dimension, &quantity, &error))
        return reader_refuse(reader, node, "%s, \"budget\" or \"reference\"%s", error.message,
                             nearest_word(reader, text));
    if (quantity.minus > 0 || quantity.plus > 0)
        return reader_refuse(reader, node, "\"%s\": no tolerance is accepted here", text);
    if (!(quantity.value < 1e30) || (!is_signed(output->dimension) && !(quantity.value > 0)))
        return reader_refuse(reader, node,
                             "%s can never meet \"%s\"; the limit must be above zero "
                             "and finite",
                             output->name, reader_shown(reader, node));
    *limit = quantity.value;
    return true;
}

/* "105 % of reference" becomes "reference" and 1.05. */
static bool take_share(const struct reader *reader, const struct node *node,
                       const struct model_output *output, struct parts *parts, double *share) {
    const char *of = strstr(parts->against, " of ");
    struct error error = {0};
    struct quantity quantity;
    *share = 1.0;
    if (of == NULL)
        return true;
    const char *text = trimmed(reader, parts->against, of);
    parts->against = trimmed(reader, of + 4, of + strlen(of));
    if (text == NULL || parts->against == NULL)
        return false;
    if (strcmp(parts->against, "reference") != 0 && strcmp(parts->against, "budget") != 0)
        return reader_refuse(reader, node,
                             "\"%s\": a share is of the \"budget\" or of the \"reference\"%s",
                             reader_shown(reader, node), nearest_word(reader, parts->against));
    if (!quantity_parse(text, DIMENSION_RATIO, &quantity, &error))
        return reader_refuse(reader, node, "%s", error.message);
    if (!(quantity.value >= 0.01 && quantity.value <= 100.0) || quantity.minus > 0 ||
        quantity.plus > 0)
        return reader_refuse(reader, node, "a share of %s; allowed: 1 %% to 10000 %%, no tolerance",
                             text);
    if (output->dimension == DIMENSION_LEVEL || output->dimension == DIMENSION_ATTENUATION)
        return reader_refuse(reader, node, "%s is in decibels, there is no share of it",
                             output->name);
    *share = quantity.value;
    return true;
}

bool rule_read_condition(const struct reader *reader, const struct draft *draft,
                         struct rule_draft *rule) {
    const struct node *node = tree_get(rule->node, "so_that");
    const struct node *reference = tree_get(rule->node, "reference");
    const struct model *model = draft->chapter.model;
    struct study_condition *condition = &rule->rule.condition;
    struct parts parts = {0};
    if (node == NULL || !split(reader, node, &parts))
        return false;
    condition->text = node->text;
    condition->at_most = parts.at_most;
    condition->output = given_output_word(reader, node, parts.output, model);
    if (condition->output == SIZE_MAX)
        return false;
    const struct model_output *output = &model->outputs[condition->output];
    if (!take_share(reader, node, output, &parts, &condition->share))
        return false;
    if (strcmp(parts.against, "reference") == 0) {
        condition->against = STUDY_REFERENCE;
        return reference != NULL ||
               reader_refuse(reader, node, "\"<= reference\" needs a \"reference\" in the rule");
    }
    if (reference != NULL)
        reader_refuse_key(reader, reference,
                          "the condition does not speak of the reference; write \"%s %s "
                          "reference\" or leave it out",
                          output->name, parts.at_most ? "<=" : ">=");
    if (strcmp(parts.against, "budget") == 0) {
        condition->against = STUDY_BUDGET;
        return check_budget(reader, draft, node, output, rule);
    }
    condition->against = STUDY_CONSTANT;
    return read_constant(reader, node, output, parts.against, &condition->limit);
}

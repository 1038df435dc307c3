#include "words.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static enum quantity_lengths lengths_of(const struct flow *flow) {
    return flow->guideline->study->document.lengths;
}

const char *words_digits(struct flow *flow, double value, enum dimension dimension, int digits) {
    char text[64];
    quantity_print(text, sizeof text, value, dimension, digits, QUANTITY_TYPOGRAPHIC,
                   lengths_of(flow));
    return flow_print(flow, "%s", text);
}

const char *words_value(struct flow *flow, double value, enum dimension dimension) {
    return words_digits(flow, value, dimension, -3);
}

const char *words_grid(struct flow *flow, double value, double grid, enum dimension dimension) {
    if (!(value > 0.0) || !(grid > 0.0))
        return words_value(flow, value, dimension);
    /* A grid of 0.05 mm under 1.85 mm leaves three digits. */
    int digits = (int)floor(log10(value) + 1e-9) - (int)floor(log10(grid) + 1e-9) + 1;
    if (fabs(grid / pow(10.0, floor(log10(grid) + 1e-9)) - 1.0) > 1e-6 && digits < 2)
        digits = 2;
    return words_digits(flow, value, dimension, -(digits < 1 ? 1 : digits > 6 ? 6 : digits));
}

const char *words_range(struct flow *flow, struct interval range, enum dimension dimension) {
    const char *from = words_value(flow, range.from, dimension);
    if (!(range.to > range.from))
        return from;
    return flow_print(flow, "%s to %s", from, words_value(flow, range.to, dimension));
}

const char *words_quantity(struct flow *flow, const struct quantity *quantity) {
    const char *value = words_value(flow, quantity->value, quantity->dimension);
    if (quantity->minus == 0.0 && quantity->plus == 0.0)
        return value;
    if (quantity->dimension == DIMENSION_LENGTH && fabs(quantity->minus - quantity->plus) < 1e-12)
        return flow_print(flow, "%s ±\u00a0%.3g\u2009%%", value,
                          100.0 * quantity->plus / quantity->value);
    if (fabs(quantity->minus - quantity->plus) < 1e-12)
        return flow_print(flow, "%s ±\u00a0%s", value,
                          words_value(flow, quantity->plus, quantity->dimension));
    return flow_print(flow, "%s +%s −%s", value,
                      words_value(flow, quantity->plus, quantity->dimension),
                      words_value(flow, quantity->minus, quantity->dimension));
}

const char *words_input(struct flow *flow, const struct model_input *input, double value) {
    if (input->words != NULL)
        return flow_escape(flow, input->words[(size_t)value]);
    return words_value(flow, value, input->dimension);
}

const char *words_name(struct flow *flow, const char *name) {
    char *text = arena_copy(flow->arena, name, flow->error);
    for (char *at = text; at != NULL && *at != '\0'; at++)
        if (*at == '_' || *at == '-')
            *at = ' ';
    return text != NULL ? text : "";
}

const char *words_count(struct flow *flow, const char *name, double count) {
    const char *plural = words_name(flow, name);
    size_t length = strlen(plural);
    bool cut = count == 1.0 && length > 0 && plural[length - 1] == 's';
    return flow_print(flow, "%.0f\u00a0%.*s", count, (int)(length - (cut ? 1 : 0)), plural);
}

const char *words_article(struct flow *flow, const char *name) {
    return flow_print(flow, "%s %s", strchr("aeio", name[0]) != NULL ? "an" : "a",
                      words_name(flow, name));
}

const char *words_capital(struct flow *flow, const char *name) {
    const char *text = words_name(flow, name);
    if (*text < 'a' || *text > 'z')
        return text;
    return flow_print(flow, "%c%s", *text - 'a' + 'A', text + 1);
}

const char *words_strength(enum study_strength strength) {
    switch (strength) {
    case STUDY_MUST:
        return "must";
    case STUDY_SHOULD:
        return "should";
    case STUDY_MAY:
        break;
    }
    return "may";
}

const char *words_finding(struct flow *flow, const struct study_rule *rule,
                          const struct study_chapter *chapter,
                          const struct guideline_finding *finding) {
    enum dimension dimension = chapter->model->inputs[rule->find].dimension;
    const char *value = words_grid(flow, finding->value, rule->grid, dimension);
    switch (finding->status) {
    case GUIDELINE_FOUND:
        return flow_print(flow, "%s <b>%s</b>", rule->find_smallest ? "at least" : "at most",
                          value);
    case GUIDELINE_MET_EVERYWHERE:
        return flow_print(flow, "met everywhere, %s <b>%s</b>",
                          rule->find_smallest ? "from" : "up to", value);
    case GUIDELINE_CANNOT_BE_MET:
        return flow_print(flow, "<b>cannot be met</b> from %s to %s",
                          words_value(flow, rule->within.from, dimension),
                          words_value(flow, rule->within.to, dimension));
    case GUIDELINE_BELOW_FAB:
        break;
    }
    return "<b>below the fab’s capability</b>";
}

const char *words_finding_short(struct flow *flow, const struct study_rule *rule,
                                const struct study_chapter *chapter,
                                const struct guideline_finding *finding) {
    enum dimension dimension = chapter->model->inputs[rule->find].dimension;
    const char *value = words_grid(flow, finding->value, rule->grid, dimension);
    switch (finding->status) {
    case GUIDELINE_FOUND:
        return flow_print(flow, "%s\u00a0%s", rule->find_smallest ? "≥" : "≤", value);
    case GUIDELINE_MET_EVERYWHERE:
        return flow_print(flow, "any %s %s", rule->find_smallest ? "from" : "to", value);
    case GUIDELINE_CANNOT_BE_MET:
        return "cannot be met";
    case GUIDELINE_BELOW_FAB:
        break;
    }
    return "below fab";
}

/* "105 % of "; nothing for all of it. */
static const char *share_words(struct flow *flow, double share) {
    return share == 1.0 ? ""
                        : flow_print(flow, "%s of ", words_value(flow, share, DIMENSION_RATIO));
}

const char *words_condition(struct flow *flow, const struct study_rule *rule,
                            const struct study_chapter *chapter,
                            const struct study_variant *variant) {
    const struct model_output *output = &chapter->model->outputs[rule->condition.output];
    const char *sign = rule->condition.at_most ? "≤" : "≥";
    if (rule->condition.against == STUDY_REFERENCE)
        return flow_print(flow, "%s %s %sthat of %s, %s kept", output->title,
                          rule->condition.at_most ? "no more than" : "no less than",
                          share_words(flow, rule->condition.share),
                          flow_escape(flow, rule->reference.text),
                          rule->reference.kept == STUDY_KEEP_WIDTH ? "width" : "impedance");
    if (rule->condition.against == STUDY_BUDGET && variant->victim != NULL)
        return flow_print(flow, "%s %s %s (%s%s of the %s noise margin)", output->title, sign,
                          words_value(flow,
                                      rule->condition.share * variant->victim->noise_margin *
                                          variant->victim->share,
                                      output->dimension),
                          share_words(flow, rule->condition.share),
                          words_value(flow, variant->victim->share, DIMENSION_RATIO),
                          words_value(flow, variant->victim->noise_margin, DIMENSION_VOLTAGE));
    return flow_print(flow, "%s %s %s", output->title, sign,
                      words_value(flow, rule->condition.limit, output->dimension));
}

#include "changes.h"

#include "groundrules/text.h"

#include <math.h>
#include <string.h>

/* Exports carry six digits. */
static const double SAME = 2e-5;

static bool differ(double before, double now) {
    if (isnan(before) || isnan(now))
        return isnan(before) != isnan(now);
    return fabs(before - now) > SAME * fmax(fabs(before), fabs(now));
}

static bool same_text(const char *left, const char *right) {
    return left == NULL || right == NULL ? left == right : strcmp(left, right) == 0;
}

static void add_number(struct text *text, double value, enum dimension dimension,
                       enum quantity_lengths lengths) {
    char shown[64];
    text_add(text, quantity_print(shown, sizeof shown, value, dimension, -4, QUANTITY_TYPOGRAPHIC,
                                  lengths));
}

static void add_range(struct text *text, double value, double from, double to,
                      enum dimension dimension, enum quantity_lengths lengths) {
    if (!isnan(from) && !isnan(to) && to > from) {
        add_number(text, from, dimension, lengths);
        text_add(text, " to ");
        value = to;
    }
    add_number(text, value, dimension, lengths);
}

/* "height 1.51 mm → 1.4 mm" */
static void add_reason(struct text *text, bool *any, const struct model_input *input,
                       const struct study_earlier_input *before, const struct study_setting *now,
                       enum quantity_lengths lengths) {
    const char *word = input->words != NULL && !isnan(now->value) ? input->words[(size_t)now->value]
                       : isinf(now->value)                        ? "open"
                                                                  : NULL;
    bool ranged = now->range.to > now->range.from;
    bool changed = before->text != NULL || word != NULL
                       ? !same_text(before->text, word)
                       : differ(before->value, now->value) && !isnan(now->value);
    if (input->words == NULL && !changed)
        changed = differ(before->from, ranged ? now->range.from : NAN) ||
                  differ(before->to, ranged ? now->range.to : NAN) ||
                  differ(isnan(before->minus) ? 0 : before->minus, now->minus) ||
                  differ(isnan(before->plus) ? 0 : before->plus, now->plus);
    if (!changed)
        return;
    text_add(text, *any ? "; " : "");
    *any = true;
    for (const char *at = input->name; *at != '\0'; at++)
        text_add_length(text, *at == '_' ? " " : at, 1);
    text_add(text, " ");
    if (before->text != NULL)
        text_add(text, before->text);
    else
        add_range(text, before->value, before->from, before->to, input->dimension, lengths);
    text_add(text, " → ");
    if (word != NULL)
        text_add(text, word);
    else
        add_range(text, now->value, ranged ? now->range.from : NAN, now->range.to, input->dimension,
                  lengths);
    if (before->text == NULL && word == NULL && !differ(before->value, now->value) && !ranged)
        text_add(text, " (tolerance)");
}

static const char *reasons(const struct study *study, const struct study_earlier_case *before,
                           const struct model *model, const struct study_variant *variant,
                           size_t found, struct arena *arena, struct error *error) {
    struct text text = text_start(arena, error);
    bool any = false;
    for (size_t i = 0; i < model->input_count; i++)
        for (size_t k = 0; k < before->input_count; k++)
            if (i != found && strcmp(model->inputs[i].name, before->inputs[k].name) == 0)
                add_reason(&text, &any, &model->inputs[i], &before->inputs[k],
                           &variant->settings[i], study->document.lengths);
    if (!any)
        text_add(&text, "the inputs are the same: condition, grid or method");
    return text_end(&text);
}

static const struct study_earlier_case *find_case(const struct study_earlier *earlier,
                                                  const char *rule, const char *label) {
    for (size_t i = 0; i < earlier->case_count; i++)
        if (strcmp(earlier->cases[i].rule, rule) == 0 && same_text(earlier->cases[i].label, label))
            return &earlier->cases[i];
    return NULL;
}

/* A bound that is gone (cannot be met any more) is stricter than any. */
static enum guideline_change_kind kind_of(bool smallest, double before, double now) {
    if (!differ(before, now))
        return GUIDELINE_SAME;
    if (isnan(before) || isnan(now))
        return isnan(now) ? GUIDELINE_STRICTER : GUIDELINE_LOOSER;
    return (now > before) == smallest ? GUIDELINE_STRICTER : GUIDELINE_LOOSER;
}

static bool now_states(const struct guideline *guideline, const struct study_earlier_case *before) {
    const struct study *study = guideline->study;
    for (size_t c = 0; c < study->chapter_count; c++)
        for (size_t r = 0; r < study->chapters[c].rule_count; r++) {
            const struct study_rule *rule = &study->chapters[c].rules[r];
            for (size_t v = 0; v < rule->variant_count; v++)
                if (strcmp(rule->id, before->rule) == 0 &&
                    same_text(rule->variants[v].label, before->label))
                    return true;
        }
    return false;
}

static enum dimension dimension_of(const struct study_earlier_case *before) {
    const struct model *model = before->model != NULL ? model_find(before->model) : NULL;
    size_t input = model != NULL ? model_input_index(model, before->input) : 0;
    return model != NULL && input < model->input_count ? model->inputs[input].dimension
                                                       : DIMENSION_NUMBER;
}

static bool bound_of(const struct guideline_finding *finding) {
    return finding->status == GUIDELINE_FOUND || finding->status == GUIDELINE_MET_EVERYWHERE;
}

static bool compare(const struct guideline *guideline, const struct study_chapter *chapter,
                    const struct guideline_rule *rule, size_t v, struct arena *arena,
                    struct guideline_change *change, struct error *error) {
    const struct study_rule *stated = rule->rule;
    const struct guideline_finding *finding = &rule->findings[v];
    const char *label = stated->variants[v].label;
    const struct study_earlier_case *before =
        find_case(guideline->study->earlier, stated->id, label);
    *change = (struct guideline_change){.kind = GUIDELINE_NEW,
                                        .rule_id = stated->id,
                                        .variant = label != NULL ? label : "",
                                        .before = NAN,
                                        .after = bound_of(finding) ? finding->value : NAN,
                                        .dimension = chapter->model->inputs[stated->find].dimension,
                                        .why = "not in the earlier issue"};
    if (before == NULL)
        return true;
    change->before = before->value;
    change->kind = kind_of(stated->find_smallest, before->value, change->after);
    change->why = change->kind == GUIDELINE_SAME
                      ? ""
                      : reasons(guideline->study, before, chapter->model, &stated->variants[v],
                                stated->find, arena, error);
    return change->why != NULL;
}

bool changes_find(struct guideline *guideline, struct arena *arena, struct error *error) {
    const struct study *study = guideline->study;
    const struct study_earlier *earlier = study->earlier;
    size_t most = 0, count = 0;
    if (earlier == NULL)
        return true;
    for (size_t c = 0; c < study->chapter_count; c++)
        for (size_t r = 0; r < study->chapters[c].rule_count; r++)
            most += study->chapters[c].rules[r].variant_count;
    struct guideline_change *changes =
        arena_new(arena, most + earlier->case_count, struct guideline_change, error);
    if (changes == NULL)
        return false;
    for (size_t c = 0; c < study->chapter_count; c++)
        for (size_t r = 0; r < study->chapters[c].rule_count; r++) {
            const struct guideline_rule *rule = &guideline->chapters[c].rules[r];
            for (size_t v = 0; v < rule->rule->variant_count; v++)
                if (!compare(guideline, &study->chapters[c], rule, v, arena, &changes[count++],
                             error))
                    return false;
        }
    for (size_t i = 0; i < earlier->case_count; i++)
        if (!now_states(guideline, &earlier->cases[i]))
            changes[count++] = (struct guideline_change){
                .kind = GUIDELINE_GONE,
                .rule_id = earlier->cases[i].rule,
                .variant = earlier->cases[i].label != NULL ? earlier->cases[i].label : "",
                .before = earlier->cases[i].value,
                .after = NAN,
                .dimension = dimension_of(&earlier->cases[i]),
                .why = "no longer in the study"};
    guideline->changes = changes;
    guideline->change_count = count;
    guideline->previous_revision = earlier->revision != NULL ? earlier->revision : "unnamed";
    return true;
}

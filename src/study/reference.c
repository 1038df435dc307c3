#include "rule.h"

#include "groundrules/text.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

struct words {
    struct text text;
    size_t inputs;
};

/* "Four layers, 1.6 mm at a gap of 0.3 mm and a length of 50 mm" */
static void describe(struct words *words, const char *name, const char *text, double value) {
    const char *nothing = value == 0.0 ? given_absent(name) : NULL;
    const char *article = strchr("aeiou", name[0]) != NULL ? "an" : "a";
    if (words->text.length > 0)
        text_add(&words->text, words->inputs == 0 ? " at " : " and ");
    words->inputs++;
    if (nothing != NULL) {
        text_add(&words->text, nothing);
        return;
    }
    text_format(&words->text, "%s ", article);
    for (const char *at = name; *at != '\0'; at++)
        text_add_length(&words->text, *at == '_' ? " " : at, 1);
    text_format(&words->text, " of %s", text);
}

static bool read_inputs(const struct reader *reader, const struct model *model,
                        const struct node *node, struct study_reference *reference,
                        struct words *words) {
    bool ok = true;
    for (const struct node *child = node->first; child != NULL; child = child->next) {
        if (child->bad || strcmp(child->key, "stackup") == 0 || strcmp(child->key, "keep") == 0)
            continue;
        if (strcmp(child->key, "aggressor") == 0 || strcmp(child->key, "victim") == 0) {
            ok = reader_refuse_key(reader, child,
                                   "the reference has the same signals as the case that is judged");
            continue;
        }
        size_t input = given_input(reader, child, model, &keys_reference);
        if (input == SIZE_MAX ||
            !given_value(reader, child, &model->inputs[input], &reference->values[input])) {
            ok = false;
            continue;
        }
        describe(words, child->key, child->text, reference->values[input]);
    }
    return ok;
}

static bool check_kept(const struct reader *reader, const struct model *model,
                       const struct node *keep, const struct study_reference *reference) {
    size_t width = model_input_index(model, "width");
    if (reference->kept != STUDY_KEEP_IMPEDANCE)
        return true;
    if (width == SIZE_MAX || model_output_index(model, "impedance") == SIZE_MAX)
        return reader_refuse(reader, keep, "%s has no width and impedance to keep", model->name);
    return isnan(reference->values[width]) ||
           reader_refuse(reader, keep,
                         "the width follows from the impedance that is kept, it cannot be given "
                         "too");
}

/* The reference in place of each variant must be a case that can be built. */
static bool check_cases(const struct reader *reader, const struct draft *draft,
                        const struct node *node, const struct rule_draft *rule,
                        const struct study_reference *reference) {
    const struct model *model = draft->chapter.model;
    for (size_t i = 0; i < rule->variant_count; i++) {
        double inputs[MODEL_MOST_INPUTS];
        struct error error = {0};
        for (size_t k = 0; k < model->input_count; k++)
            inputs[k] = isnan(reference->values[k]) ? rule->variants[i].settings[k].value
                                                    : reference->values[k];
        if (!model_resolve(model, inputs, &error) || !model_check(model, inputs, &error))
            return reader_refuse(reader, node, "the reference cannot be built: %s", error.message);
    }
    return true;
}

bool rule_read_reference(const struct reader *reader, const struct draft *draft,
                         struct rule_draft *rule) {
    const struct node *node = tree_get(rule->node, "reference");
    const struct model *model = draft->chapter.model;
    struct study_reference *reference = &rule->rule.reference;
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        reference->values[i] = NAN;
    if (node == NULL)
        return true;
    const struct node *stackup = tree_get(node, "stackup");
    const struct node *keep = tree_get(node, "keep");
    struct words words = {.text = text_start(reader->arena, reader->error)};
    bool ok = true;
    if (stackup != NULL) {
        reference->stackup = boards_find(reader, stackup);
        ok = reference->stackup != NULL;
        if (ok)
            text_add(&words.text, reference->stackup->name);
    }
    if (keep != NULL)
        reference->kept = (enum study_kept)reader_word(reader, keep, keys_kept);
    ok = read_inputs(reader, model, node, reference, &words) && ok;
    if (ok && stackup == NULL && words.inputs == 0)
        ok = reader_refuse(reader, node,
                           "the reference says nothing that differs from the case that is judged; "
                           "it takes a \"stackup\" and inputs of %s",
                           model->name);
    if (!ok || !check_kept(reader, model, keep, reference))
        return false;
    if (reference->stackup != NULL && !isnan(reference->stackup->height.value))
        study_apply_stackup(reference->stackup, model, reference->values);
    reference->text = text_end(&words.text);
    return reference->text != NULL && check_cases(reader, draft, node, rule, reference);
}

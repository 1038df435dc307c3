#include "groundrules/model.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

size_t model_input_index(const struct model *model, const char *name) {
    for (size_t i = 0; i < model->input_count; i++)
        if (strcmp(model->inputs[i].name, name) == 0)
            return i;
    return SIZE_MAX;
}

size_t model_output_index(const struct model *model, const char *name) {
    for (size_t i = 0; i < model->output_count; i++)
        if (strcmp(model->outputs[i].name, name) == 0)
            return i;
    return SIZE_MAX;
}

size_t model_word_index(const struct model_input *input, const char *word) {
    for (size_t i = 0; input->words != NULL && input->words[i] != NULL; i++)
        if (strcmp(input->words[i], word) == 0)
            return i;
    return SIZE_MAX;
}

static bool check_word(const struct model_input *input, double value, struct error *error) {
    size_t count = 0;
    while (input->words[count] != NULL)
        count++;
    if (!(value >= 0 && value < (double)count && value == floor(value)))
        return error_set(error, ERROR_INPUT, "%s has no choice number %g", input->name, value);
    if (input->words_yet > 0 && value >= (double)input->words_yet)
        return error_set(error, ERROR_NOT_YET, "%s = %s: not yet computed by this version",
                         input->name, input->words[(size_t)value]);
    return true;
}

bool model_check_input(const struct model_input *input, double value, struct error *error) {
    if (input->kind == MODEL_CHOICE)
        return check_word(input, value, error);
    if (input->not_yet != NULL && value != input->standard)
        return error_set(error, ERROR_NOT_YET, "%s: not yet: %s", input->name, input->not_yet);
    if (isinf(value) && value > 0 && input->open)
        return true;
    if (value >= input->lowest && value <= input->highest)
        return true;
    char found[64], low[64], high[64];
    quantity_print(found, sizeof found, value, input->dimension, -6, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    quantity_print(low, sizeof low, input->lowest, input->dimension, -6, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    quantity_print(high, sizeof high, input->highest, input->dimension, -6, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    return error_set(error, ERROR_INPUT, "%s is %s; allowed: %s to %s%s", input->name, found, low,
                     high, input->open ? ", or open" : "");
}

bool model_resolve(const struct model *model, double *inputs, struct error *error) {
    char missing[400] = "";
    size_t used = 0;
    for (size_t i = 0; i < model->input_count; i++) {
        const struct model_input *input = &model->inputs[i];
        if (!isnan(inputs[i]))
            continue;
        if (input->same_as != NULL)
            inputs[i] = inputs[model_input_index(model, input->same_as)];
        else
            inputs[i] = input->standard;
        if (isnan(inputs[i]) && used < sizeof missing - 1)
            used += (size_t)snprintf(missing + used, sizeof missing - used, "%s%s",
                                     used > 0 ? ", " : "", input->name);
    }
    if (used > 0)
        return error_set(error, ERROR_INPUT, "%s needs %s", model->name, missing);
    return true;
}

bool model_check(const struct model *model, const double *inputs, struct error *error) {
    for (size_t i = 0; i < model->input_count; i++)
        if (!model_check_input(&model->inputs[i], inputs[i], error))
            return false;
    return model->check == NULL || model->check(inputs, error);
}

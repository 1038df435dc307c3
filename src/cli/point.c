#include "point.h"

#include "groundrules/text.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

static void refuse(struct point *point, const char *word, const char *reason) {
    point->wrong++;
    fprintf(stderr, "groundrules: %s: %s\n", word, reason);
}

static void refuse_name(struct point *point, const char *word, const char *name) {
    const char *names[MODEL_MOST_INPUTS];
    for (size_t i = 0; i < point->model->input_count; i++)
        names[i] = point->model->inputs[i].name;
    const char *nearest = text_nearest(name, names, point->model->input_count);
    char reason[300];
    if (nearest != NULL)
        snprintf(reason, sizeof reason, "%s has no input '%s'; did you mean %s?",
                 point->model->name, name, nearest);
    else
        snprintf(reason, sizeof reason, "%s has no input '%s'; see groundrules models %s",
                 point->model->name, name, point->model->name);
    refuse(point, word, reason);
}

static void list_words(const struct model_input *input, char *text, size_t size) {
    size_t used = 0;
    text[0] = '\0';
    for (size_t i = 0; input->words[i] != NULL && used < size - 1; i++)
        used +=
            (size_t)snprintf(text + used, size - used, "%s%s", i > 0 ? ", " : "", input->words[i]);
}

static bool read_value(const struct model_input *input, const char *text, double *value,
                       struct error *error) {
    if (input->words != NULL) {
        size_t index = model_word_index(input, text);
        char words[200];
        list_words(input, words, sizeof words);
        if (index == SIZE_MAX)
            return error_set(error, ERROR_INPUT, "'%s' is none of %s", text, words);
        *value = (double)index;
    } else if (input->open && strcmp(text, "open") == 0) {
        *value = INFINITY;
    } else {
        struct quantity quantity;
        if (!quantity_parse(text, input->dimension, &quantity, error))
            return false;
        if (quantity.minus > 0.0 || quantity.plus > 0.0)
            return error_set(error, ERROR_INPUT, "one point takes no tolerance");
        *value = quantity.value;
    }
    return model_check_input(input, *value, error);
}

static void read_word(struct point *point, const char *word) {
    const char *equals = strchr(word, '=');
    char name[64];
    if (equals == NULL || equals == word || (size_t)(equals - word) >= sizeof name) {
        refuse(point, word, "not of the form name=value");
        return;
    }
    memcpy(name, word, (size_t)(equals - word));
    name[equals - word] = '\0';
    if (strcmp(name, "stackup") == 0) {
        point->stackup = equals + 1;
        return;
    }
    size_t index = model_input_index(point->model, name);
    if (index == SIZE_MAX) {
        refuse_name(point, word, name);
        return;
    }
    struct error error = {0};
    double value = NAN;
    if (!isnan(point->inputs[index]))
        refuse(point, word, "given twice");
    else if (!read_value(&point->model->inputs[index], equals + 1, &value, &error))
        refuse(point, word, error.message);
    else
        point->inputs[index] = value;
}

void point_read(struct point *point, const char *const *words, size_t count) {
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        point->inputs[i] = NAN;
    for (size_t i = 0; i < count; i++)
        read_word(point, words[i]);
}

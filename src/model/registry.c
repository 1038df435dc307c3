#include "registry.h"

#include <string.h>

/* A new model is one new file and one line here. */
static const struct model *const models[] = {
    &model_trace,
    &model_coupled_traces,
    &model_coupled_lines,
    &model_ground_vias,
    &model_signal_via,
    &model_trace_loop,
    &model_loop_pair,
};

size_t model_count(void) {
    return sizeof models / sizeof *models;
}

const struct model *model_at(size_t index) {
    return models[index];
}

const struct model *model_find(const char *name) {
    for (size_t i = 0; i < model_count(); i++)
        if (strcmp(models[i]->name, name) == 0)
            return models[i];
    return NULL;
}

/* Microseconds for one evaluation of each model of vias and loops, a new shape every time. */
#include "groundrules/model.h"

#include <math.h>
#include <stdio.h>
#include <time.h>

static double now(void) {
    struct timespec time;
    clock_gettime(CLOCK_MONOTONIC, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

struct given {
    const char *name;
    double value;
};

static bool run(const char *name, const struct given *given, size_t count, const char *output) {
    enum { ROUNDS = 1000 };
    struct error error = {0};
    const struct model *model = model_find(name);
    double inputs[MODEL_MOST_INPUTS], outputs[MODEL_MOST_OUTPUTS], errors[MODEL_MOST_OUTPUTS];
    unsigned flags;
    for (size_t i = 0; i < model->input_count; i++)
        inputs[i] = NAN;
    for (size_t i = 0; i < count; i++)
        inputs[model_input_index(model, given[i].name)] = given[i].value;
    if (!model_resolve(model, inputs, &error))
        return fprintf(stderr, "%s\n", error.message), false;
    double start = now(), *height = &inputs[model_input_index(model, "height")];
    for (int k = 0; k < ROUNDS; k++) {
        *height += 1e-9;
        if (!model_evaluate(model, inputs, NULL, NULL, outputs, errors, &flags, &error))
            return fprintf(stderr, "%s\n", error.message), false;
    }
    size_t shown = model_output_index(model, output);
    printf("%-12s %zu inputs given, %s %.6g +- %.0e, %6.1f us\n", name, count, output,
           outputs[shown], errors[shown], (now() - start) / ROUNDS * 1e6);
    return true;
}

int main(void) {
    const struct given vias[] = {{"height", 1.6e-3}, {"via_diameter", 0.3e-3}, {"vias", 6}};
    const struct given signal[] = {
        {"height", 1.6e-3}, {"via_diameter", 0.3e-3}, {"return_vias", 4}};
    const struct given loop[] = {
        {"height", 1.6e-3}, {"width", 0.3e-3}, {"length", 10e-3}, {"separation", 3e-3}};
    return !(run("ground-vias", vias, 3, "inductance") &&
             run("signal-via", signal, 3, "loop_inductance") &&
             run("trace-loop", loop, 3, "loop_inductance") &&
             run("loop-pair", loop, 4, "transfer"));
}

#include "remedy.h"

#include <math.h>
#include <string.h>

/* Slower edges are looked for up to so many times the slowest stated. */
static const double SLOWEST = 30.0;

/* Two digits of the end where the search starts. */
static double grid_for(double value) {
    return pow(10.0, floor(log10(value) + 1e-9) - 1.0);
}

static void remove_axis(struct region *region, size_t input) {
    for (size_t i = 0; i < region->axis_count; i++)
        if (region->axes[i].input == input) {
            memmove(&region->axes[i], &region->axes[i + 1],
                    (region->axis_count - i - 1) * sizeof *region->axes);
            region->axis_count--;
            if (i < region->range_count)
                region->range_count--;
            return;
        }
}

static bool ask(const struct study_rule *rule, const struct study_variant *variant,
                const struct judge *judge, const struct region *region, const char *name,
                struct guideline_finding *finding, struct error *error) {
    const struct model *model = region->model;
    size_t input = model_input_index(model, name);
    bool smallest = strcmp(name, "edge") == 0;
    if (input >= model->input_count || input == rule->find)
        return true;
    struct interval stated = variant->settings[input].range;
    const struct model_input *declared = &model->inputs[input];
    if (!(stated.to > 0.0) || !isfinite(stated.to))
        return true;
    struct study_rule asked = *rule;
    asked.find = input;
    asked.find_smallest = smallest;
    asked.within =
        smallest ? (struct interval){stated.from, fmin(SLOWEST * stated.to, declared->highest)}
                 : (struct interval){declared->lowest, stated.to};
    asked.grid = grid_for(smallest ? stated.from : stated.to) / (smallest ? 1.0 : 10.0);
    struct region open = *region;
    struct judge fair = *judge;
    struct guideline_finding found;
    remove_axis(&open, input);
    open.base[rule->find] = rule->find_smallest ? rule->within.to : rule->within.from;
    fair.region = &open;
    if (!find_bound(&asked, variant, &fair, &open, &found, error))
        return false;
    if (found.status == GUIDELINE_FOUND)
        finding->remedies[finding->remedy_count++] =
            (struct guideline_remedy){input, smallest, found.value, asked.grid};
    return true;
}

bool remedies_find(const struct study_rule *rule, const struct study_variant *variant,
                   const struct judge *judge, const struct region *region,
                   struct guideline_finding *finding, struct error *error) {
    return ask(rule, variant, judge, region, "length", finding, error) &&
           ask(rule, variant, judge, region, "edge", finding, error);
}

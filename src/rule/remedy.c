#include "remedy.h"

#include <math.h>
#include <string.h>

/* Slower edges are looked for up to so many times the slowest stated. */
static const double SLOWEST = 30.0;

/* What is asked again, with something changed. */
struct asked {
    struct study_rule rule;
    struct region region;
    struct judge judge;
};

static struct asked ask_again(const struct remedy_question *question) {
    struct asked asked = {*question->rule, *question->region, *question->judge};
    return asked;
}

static bool answer(const struct remedy_question *question, struct asked *asked,
                   const struct study_variant *variant, struct guideline_remedy remedy,
                   struct guideline_finding *finding, struct error *error) {
    struct guideline_finding found;
    asked->judge.region = &asked->region;
    asked->judge.reference = question->judge->reference == NULL ? NULL : &asked->rule.reference;
    if (!find_bound(&asked->rule, variant, &asked->judge, &asked->region, &found, error))
        return false;
    bool everywhere = found.status == GUIDELINE_MET_EVERYWHERE &&
                      remedy.kind != GUIDELINE_OTHER_VALUE; /* there the stated range failed */
    if ((found.status != GUIDELINE_FOUND && !everywhere) ||
        finding->remedy_count == GUIDELINE_MOST_REMEDIES)
        return true;
    remedy.value = found.value;
    remedy.grid = asked->rule.grid;
    finding->remedies[finding->remedy_count++] = remedy;
    return true;
}

/* ---- a shorter run, a slower edge ---- */

/* Two digits of the end where the search starts. */
static double grid_for(double value) {
    return pow(10.0, floor(log10(value) + 1e-9) - 1.0);
}

static bool ask_other(const struct remedy_question *question, const char *name,
                      struct guideline_finding *finding, struct error *error) {
    const struct study_rule *rule = question->rule;
    const struct model *model = question->region->model;
    size_t input = model_input_index(model, name);
    bool smallest = strcmp(name, "edge") == 0;
    if (input >= model->input_count || input == rule->find)
        return true;
    struct interval stated = question->variant->settings[input].range;
    const struct model_input *declared = &model->inputs[input];
    if (!(stated.to > 0.0) || !isfinite(stated.to))
        return true;
    struct asked asked = ask_again(question);
    asked.rule.find = input;
    asked.rule.find_smallest = smallest;
    asked.rule.within =
        smallest ? (struct interval){stated.from, fmin(SLOWEST * stated.to, declared->highest)}
                 : (struct interval){declared->lowest, stated.to};
    asked.rule.grid = grid_for(smallest ? stated.from : stated.to) / (smallest ? 1.0 : 10.0);
    region_restrict(&asked.region, input, (struct interval){stated.to, stated.to});
    asked.region.base[rule->find] = rule->find_smallest ? rule->within.to : rule->within.from;
    struct guideline_remedy remedy = {
        .kind = GUIDELINE_OTHER_VALUE, .input = input, .at_least = smallest};
    return answer(question, &asked, question->variant, remedy, finding, error);
}

/* ---- tied copper between ---- */

/* As wide as given, else as the trace; never less than the fab makes. */
static double strip_width(const struct remedy_question *question, size_t input) {
    const struct model *model = question->region->model;
    double given = question->region->base[input], smallest = 0.0;
    size_t width = model_input_index(model, "width");
    if (given > 0.0)
        return given;
    smallest = find_fab_smallest(model, input, question->variant->stackup);
    return fmax(smallest, width < model->input_count ? question->region->base[width] : 0.0);
}

/* The reference stays as it was: without a strip. */
static void hold_reference(struct asked *asked, size_t input, double value) {
    if (isnan(asked->rule.reference.values[input]))
        asked->rule.reference.values[input] = value;
}

static bool ask_tied(const struct remedy_question *question, struct guideline_finding *finding,
                     struct error *error) {
    const struct model *model = question->region->model;
    size_t between = model_input_index(model, "between"), gap = model_input_index(model, "gap"),
           width = model_input_index(model, "between_width");
    if (between >= model->input_count || width >= model->input_count || gap >= model->input_count)
        return true;
    double tied = (double)model_word_index(&model->inputs[between], "tied");
    if (question->region->base[between] == tied)
        return true;
    struct asked asked = ask_again(question);
    double strip = strip_width(question, width);
    double beside = find_fab_smallest(model, gap, question->variant->stackup);
    double least = fmax(strip + 2.0 * beside, strip / 0.9 * (1.0 + 1e-9));
    hold_reference(&asked, between, question->region->base[between]);
    hold_reference(&asked, width, question->region->base[width]);
    region_restrict(&asked.region, between, (struct interval){tied, tied});
    region_restrict(&asked.region, width, (struct interval){strip, strip});
    if (asked.rule.find == gap)
        asked.rule.within.from = fmax(asked.rule.within.from, least);
    else if (!(question->variant->settings[gap].range.from >= least))
        return true;
    struct guideline_remedy remedy = {.kind = GUIDELINE_TIED_COPPER,
                                      .input = asked.rule.find,
                                      .at_least = asked.rule.find_smallest,
                                      .strip_width = strip};
    return !(strip > 0.0) || !(asked.rule.within.from <= asked.rule.within.to) ||
           answer(question, &asked, question->variant, remedy, finding, error);
}

/* ---- another board ---- */

static void put_board(struct region *region, const struct study_variant *variant,
                      const struct study_stackup *stackup, bool nominal) {
    struct study_board_value values[STUDY_BOARD_VALUES];
    study_board_values(stackup, values);
    for (size_t i = 0; i < STUDY_BOARD_VALUES; i++) {
        size_t input = model_input_index(region->model, values[i].input);
        if (input >= region->model->input_count ||
            (variant->settings[input].origin != STUDY_FROM_STACKUP &&
             variant->settings[input].origin != STUDY_STANDARD))
            continue;
        const struct quantity *value = &values[i].value;
        region_restrict(region, input, (struct interval){value->value, value->value});
        if (!nominal && (value->minus > 0.0 || value->plus > 0.0))
            region_add_tolerance(region, input, value);
    }
}

/* Compared anyway, with an answer of its own. */
static bool is_compared(const struct study_rule *rule, const struct study_stackup *stackup) {
    for (size_t v = 0; v < rule->variant_count; v++)
        if (rule->variants[v].stackup == stackup)
            return true;
    return rule->reference.stackup == stackup;
}

static bool ask_board(const struct remedy_question *question, const struct study_stackup *stackup,
                      struct guideline_finding *finding, struct error *error) {
    struct asked asked = ask_again(question);
    struct study_variant variant = *question->variant;
    variant.stackup = stackup;
    put_board(&asked.region, question->variant, stackup, question->rule->nominal);
    struct guideline_remedy remedy = {.kind = GUIDELINE_OTHER_BOARD,
                                      .input = asked.rule.find,
                                      .at_least = asked.rule.find_smallest,
                                      .stackup = stackup};
    return answer(question, &asked, &variant, remedy, finding, error);
}

static bool ask_boards(const struct remedy_question *question, struct guideline_finding *finding,
                       struct error *error) {
    const struct study_rule *rule = question->rule;
    const struct study *study = question->study;
    if (question->variant->stackup == NULL || study == NULL ||
        (rule->condition.against == STUDY_REFERENCE &&
         rule->reference.kept == STUDY_KEEP_IMPEDANCE))
        return true;
    for (size_t i = 0; i < study->stackup_count; i++)
        if (!is_compared(rule, &study->stackups[i]) &&
            !ask_board(question, &study->stackups[i], finding, error))
            return false;
    return true;
}

bool remedies_find(const struct remedy_question *question, struct guideline_finding *finding,
                   struct error *error) {
    return ask_other(question, "length", finding, error) &&
           ask_other(question, "edge", finding, error) && ask_tied(question, finding, error) &&
           ask_boards(question, finding, error);
}

#include "task.h"

#include "remedy.h"

#include <math.h>
#include <string.h>

/* ---- a point of the curves ---- */

struct band {
    double low, high;
};

/* The worst case's own ranges at every corner of the tolerances. */
static bool band_of(struct solver *solver, const struct region *tolerant, const struct worst *worst,
                    size_t output, struct band *band, struct error *error) {
    double inputs[MODEL_MOST_INPUTS];
    size_t count = tolerant->axis_count - tolerant->range_count;
    memcpy(inputs, worst->inputs, sizeof inputs);
    band->low = band->high = worst->verdict.value;
    for (size_t corner = 0; count > 0 && corner < (size_t)1 << count; corner++) {
        for (size_t i = 0; i < count; i++) {
            const struct region_axis *axis = &tolerant->axes[tolerant->range_count + i];
            inputs[axis->input] = (corner >> i & 1u) != 0 ? axis->high : axis->low;
        }
        const struct solver_case *solved = solver_ask(solver, inputs, error);
        if (solved == NULL)
            return false;
        band->low = fmin(band->low, solved->outputs[output]);
        band->high = fmax(band->high, solved->outputs[output]);
    }
    return true;
}

static bool point(struct task *task, struct solver *solver) {
    const struct study_chapter *chapter = task->chapter->chapter;
    const struct study_variant *variant = &chapter->variants[task->variant];
    size_t varied = chapter->vary.input, each = task->chapter->curve_count / chapter->variant_count;
    struct region nominal, tolerant;
    region_of(chapter->model, variant, varied, true, &nominal);
    region_of(chapter->model, variant, varied, false, &tolerant);
    nominal.base[varied] = tolerant.base[varied] = chapter->vary.points[task->index];
    for (size_t o = 0; o < each; o++) {
        const struct guideline_curve *curve = &task->chapter->curves[task->variant * each + o];
        const struct model_output *output = &chapter->model->outputs[curve->output];
        struct judge judge = {.solver = solver,
                              .region = &nominal,
                              .output = curve->output,
                              .at_most = output->worse != MODEL_LOWER_IS_WORSE,
                              .curve = true};
        struct worst_cases found;
        const struct worst *worst = &found.cases[0];
        struct band band;
        if (!worst_of(&judge, &nominal, WORST_PROBE, NULL, &found, &task->error) ||
            !band_of(solver, &tolerant, worst, curve->output, &band, &task->error))
            return false;
        /* The arrays were made for this: each task writes its own place. */
        ((double *)curve->y)[task->index] = worst->verdict.value;
        ((double *)curve->low)[task->index] = band.low;
        ((double *)curve->high)[task->index] = band.high;
        ((unsigned *)curve->flags)[task->index] = worst->verdict.flags;
        task->error_at[o] = fabs(worst->verdict.error);
    }
    return true;
}

/* ---- a rule ---- */

static double budget_of(const struct study_rule *rule, const struct study_variant *variant) {
    if (rule->condition.against == STUDY_BUDGET && variant->victim != NULL)
        return rule->condition.share * variant->victim->noise_margin * variant->victim->share;
    return rule->condition.limit;
}

static bool impedance_at(struct solver *solver, const double *inputs, double width,
                         double *impedance, struct error *error) {
    double tried[MODEL_MOST_INPUTS];
    const struct model *model = solver->model;
    size_t own = model_input_index(model, "width"),
           victim = model_input_index(model, "victim_width");
    memcpy(tried, inputs, sizeof tried);
    tried[own] = width;
    if (victim < model->input_count)
        tried[victim] = width;
    const struct solver_case *solved = solver_ask(solver, tried, error);
    if (solved == NULL)
        return false;
    *impedance = solved->outputs[model_output_index(model, "impedance")];
    return true;
}

/* The width on the judged board whose impedance is that of `width` on the reference board.
 * Impedance falls steadily with width, so bisection cannot miss it. */
static bool matching_width(struct solver *solver, const double *reference, const double *judged,
                           double width, double *matching, struct error *error) {
    const struct model *model = solver->model;
    const struct model_input *input = &model->inputs[model_input_index(model, "width")];
    double wanted, got, low = input->lowest, high = input->highest;
    if (!impedance_at(solver, reference, width, &wanted, error))
        return false;
    for (int step = 0; step < 50; step++) {
        double middle = sqrt(low * high);
        if (!impedance_at(solver, judged, middle, &got, error))
            return false;
        if (got > wanted)
            low = middle;
        else
            high = middle;
    }
    if (!(fabs(got - wanted) <= 1e-3 * wanted))
        return error_set(error, ERROR_INPUT,
                         "no width gives this board the reference's impedance of %.4g ohm", wanted);
    *matching = sqrt(low * high);
    return true;
}

static bool keep_impedance(struct judge *judge, struct region *region, struct error *error) {
    const struct model *model = judge->solver->model;
    size_t own = model_input_index(model, "width"),
           victim = model_input_index(model, "victim_width");
    double reference[MODEL_MOST_INPUTS], width, victim_width = NAN;
    if (own >= model->input_count || model_output_index(model, "impedance") >= model->output_count)
        return error_set(error, ERROR_INPUT, "%s has no width and impedance to keep", model->name);
    judge_reference_board(judge, region->base, reference);
    judge->reference_width = reference[own];
    judge->reference_victim_width = victim < model->input_count ? reference[victim] : NAN;
    if (!matching_width(judge->solver, reference, region->base, reference[own], &width, error))
        return false;
    if (!isnan(judge->reference_victim_width) &&
        !matching_width(judge->solver, reference, region->base, reference[victim], &victim_width,
                        error))
        return false;
    region->base[own] = width;
    if (victim < model->input_count)
        region->base[victim] = victim_width;
    return true;
}

static bool find(struct task *task, struct solver *solver, const struct study_variant *variant,
                 struct region *region, struct guideline_finding *finding) {
    const struct study_rule *rule = task->rule->rule;
    struct judge judge = {.solver = solver,
                          .region = region,
                          .output = rule->condition.output,
                          .at_most = rule->condition.at_most,
                          .limit = budget_of(rule, variant),
                          .share = rule->condition.share};
    region->base[rule->find] = rule->find_smallest ? rule->within.to : rule->within.from;
    if (rule->condition.against == STUDY_REFERENCE) {
        judge.reference = &rule->reference;
        if (rule->reference.kept == STUDY_KEEP_IMPEDANCE &&
            !keep_impedance(&judge, region, &task->error))
            return false;
    }
    return find_bound(rule, variant, &judge, region, finding, &task->error) &&
           (finding->status != GUIDELINE_CANNOT_BE_MET || task->kind != TASK_RULE ||
            remedies_find(&(struct remedy_question){task->study, rule, variant, &judge, region},
                          finding, &task->error));
}

static void restrict_to(struct region *region, const struct study_cell_axis *axis, size_t index) {
    if (axis->ranges != NULL)
        region_restrict(region, axis->input, axis->ranges[index]);
}

static bool rule_or_cell(struct task *task, struct solver *solver) {
    const struct study_rule *rule = task->rule->rule;
    const struct study_variant *variant = &rule->variants[task->variant];
    size_t columns = rule->columns.count > 0 ? rule->columns.count : 1;
    size_t place = task->variant * rule->rows.count * columns + task->index;
    bool cell = task->kind != TASK_RULE;
    struct region region;
    if (cell && rule->cells != NULL)
        variant = &rule->cells[place];
    region_of(solver->model, variant, rule->find, rule->nominal, &region);
    if (!cell)
        return find(task, solver, variant, &region,
                    (struct guideline_finding *)&task->rule->findings[task->variant]);
    restrict_to(&region, &rule->rows, task->index / columns);
    if (rule->columns.count > 0)
        restrict_to(&region, &rule->columns, task->index % columns);
    return find(task, solver, variant, &region,
                (struct guideline_finding *)&task->rule->cells[place]);
}

void task_run(struct task *task, struct model_memo *memo) {
    struct solver solver;
    if (!solver_start(&solver, task->chapter->chapter->model, memo, &task->error))
        return;
    if (task->kind == TASK_POINT)
        point(task, &solver);
    else if (!rule_or_cell(task, &solver))
        error_in(&task->error, "rule %s", task->rule->rule->id);
    task->asked = solver.asked;
    task->solved = solver.solved;
    solver_end(&solver);
}

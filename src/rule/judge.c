#include "judge.h"

#include <math.h>
#include <string.h>

/* All that a board sets, also what its sheet leaves at nothing. */
static void put_board(const struct study_stackup *stackup, const struct model *model,
                      double *inputs) {
    struct study_board_value values[STUDY_BOARD_VALUES];
    study_board_values(stackup, values);
    for (size_t i = 0; i < STUDY_BOARD_VALUES; i++) {
        size_t input = model_input_index(model, values[i].input);
        if (input < model->input_count)
            inputs[input] = values[i].value.value;
    }
}

void judge_reference_board(const struct judge *judge, const double *inputs, double *reference) {
    const struct model *model = judge->solver->model;
    memcpy(reference, inputs, model->input_count * sizeof *inputs);
    for (size_t i = judge->region->range_count; i < judge->region->axis_count; i++)
        reference[judge->region->axes[i].input] = judge->region->axes[i].nominal;
    if (judge->reference->stackup != NULL)
        put_board(judge->reference->stackup, model, reference);
    for (size_t i = 0; i < model->input_count; i++)
        if (!isnan(judge->reference->values[i]))
            reference[i] = judge->reference->values[i];
}

static void reference_inputs(const struct judge *judge, const double *inputs, double *reference) {
    const struct model *model = judge->solver->model;
    judge_reference_board(judge, inputs, reference);
    if (judge->reference->kept != STUDY_KEEP_IMPEDANCE)
        return;
    size_t victim = model_input_index(model, "victim_width");
    reference[model_input_index(model, "width")] = judge->reference_width;
    if (victim < model->input_count)
        reference[victim] = judge->reference_victim_width;
}

static bool limit_for(const struct judge *judge, const double *inputs, double *limit,
                      double *uncertain, struct error *error) {
    *limit = judge->limit;
    *uncertain = 0.0;
    if (judge->reference == NULL)
        return true;
    double reference[MODEL_MOST_INPUTS];
    reference_inputs(judge, inputs, reference);
    const struct solver_case *solved = solver_ask(judge->solver, reference, error);
    if (solved == NULL)
        return error_in(error, "reference board");
    double share = judge->share > 0.0 ? judge->share : 1.0;
    *limit = share * solved->outputs[judge->output];
    *uncertain = share * solved->errors[judge->output];
    return true;
}

bool judge_case(const struct judge *judge, const double *inputs, struct verdict *verdict,
                struct error *error) {
    const struct solver_case *solved = solver_ask(judge->solver, inputs, error);
    double limit, uncertain;
    if (solved == NULL)
        return false;
    double value = solved->outputs[judge->output], own = solved->errors[judge->output];
    if (judge->curve) {
        double badness = isnan(value) ? -INFINITY : judge->at_most ? value : -value;
        *verdict = (struct verdict){badness, value, NAN, own, solved->flags};
        return true;
    }
    if (!limit_for(judge, inputs, &limit, &uncertain, error))
        return false;
    double beyond = judge->at_most ? value - limit : limit - value;
    double scale = fmax(fabs(limit), 1e-30);
    double badness = isnan(value) || isnan(limit) ? INFINITY : (beyond + own + uncertain) / scale;
    *verdict = (struct verdict){badness, value, limit, own, solved->flags};
    return true;
}

#include "groundrules/model.h"

#include <math.h>
#include <string.h>

bool model_evaluate(const struct model *model, const double *inputs, struct model_memo *memo,
                    struct model_worker *worker, double *outputs, double *errors, unsigned *flags,
                    struct error *error) {
    double prepared[MODEL_MOST_PREPARED];
    double answers[MODEL_MOST_OUTPUTS];
    double estimates[MODEL_MOST_OUTPUTS];
    unsigned raised = 0;
    if (!model_check(model, inputs, error) || !model->prepare(inputs, prepared, memo, error) ||
        !model->respond(inputs, prepared, worker, answers, estimates, &raised, error))
        return false;
    memcpy(outputs, answers, model->output_count * sizeof *outputs);
    memcpy(errors, estimates, model->output_count * sizeof *errors);
    *flags = raised;
    return true;
}

#ifndef TESTS_MODEL_POINT_H
#define TESTS_MODEL_POINT_H

#include "check.h"
#include "groundrules/model.h"

/* One evaluation for a test: name/value pairs, the rest standard. */
struct named_value {
    const char *name;
    double value;
};

struct answer {
    double inputs[MODEL_MOST_INPUTS];
    double outputs[MODEL_MOST_OUTPUTS];
    double errors[MODEL_MOST_OUTPUTS];
    unsigned flags;
};

static inline bool try_point(const char *name, const struct named_value *values, size_t count,
                             struct answer *answer, struct error *error) {
    const struct model *model = model_find(name);
    assert_non_null(model);
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        answer->inputs[i] = NAN;
    for (size_t i = 0; i < count; i++) {
        size_t index = model_input_index(model, values[i].name);
        assert_true(index < model->input_count);
        answer->inputs[index] = values[i].value;
    }
    struct model_memo *memo = model_memo_create(error);
    struct model_worker *worker = model_worker_create(error);
    bool ok = model_resolve(model, answer->inputs, error) &&
              model_evaluate(model, answer->inputs, memo, worker, answer->outputs, answer->errors,
                             &answer->flags, error);
    model_worker_free(worker);
    model_memo_free(memo);
    return ok;
}

static inline double output_of(const char *name, const struct answer *answer, const char *output) {
    const struct model *model = model_find(name);
    size_t index = model_output_index(model, output);
    assert_true(index < model->output_count);
    return answer->outputs[index];
}

#endif

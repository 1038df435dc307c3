/* What a board sets of the models' inputs. */

#include "groundrules/study.h"

#include <math.h>
#include <stdint.h>

static struct quantity exactly(double value, enum dimension dimension) {
    return (struct quantity){.value = value, .dimension = dimension};
}

void study_board_values(const struct study_stackup *stackup,
                        struct study_board_value values[STUDY_BOARD_VALUES]) {
    bool coated = stackup->mask.value > 0.0, lossy = stackup->df > 0.0;
    const struct study_board_value all[STUDY_BOARD_VALUES] = {
        {"height", stackup->height, true},
        {"thickness", stackup->thickness, true},
        {"dk", stackup->dk, true},
        {"mask", stackup->mask, coated},
        {"mask_dk", stackup->mask_dk, coated},
        {"etch", stackup->etch, stackup->etch.value > 0.0},
        {"df", exactly(stackup->df, DIMENSION_NUMBER), lossy},
        {"material_frequency", exactly(stackup->material_frequency, DIMENSION_FREQUENCY), lossy},
    };
    for (size_t i = 0; i < STUDY_BOARD_VALUES; i++)
        values[i] = all[i];
}

void study_apply_stackup(const struct study_stackup *stackup, const struct model *model,
                         double *inputs) {
    struct study_board_value values[STUDY_BOARD_VALUES];
    study_board_values(stackup, values);
    for (size_t i = 0; i < STUDY_BOARD_VALUES; i++) {
        size_t index = model_input_index(model, values[i].input);
        if (index != SIZE_MAX && isnan(inputs[index]))
            inputs[index] = values[i].value.value;
    }
}

#include "board_loss.h"

static bool through_memo(void *context, const struct section_problem *problem,
                         struct section_solution *solution, struct error *error) {
    return model_memo_section(context, problem, solution, error);
}

bool board_loss(const struct section_problem *problem, const struct section_solution *full,
                const enum section_tie *ties, struct model_memo *memo, struct board_loss *loss,
                struct error *error) {
    struct section_loss section;
    if (!section_loss(problem, through_memo, memo, &section, error) ||
        !section_loss_reduce(&section, full, ties, &section, error))
        return false;
    struct board_loss made = {.count = section.count, .error = section.error};
    for (size_t k = 0; k < made.count * made.count; k++) {
        made.dc[k] = section.dc[k];
        made.skin[k] = section.copper[k] + section.plane[k];
    }
    *loss = made;
    return true;
}

bool board_loss_check(double thickness, double resistivity, struct error *error) {
    if (resistivity > 0.0 && thickness == 0.0)
        return error_set(error, ERROR_INPUT,
                         "copper_resistivity is %g ohm m, thickness 0: the current at a thin "
                         "sheet's edges has no finite loss; give the thickness, or 0 resistivity",
                         resistivity);
    return true;
}

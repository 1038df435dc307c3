#ifndef MODEL_BOARD_LOSS_H
#define MODEL_BOARD_LOSS_H

#include "groundrules/model.h"
#include "groundrules/section_loss.h"

/* What the signals of a section lose, per resistivity: the geometry of it, so that it can be
 * prepared.  Matrices count x count, row major. */
struct board_loss {
    size_t count;
    double dc[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];   /* 1/m^2: ohm/m over ohm m */
    double skin[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS]; /* 1/m: ohm/m over the ohms of
                                                                       a square of surface */
    double error; /* relative, of skin's diagonal */
};

/* Sections in air through the memo: found once for all dielectrics, swept or not.  `full`: the
 * section's solution, not reduced.  Fails as section_loss does. */
bool board_loss(const struct section_problem *problem, const struct section_solution *full,
                const enum section_tie *ties, struct model_memo *memo, struct board_loss *loss,
                struct error *error);

/* Sheets of copper cannot be asked for loss; `thickness` m, `resistivity` ohm m. */
bool board_loss_check(double thickness, double resistivity, struct error *error);

#endif

#ifndef FIELD_SECTION_PARTS_H
#define FIELD_SECTION_PARTS_H

#include "groundrules/section.h"

/* What the two section solvers share.  Inside, lengths are counted in heights of the foot. */

/* Step in dk of difference quotients, a share of dk: the third derivative is felt below 1e-5. */
#define SECTION_DK_STEP 0.02

/* Refuses what cannot be solved, saying what, how much and what is allowed. */
bool section_check(const struct section_problem *problem, struct error *error);

/* The substrate's reflection (dk - 1)/(dk + 1). */
double section_reflection(double dk);

/* inductance = mu0 eps0 inverse(vacuum capacitance), both count x count.
 * Fails: ERROR_SINGULAR. */
bool section_inductance(size_t count, const double *vacuum_capacitance, double *inductance,
                        struct error *error);

/* The plain solver of rectangles on a slab, problem already checked. */
bool section_plain(const struct section_problem *problem, struct section_solution *solution,
                   struct error *error);

/* Largest relative difference of any entry of the three matrices. */
double section_difference(const struct section_solution *one, const struct section_solution *other);

#endif

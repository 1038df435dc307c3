#ifndef LINE_PROBLEM_H
#define LINE_PROBLEM_H

#include "groundrules/line.h"

#include <complex.h>

/* ERROR_INPUT with the entry at fault unless L and C are finite, symmetric and positive definite
 * (the latter is found by line_modes), lengths and ends are acceptable and a near end is driven. */
bool problem_check_matrices(const struct line_problem *problem, struct error *error);
bool problem_check(const struct line_problem *problem, struct error *error);

/* V, of the near ends. */
double problem_largest_emf(const struct line_problem *problem);

/* End voltages for the EMFs of the near ends at the complex frequency s, rad/s, Re s >= 0.
 * Travelling-wave form: unknowns are the modal waves leaving both ends, so nothing is singular
 * where sin(beta l) = 0. */
bool problem_solve_at(const struct line_problem *problem, const struct line_modes *modes,
                      double complex s, double complex *near, double complex *far,
                      struct error *error);

#endif

#ifndef LINE_LOSS_H
#define LINE_LOSS_H

#include "groundrules/line.h"

#include <complex.h>

/* The laws of loss of a line, see line.h. */

bool loss_present(const struct line_problem *problem);
/* ERROR_INPUT with the entry at fault. */
bool loss_check(const struct line_problem *problem, struct error *error);

struct loss_laws {
    const struct line_problem *problem;
    bool dielectric;           /* chi is not zero */
    double offset, difference; /* chi = offset + difference ln((w2 + s)/(w1 + s)) */
};
struct loss_laws loss_laws_of(const struct line_problem *problem);

/* Z(s)/s and Y(s)/s, [count * count]; `count` is the problem's. */
void loss_immittances(const struct loss_laws *laws, double complex s, size_t count,
                      double complex *inductance, double complex *capacitance);

#endif

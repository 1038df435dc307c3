#ifndef LINE_TERMINATED_H
#define LINE_TERMINATED_H

#include "propagation.h"

/* A lossy line between its ends at one complex frequency.  Voltage waves a (leaving the near end)
 * and b (leaving the far end):  V(0) = a + E b,  I(0) = Yc (a - E b),  E = exp(-Gamma length), and
 * the same with a and b exchanged at the far end.  At every end Kirchhoff's current law
 *     r z (I + s Cend V) + g V = g EMF,    r = R/(R + z),  g = z/(R + z),
 * is scaled by the size z of the line's impedance, so that R = 0 and R = infinity are ordinary. */

struct terminated {
    struct loss_laws laws;
    const struct line_end *near, *far;
    double impedance[LINE_MOST_CONDUCTORS]; /* z, ohm */
};
/* Everything is borrowed. */
struct terminated terminated_of(const struct line_problem *problem, const struct line_end *near,
                                const struct line_end *far);

/* Voltages of all ends for the EMFs of the near ends. */
void terminated_voltages(const struct terminated *line, double complex s, double complex *near,
                         double complex *far);

#endif

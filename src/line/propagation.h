#ifndef LINE_PROPAGATION_H
#define LINE_PROPAGATION_H

#include "loss.h"

/* What a length of lossy line does to waves of voltage, as functions of the matrix Z Y: no
 * eigenvectors, so that equal modes and those that loss makes defective are ordinary.
 *     V(x) = exp(-Gamma x) a,   I(x) = Yc exp(-Gamma x) a,   Gamma = sqrt(Z Y),   Yc = Z^-1 Gamma
 */
struct propagation {
    double complex across[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];     /* exp(-Gamma length) */
    double complex admittance[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* Yc, S */
};

/* At the complex frequency s, rad/s, Re s >= 0, s not 0. */
void propagation_at(const struct loss_laws *laws, double complex s,
                    struct propagation *propagation);

/* Gamma / s = sqrt(Z Y) / s, [count * count]. */
void propagation_slowness(const struct loss_laws *laws, double complex s, double complex *slowness);

#endif

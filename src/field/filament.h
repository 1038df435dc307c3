#ifndef FIELD_FILAMENT_H
#define FIELD_FILAMENT_H

/* Neumann's double integral of two parallel filaments, without the factor mu0/4pi (so in m):
 *     N = int int dz dz' / sqrt(s^2 + (z - z')^2),  z in [a, a + l], z' in [b, b + m].
 * Distance s >= 0; s = 0 for filaments in line that do not overlap.  Relative 1e-12. */
struct filament_pair {
    double a, l;
    double b, m;
};
double filament_neumann(const struct filament_pair *pair, double s);

/* Length that both share along the axis, >= 0. */
double filament_overlap(const struct filament_pair *pair);

/* N + 2 overlap ln s: what is left when the logarithm is averaged apart.  Cancels for far pieces.
 */
double filament_remainder(const struct filament_pair *pair, double s);

#endif

#ifndef FIELD_PANEL_H
#define FIELD_PANEL_H

#include <stdbool.h>
#include <stddef.h>

/* A straight piece of a conductor's outline, parallel to an axis, with a charge density expanded in
 * Legendre polynomials: density = sum_n c_n P_n(t) / (2 half), so that c_0 is its charge. */
struct panel {
    double x, y; /* centre */
    double half; /* half the length */
    bool upright;
    size_t conductor;
};

enum { PANEL_MOST_TERMS = 6, PANEL_NEAR_NODES = 16, PANEL_FAR_NODES = 8, PANEL_IMAGE_NODES = 6 };

/* Nodes on [-1, 1]; test[a][m] = weight_a P_m(t_a) / 2. */
struct panel_rules {
    double near[PANEL_NEAR_NODES], near_test[PANEL_NEAR_NODES][PANEL_MOST_TERMS];
    double far[PANEL_FAR_NODES], far_test[PANEL_FAR_NODES][PANEL_MOST_TERMS];
    double image[PANEL_IMAGE_NODES], image_test[PANEL_IMAGE_NODES][PANEL_MOST_TERMS];
};
void panel_rules_make(struct panel_rules *rules);

/* phi[n] = 1/2 integral over [-1, 1] of P_n(t) ln|z - t| dt, z = re + i im in the panel's own
 * coordinate, n = 0 .. terms - 1.  Closed form: integral P_n(t) ln(z - t) dt =
 * 2 (Q_(n+1)(z) - Q_(n-1)(z)) / (2n + 1) for n >= 1, Q_n the Legendre functions of the second kind
 * (by parts, P_n = (P_(n+1)' - P_(n-1)')/(2n + 1)); upward recurrence, absolute error below 1e-9
 * for |z| <= 5. */
void panel_potential(double re, double im, size_t terms, double *phi);

/* The source seen in a horizontal mirror: y -> mirror - y.  `mirrored` false leaves it alone. */
struct panel_image {
    bool mirrored;
    double mirror;
};

/* block[m * terms + n] += scale * integral of P_m(target) P_n(source image) ln(distance), both
 * densities with unit charge for n = 0.  Exact inner potentials when the two are near or touch,
 * Gauss products when they are far: relative error about 1e-9. */
void panel_add_logarithm(const struct panel_rules *rules, const struct panel *target,
                         const struct panel *source, struct panel_image image, size_t terms,
                         double scale, double *block);

/* Distance between the nearest points of the two. */
double panel_distance(const struct panel *target, const struct panel *source,
                      struct panel_image image);

#endif

#ifndef TESTS_FIELD_INDUCTANCE_PIECES_H
#define TESTS_FIELD_INDUCTANCE_PIECES_H

#include "groundrules/inductance.h"

/* Millimetres in, pieces out. */

static inline struct inductance_piece upright_tube(double x, double y, double foot, double height,
                                                   double diameter) {
    return (struct inductance_piece){.shape = INDUCTANCE_TUBE,
                                     .axis = INDUCTANCE_Z,
                                     .start = {x * 1e-3, y * 1e-3, foot * 1e-3},
                                     .length = height * 1e-3,
                                     .diameter = diameter * 1e-3};
}

static inline struct inductance_piece filament_along(enum inductance_axis axis, double x, double y,
                                                     double z, double length) {
    return (struct inductance_piece){.shape = INDUCTANCE_FILAMENT,
                                     .axis = axis,
                                     .start = {x * 1e-3, y * 1e-3, z * 1e-3},
                                     .length = length * 1e-3};
}

/* A bar along x from x = 0, centred on y and z. */
static inline struct inductance_piece level_bar(double y, double z, double width, double thickness,
                                                double length) {
    return (struct inductance_piece){.shape = INDUCTANCE_BAR,
                                     .axis = INDUCTANCE_X,
                                     .start = {0, y * 1e-3, z * 1e-3},
                                     .length = length * 1e-3,
                                     .across = {width * 1e-3, thickness * 1e-3}};
}

static const double PICO = 1e12;

#endif

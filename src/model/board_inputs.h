#ifndef MODEL_BOARD_INPUTS_H
#define MODEL_BOARD_INPUTS_H

#include "groundrules/model.h"

/* Inputs that several models share, declared once so that their names, ranges and meanings agree.
 */

#define BOARD_HEIGHT                                                                               \
    {                                                                                              \
        "height", "foot of the trace to the top of the plane", DIMENSION_LENGTH, MODEL_SHAPE, NAN, \
            10e-6, 10e-3, false, NULL, NULL, 0, NULL                                               \
    }
#define BOARD_WIDTH                                                                                \
    {                                                                                              \
        "width", "width of the trace at its foot", DIMENSION_LENGTH, MODEL_SHAPE, NAN, 10e-6,      \
            50e-3, false, NULL, NULL, 0, NULL                                                      \
    }
#define BOARD_THICKNESS                                                                            \
    {                                                                                              \
        "thickness", "finished copper thickness; 0 = thin sheet", DIMENSION_LENGTH, MODEL_SHAPE,   \
            35e-6, 0, 0.5e-3, false, NULL, NULL, 0, NULL                                           \
    }
#define BOARD_DK                                                                                   \
    {                                                                                              \
        "dk", "relative permittivity of the board under the trace", DIMENSION_NUMBER, MODEL_SHAPE, \
            4.3, 1, 15, false, NULL, NULL, 0, NULL                                                 \
    }
#define BOARD_ETCH                                                                                 \
    {                                                                                              \
        "etch", "how much narrower the top of the copper is, per side; 0 = square",                \
            DIMENSION_LENGTH, MODEL_SHAPE, 0, 0, 0.2e-3, false, NULL, NULL, 0, NULL                \
    }
#define BOARD_DF                                                                                   \
    {                                                                                              \
        "df", "loss tangent of the board, its mask and what fills it; 0 = lossless",               \
            DIMENSION_NUMBER, MODEL_SHAPE, 0, 0, 0.2, false, NULL, NULL, 0, NULL                   \
    }
#define BOARD_MATERIAL_FREQUENCY                                                                   \
    {                                                                                              \
        "material_frequency", "frequency at which dk and df hold", DIMENSION_FREQUENCY,            \
            MODEL_DRIVE, 1e9, 1e3, 100e9, false, NULL, NULL, 0, NULL                               \
    }
#define BOARD_MASK                                                                                 \
    {                                                                                              \
        "mask", "thickness of the solder mask, over the board as over the copper; 0 = none",       \
            DIMENSION_LENGTH, MODEL_SHAPE, 0, 0, 0.2e-3, false, NULL, NULL, 0, NULL                \
    }
#define BOARD_MASK_DK                                                                              \
    {                                                                                              \
        "mask_dk", "relative permittivity of the solder mask", DIMENSION_NUMBER, MODEL_SHAPE, 3.5, \
            1, 15, false, NULL, NULL, 0, NULL                                                      \
    }
#define BOARD_COVER                                                                                \
    {                                                                                              \
        "cover", "foot of the trace to the bottom of a plane above; 0 = none", DIMENSION_LENGTH,   \
            MODEL_SHAPE, 0, 0, 10e-3, false, NULL, NULL, 0, NULL                                   \
    }
#define BOARD_COVER_DK                                                                             \
    {                                                                                              \
        "cover_dk", "relative permittivity of what fills the room under the plane above",          \
            DIMENSION_NUMBER, MODEL_SHAPE, 4.3, 1, 15, false, NULL, NULL, 0, NULL                  \
    }
#define BOARD_EDGE_DISTANCE(WHAT)                                                                  \
    {                                                                                              \
        "edge_distance", WHAT " to the edge of the plane; 0 = infinite plane", DIMENSION_LENGTH,   \
            MODEL_SHAPE, 0, 0, 0.1, false, NULL, NULL, 0, NULL                                     \
    }
#define BOARD_FREQUENCY                                                                            \
    {                                                                                              \
        "frequency", "frequency of resistance and attenuation", DIMENSION_FREQUENCY, MODEL_DRIVE,  \
            1e9, 1e3, 100e9, false, NULL, NULL, 0, NULL                                            \
    }

enum board_flag {
    BOARD_FLAG_THIN,
    BOARD_FLAG_WIDE_SECTION,
    BOARD_FLAG_SLOW,
    BOARD_FLAG_NEAR_EDGE,
    BOARD_FLAG_COUNT,
};
extern const struct model_flag board_flags[BOARD_FLAG_COUNT];

#define BOARD_SECTION_METHOD                                                                       \
    "The cross-section is solved as an electrostatic problem by Galerkin boundary elements on "    \
    "the copper's faces, "                                                                         \
    "with the images of the grounded slab as kernel, once with the laminate and once in air; the " \
    "external "                                                                                    \
    "inductance follows from the air solution. With solder mask, a plane above, a plane that "     \
    "ends or etched copper the charge on the borders of the dielectrics is solved too, with the "  \
    "exact kernel of the planes. Every section is solved twice with different orders and the "     \
    "difference is carried as its error estimate."
#define BOARD_SECTION_VALIDITY                                                                     \
    "Quasi-TEM: the section must be small against the wavelength. Planes are uncut, perfectly "    \
    "conducting and infinite but for the edge that is given; solder mask is as thick over the "    \
    "copper as beside it."

#define BOARD_LOSS_METHOD                                                                          \
    "Skin resistance of trace and plane follows from the growth of the inductance in air when "    \
    "their walls recede (the incremental-inductance rule, Wheeler 1942); the dielectric is that "  \
    "of Djordjevic et al. 2001, causal, with the given values at the material frequency."
#define BOARD_LOSS_VALIDITY                                                                        \
    "Loss: copper thicker than a few skin depths, smooth; one loss tangent for all dielectrics."

/* The board that a section lies on, as a model's inputs give it; what is 0 is not there. */
struct board {
    double height, thickness, dk;
    double etch;
    double mask, mask_dk;
    double cover, cover_dk;
    double edge_distance;
};

/* Combinations that cannot be.  `narrowest`: m, the narrowest copper of the section. */
bool board_check(const struct board *board, double narrowest, struct error *error);

/* Its planes, dielectrics and coating, the plane ending `edge_distance` from x = `edge_from`. */
void board_sketch(struct sketch *sketch, const struct board *board, double edge_from);
/* A trace or strip on it; from left to right. */
void board_sketch_copper(struct sketch *sketch, const struct board *board, enum sketch_role role,
                         double left, double width, const char *label);
/* Dimensions of what board_sketch drew; `right`: x of the copper that they are measured at. */
void board_sketch_dimensions(struct sketch *sketch, const struct board *board, double right,
                             double edge_from);

/* The section problem that a drawing on this board poses. */
void board_section(const struct sketch *sketch, const struct board *board,
                   struct section_problem *problem, enum section_tie *ties);

/* Thin copper, and the plane's edge within ten heights. */
unsigned board_flags_of_section(const struct board *board);
/* BOARD_FLAG_WIDE_SECTION: size (m) above a tenth of the wavelength in the laminate at the edge's
 * highest frequency, taken as 0.35 over the 10-90 % time (common practice, no source).
 * BOARD_FLAG_SLOW: the edge's frequency is below ten times rho/(2 pi mu0 t h), where the plane's
 * currents no longer follow the trace. */
unsigned board_flags_of_edge(double size, double height, double thickness, double dk, double edge);

#endif

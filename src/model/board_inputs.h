#ifndef MODEL_BOARD_INPUTS_H
#define MODEL_BOARD_INPUTS_H

#include "groundrules/model.h"

/* Inputs that several models share, declared once so that their names, ranges and meanings agree.
 */

#define BOARD_MASK_NOT_YET                                                                         \
    "solder mask over the traces is not solved by this version; leave it out (bare copper)"
#define BOARD_COVER_NOT_YET "a plane above the traces is not solved by this version; leave it out"
#define BOARD_EDGE_NOT_YET                                                                         \
    "a plane that ends is not solved by this version; leave it out (infinite plane)"
#define BOARD_LOSS_NOT_YET "losses are not computed by this version (lossless lines)"

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
        "etch", "how much narrower the top of the trace is, per side", DIMENSION_LENGTH,           \
            MODEL_SHAPE, 0, 0, 0.2e-3, false, NULL, NULL, 0,                                       \
            "trapezoidal traces are not solved by this version; leave it out (square edges)"       \
    }
#define BOARD_DF                                                                                   \
    {                                                                                              \
        "df", "loss tangent of the board", DIMENSION_NUMBER, MODEL_DRIVE, 0, 0, 0.2, false, NULL,  \
            NULL, 0, BOARD_LOSS_NOT_YET                                                            \
    }
#define BOARD_MATERIAL_FREQUENCY                                                                   \
    {                                                                                              \
        "material_frequency", "frequency at which dk and df hold", DIMENSION_FREQUENCY,            \
            MODEL_DRIVE, 1e9, 1e3, 100e9, false, NULL, NULL, 0, BOARD_LOSS_NOT_YET                 \
    }
#define BOARD_MASK                                                                                 \
    {                                                                                              \
        "mask", "thickness of the solder mask; 0 = none", DIMENSION_LENGTH, MODEL_SHAPE, 0, 0,     \
            0.2e-3, false, NULL, NULL, 0, BOARD_MASK_NOT_YET                                       \
    }
#define BOARD_MASK_DK                                                                              \
    {                                                                                              \
        "mask_dk", "relative permittivity of the solder mask", DIMENSION_NUMBER, MODEL_SHAPE, 3.5, \
            1, 15, false, NULL, NULL, 0, BOARD_MASK_NOT_YET                                        \
    }
#define BOARD_COVER                                                                                \
    {                                                                                              \
        "cover", "foot of the trace to the bottom of a plane above; 0 = none", DIMENSION_LENGTH,   \
            MODEL_SHAPE, 0, 0, 10e-3, false, NULL, NULL, 0, BOARD_COVER_NOT_YET                    \
    }
#define BOARD_COVER_DK                                                                             \
    {                                                                                              \
        "cover_dk", "relative permittivity between the trace and the plane above",                 \
            DIMENSION_NUMBER, MODEL_SHAPE, 4.3, 1, 15, false, NULL, NULL, 0, BOARD_COVER_NOT_YET   \
    }
#define BOARD_EDGE_DISTANCE                                                                        \
    {                                                                                              \
        "edge_distance", "centre of the trace to the edge of the plane; 0 = infinite plane",       \
            DIMENSION_LENGTH, MODEL_SHAPE, 0, 0, 0.1, false, NULL, NULL, 0, BOARD_EDGE_NOT_YET     \
    }
#define BOARD_FREQUENCY                                                                            \
    {                                                                                              \
        "frequency", "frequency of resistance and attenuation", DIMENSION_FREQUENCY, MODEL_DRIVE,  \
            1e9, 1e3, 100e9, false, NULL, NULL, 0, BOARD_LOSS_NOT_YET                              \
    }

enum board_flag {
    BOARD_FLAG_THIN,
    BOARD_FLAG_WIDE_SECTION,
    BOARD_FLAG_SLOW,
    BOARD_FLAG_COUNT,
};
extern const struct model_flag board_flags[BOARD_FLAG_COUNT];

#define BOARD_SECTION_METHOD                                                                       \
    "The cross-section is solved as an electrostatic problem by Galerkin boundary elements on "    \
    "the copper's faces, "                                                                         \
    "with the images of the grounded slab as kernel, once with the laminate and once in air; the " \
    "external "                                                                                    \
    "inductance follows from the air solution. Every section is solved twice with different "      \
    "orders and the "                                                                              \
    "difference is carried as its error estimate."
#define BOARD_SECTION_VALIDITY                                                                     \
    "Quasi-TEM: the section must be small against the wavelength. The plane is infinite, uncut "   \
    "and perfectly "                                                                               \
    "conducting; copper has square edges; air above the laminate, no solder mask; no loss."

/* The plane and the slab that every section here lies on. */
void board_sketch_slab(struct sketch *sketch, double height);

/* BOARD_FLAG_WIDE_SECTION: size (m) above a tenth of the wavelength in the laminate at the edge's
 * highest frequency, taken as 0.35 over the 10-90 % time (common practice, no source).
 * BOARD_FLAG_SLOW: the edge's frequency is below ten times rho/(2 pi mu0 t h), where the plane's
 * currents no longer follow the trace. */
unsigned board_flags_of_edge(double size, double height, double thickness, double dk, double edge);

#endif

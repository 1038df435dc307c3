#ifndef MODEL_VIA_INPUTS_H
#define MODEL_VIA_INPUTS_H

#include "groundrules/inductance.h"
#include "groundrules/model.h"

/* Inputs and flags that the models of vias and loops share, and the places of a group's vias. */

enum { VIA_MOST = 64, VIA_MOST_AT_AN_END = 8 };

#define VIA_HEIGHT                                                                                 \
    {                                                                                              \
        "height", "height of the vias, from the top of the plane", DIMENSION_LENGTH, MODEL_SHAPE,  \
            NAN, 10e-6, 10e-3, false, NULL, NULL, 0, NULL                                          \
    }
#define VIA_DIAMETER                                                                               \
    {                                                                                              \
        "via_diameter", "outside of the plated barrel (the drill)", DIMENSION_LENGTH, MODEL_SHAPE, \
            0.3e-3, 50e-6, 5e-3, false, NULL, NULL, 0, NULL                                        \
    }
#define VIA_PITCH                                                                                  \
    {                                                                                              \
        "via_pitch", "centre to centre of neighbouring vias", DIMENSION_LENGTH, MODEL_SHAPE, 1e-3, \
            50e-6, 0.1, false, NULL, NULL, 0, NULL                                                 \
    }
#define VIA_FREQUENCY(of)                                                                          \
    {                                                                                              \
        "frequency", "frequency of the " of, DIMENSION_FREQUENCY, MODEL_DRIVE, 100e6, 1e3, 100e9,  \
            false, NULL, NULL, 0, NULL                                                             \
    }

enum via_flag { VIA_FLAG_LONG, VIA_FLAG_SLOW, VIA_FLAG_ROW, VIA_FLAG_COUNT };
extern const struct model_flag via_flags[VIA_FLAG_COUNT];

/* VIA_FLAG_LONG: `size` (m) above a tenth of the wavelength in a laminate of dk 4.3.
 * VIA_FLAG_SLOW: below ten times rho/(2 pi mu0 t h), where the plane's currents no longer follow.
 */
unsigned via_flags_of(double size, double height, double frequency);

/* Barrels this close leave no laminate between them: centre to centre at least so much. */
double via_least_pitch(double diameter);

/* A whole number of them, and a pitch that keeps them apart when there is more than one. */
bool via_check_count(const char *name, double count, struct error *error);
bool via_check_pitch(double count, double pitch, double diameter, struct error *error);

/* "0.63 mm" */
struct via_text {
    char text[40];
};
struct via_text via_length(double length);

/* Barrels joined at both ends. */
struct via_group {
    double inductance;
    double error; /* absolute: what the last harmonics changed, carried on geometrically */
    double even;  /* inductance with the current even around each barrel */
    double largest, smallest; /* shares of the current */
};
/* `spacing`: of the closest two. */
bool via_joined(const struct inductance_barrels *barrels, double spacing, struct via_group *group,
                struct error *error);

/* What a solution leaves open that was `coarser` with fewer harmonics. */
double via_rest(double inductance, double coarser, double diameter, double spacing);

#endif

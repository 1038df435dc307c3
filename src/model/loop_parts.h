#ifndef MODEL_LOOP_PARTS_H
#define MODEL_LOOP_PARTS_H

#include "via_inputs.h"

/* What trace-loop and loop-pair share: a trace over a plane, closed through upright vias at both
 * ends; one of them, or two equal ones side by side. */
struct loop_shape {
    double height; /* m, plane to the foot of the trace, a body under it included */
    double width, thickness;
    double length; /* between the axes of the vias at its two ends */
    double via_diameter;
    size_t vias; /* at each end, in a row across the trace */
    double via_pitch;
    double separation; /* of two loops, centre to centre */
};

/* Self (and mutual) inductance, H, and what of it the traces and the vias bring. */
struct loop_solution {
    double inductance, error;
    double trace, vias;
    double mutual, mutual_error;
};
bool loop_solve(const struct loop_shape *shape, size_t count, struct loop_solution *solution,
                struct error *error);

/* Counts, pitch, and a loop no shorter than its vias are wide. */
bool loop_check(const struct loop_shape *shape, double vias, struct error *error);

/* VIA_FLAG_ROW among the flags at this frequency. */
unsigned loop_flags(const struct loop_shape *shape, double frequency);

/* Along the loop: trace, vias, plane. */
void loop_sketch(const struct loop_shape *shape, double body, struct sketch *sketch);
/* One or two loops from above, along x. */
void loop_plan(const struct loop_shape *shape, size_t count, struct sketch *plan);
/* The dimensions `height` and, over a part, `body`. */
void loop_heights(double height, double body, double at, struct sketch *sketch);

#define LOOP_HEIGHT                                                                                \
    {                                                                                              \
        "height", "top of the plane to the foot of the trace", DIMENSION_LENGTH, MODEL_SHAPE, NAN, \
            10e-6, 10e-3, false, NULL, NULL, 0, NULL                                               \
    }
#define LOOP_WIDTH                                                                                 \
    {                                                                                              \
        "width", "width of the trace", DIMENSION_LENGTH, MODEL_SHAPE, NAN, 10e-6, 50e-3, false,    \
            NULL, NULL, 0, NULL                                                                    \
    }
#define LOOP_THICKNESS                                                                             \
    {                                                                                              \
        "thickness", "finished copper thickness; 0 = thin sheet", DIMENSION_LENGTH, MODEL_SHAPE,   \
            35e-6, 0, 0.5e-3, false, NULL, NULL, 0, NULL                                           \
    }
#define LOOP_LENGTH                                                                                \
    {                                                                                              \
        "length", "between the axes of the vias at the two ends", DIMENSION_LENGTH, MODEL_SHAPE,   \
            NAN, 0.1e-3, 1, false, NULL, NULL, 0, NULL                                             \
    }
#define LOOP_VIAS                                                                                  \
    {                                                                                              \
        "vias", "vias in parallel at each end, in a row across the trace", DIMENSION_COUNT,        \
            MODEL_SHAPE, 1, 1, VIA_MOST_AT_AN_END, false, NULL, NULL, 0, NULL                      \
    }
#define LOOP_BODY                                                                                  \
    {                                                                                              \
        "body", "height of a part or terminal that the loop climbs over, added to the height",     \
            DIMENSION_LENGTH, MODEL_SHAPE, 0, 0, 20e-3, false, NULL, NULL, 0, NULL                 \
    }

#define LOOP_METHOD                                                                                \
    "Partial inductances over a perfect plane by images. The trace's surface is divided into "     \
    "strips, graded to its edges, whose currents find their shares; the result is extrapolated "   \
    "from two divisions, and the step is the error estimate. The vias are thin round tubes, "      \
    "their currents free to find their shares "                                                    \
    "among them and around each; trace and vias close the loop through the plane as a network."
#define LOOP_VALIDITY                                                                              \
    "Quasi-static: the loop is shorter than a tenth of the wavelength. Perfectly conducting "      \
    "copper, an infinite uncut plane; current of trace and vias constant along their length; the " \
    "vias end in the middle of the trace's copper, and pads and copper that joins several vias "   \
    "are not counted."

#endif

#ifndef GROUNDRULES_SKETCH_H
#define GROUNDRULES_SKETCH_H

#include "groundrules/section.h"

/* A model's geometry as data: the solver's input and the scale drawing both come from it, so the
 * picture cannot lie.  Metres, y up, y = 0 is the top of the ground plane. */

enum sketch_role {
    SKETCH_PLANE,
    SKETCH_DIELECTRIC,
    SKETCH_TRACE, /* a lone trace */
    SKETCH_AGGRESSOR,
    SKETCH_VICTIM,
    SKETCH_TIED,     /* ground copper tied everywhere */
    SKETCH_FLOATING, /* copper connected to nothing */
    SKETCH_TIED_ONE_END,
    SKETCH_MASK,  /* coating: the solid lies on the board, over copper it is as thick */
    SKETCH_COVER, /* a plane above */
};

struct sketch_solid {
    enum sketch_role role;
    double left, right, bottom,
        top;           /* left = -INFINITY, right = INFINITY: runs out of the picture */
    const char *label; /* "aggressor", "dk 4.3"; static or arena text; NULL = none */
};

/* A dimension line between two coordinates along one axis. */
struct sketch_dimension {
    bool vertical;
    double from, to;   /* along the axis */
    double at;         /* where on the other axis the measured edges are */
    const char *input; /* name of the input, "gap" */
    double value;      /* m */
};

/* A barrel seen from above. */
struct sketch_disc {
    enum sketch_role role;
    double x, y, diameter;
    const char *label; /* as of a solid */
};

enum { SKETCH_MOST_SOLIDS = 32, SKETCH_MOST_DISCS = 64, SKETCH_MOST_DIMENSIONS = 16 };

struct sketch {
    bool plan;   /* seen from above: y runs across the board, solids are the outlines of traces */
    double etch; /* m: the top of all copper on the board is so much narrower on either side */
    size_t solid_count;
    struct sketch_solid solids[SKETCH_MOST_SOLIDS];
    size_t disc_count; /* of a plan; drawn over the solids */
    struct sketch_disc discs[SKETCH_MOST_DISCS];
    size_t dimension_count;
    struct sketch_dimension dimensions[SKETCH_MOST_DIMENSIONS];
};

void sketch_add_solid(struct sketch *sketch, struct sketch_solid solid);
void sketch_add_disc(struct sketch *sketch, struct sketch_disc disc);
void sketch_add_dimension(struct sketch *sketch, struct sketch_dimension dimension);

/* The section problem that is drawn: conductors in the order in which they were added, from left to
 * right, with their ties; coating, plane above and the plane's end.  The permittivities in
 * `problem` are the caller's. */
void sketch_section(const struct sketch *sketch, struct section_problem *problem,
                    enum section_tie *ties);

#endif

#ifndef FIELD_OUTLINE_H
#define FIELD_OUTLINE_H

#include "plane_map.h"

#include "groundrules/arena.h"

#include <complex.h>
#include <stdbool.h>
#include <stddef.h>

/* A cross-section as the general solver sees it: straight faces, each the surface of a conductor or
 * the border of two dielectrics.  Points are x + i y, in any unit of length. */

enum { OUTLINE_MOST_FACES = 256, OUTLINE_MOST_CORNERS = 2 * OUTLINE_MOST_FACES };

/* An inner side of a conductor, where no field is. */
#define OUTLINE_METAL 0.0
/* Owner of a face between dielectrics. */
#define OUTLINE_NOBODY ((size_t)-1)

struct outline_face {
    double complex from, to; /* to: of an endless face the unit vector it runs along */
    bool endless;
    double left, right; /* relative permittivities beside it, seen from `from`, or OUTLINE_METAL */
    size_t conductor;   /* or OUTLINE_NOBODY */
    double power[2];    /* at from, to: corner_power, 1 = no corner */
};

struct outline {
    struct plane_map map;
    size_t conductors, count;
    struct outline_face face[OUTLINE_MOST_FACES];
    /* Where charge or kernel are singular, mirror images in the planes too. */
    size_t corners;
    double complex corner[OUTLINE_MOST_CORNERS];
};

/* A conductor's face has metal on one side or on none (a sheet). A border with the same dielectric
 * on both sides is left out.  Fails: ERROR_INTERNAL when there are too many. */
bool outline_add(struct outline *outline, double complex from, double complex to, double left,
                 double right, size_t conductor, struct error *error);
bool outline_add_endless(struct outline *outline, double complex from, double complex along,
                         double left, double right, struct error *error);

/* Sets the powers and the list of corners; after the last face. */
void outline_find_corners(struct outline *outline);

/* The same conductors in air. */
void outline_in_air(const struct outline *outline, struct outline *air);

/* The same conductors with the powers that their corners have here, for a kernel that knows the
 * dielectrics: only free charge on conductors. */
void outline_of_free_charge(const struct outline *outline, struct outline *conductors);

/* The part with x <= 0 of an outline that is its own mirror image in x = 0; corners as before. */
void outline_left_half(const struct outline *outline, struct outline *half);

#endif

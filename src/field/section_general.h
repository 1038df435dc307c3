#ifndef FIELD_SECTION_GENERAL_H
#define FIELD_SECTION_GENERAL_H

#include "piece.h"

#include "groundrules/section.h"

/* Rectangles on a slab over an endless plane, nothing else: the image solvers' case. */
bool section_is_bare(const struct section_problem *problem);

/* Efforts 0 and up: about 1e-4, then a few times less with each. */
void section_general_effort(int effort, struct piece_effort *chosen);
/* Graded meshes without corner exponents, the oracle: a coarse (0) and a fine one (1). */
void section_general_graded(int effort, struct piece_effort *chosen);

/* One solve of a checked section, with the dielectric part if `share`; error = NAN. */
bool section_general(const struct section_problem *problem, const struct piece_effort *effort,
                     bool share, struct section_solution *solution, struct error *error);

#endif

#ifndef FIELD_SECTION_OUTLINE_H
#define FIELD_SECTION_OUTLINE_H

#include "outline.h"

#include "groundrules/section.h"

/* The faces of a checked section, lengths in heights, x = 0 midway between its outermost copper.
 * Fails: ERROR_INPUT where coatings of unequal copper cover each other. */
bool section_outline(const struct section_problem *problem, struct outline *outline,
                     struct error *error);

/* Its own mirror image in x = 0. */
bool section_outline_mirrored(const struct section_problem *problem);

/* The same dielectric everywhere: C = dk C0. */
bool section_outline_homogeneous(const struct section_problem *problem);

#endif

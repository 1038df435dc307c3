#ifndef FIELD_OUTLINE_SOLVE_H
#define FIELD_OUTLINE_SOLVE_H

#include "outline.h"
#include "piece.h"

#include "groundrules/section.h"

struct outline_solution {
    size_t unknowns;
    /* conductors x conductors, F/m: Maxwell capacitance, and the part of it whose energy is in
     * regions of permittivity 1.  Without a plane the rows sum to zero. */
    double capacitance[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double air_share[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
};

/* Charges for unit potentials.  `mirrored`: the outline is its own mirror image in x = 0 and its
 * conductors are numbered from left to right; then two systems of half the size are solved.
 * `share`: the air share is wanted too.  `slab`: NULL, or the kernel of a grounded slab of height 1
 * on which conductors of an outline_of_free_charge stand.  Fails: ERROR_INPUT (too many pieces),
 * ERROR_SINGULAR, ERROR_MEMORY. */
bool outline_solve(const struct outline *outline, bool mirrored, bool share,
                   const struct slab_kernel *slab, const struct piece_effort *effort,
                   struct outline_solution *solution, struct error *error);

#endif

#ifndef RULE_SCAN_H
#define RULE_SCAN_H

#include "worst.h"

/* Samples of a region's ranges and choices, and the worst of them, no two of which are neighbours.
 */

enum { SCAN_FINE = 8 }; /* the finest cell is this part of a sample's */

struct scan_start {
    size_t at[MODEL_MOST_INPUTS]; /* per range axis, in finest cells */
    struct worst worst;
};

struct scan {
    const struct judge *judge;
    const struct region *region;
    bool full;                         /* as finely as a proof needs */
    bool thorough;                     /* what is found is climbed on all axes */
    size_t samples[MODEL_MOST_INPUTS]; /* per range axis; 0 = stays where it is */
    double low[MODEL_MOST_INPUTS];     /* where sampling starts */
    size_t line;                       /* the axis that is refined; SIZE_MAX = none */
    double best;                       /* badness of the worst sample */
    struct scan_start starts[WORST_MOST_CASES];
    size_t start_count, most_starts;
};

/* `from`: the inputs over which the sampled axes are written.  Starts are sorted, the worst first.
 */
bool scan_region(struct scan *scan, const double *from, struct error *error);

/* Length and edge make resonances, and a gap may; everything else bends gently. */
bool scan_is_wavy(const struct region *region, const struct region_axis *axis);

/* What a difference of badness is measured against: 1 for a rule, whose badness is a share of the
 * limit. */
double scan_scale(const struct judge *judge, double badness);

#endif

#ifndef RULE_CLIMB_H
#define RULE_CLIMB_H

#include "worst.h"

/* Looks a step to either side along one axis and goes where it gets worse; where neither side does,
 * the top of the parabola through the three is tried and the step shortened to a quarter, `levels`
 * times in all (a pattern search, Hooke and Jeeves 1961, with a parabolic step).  `cell` is the
 * distance between samples, in the logarithm where the axis is sampled so.  Ends: downhill from an
 * end of the axis is believed after `patience` looks. */
struct climb {
    double cell;
    int levels, patience;
};

bool climb_axis(const struct judge *judge, const struct region_axis *axis, struct climb climb,
                struct worst *worst, struct error *error);

/* Along a ridge that runs across the axes, where a search along them stands still: random steps in
 * all axes but `line` at once, each followed by a climb along `line` (SIZE_MAX: none), longer after
 * a success, shorter after a failure (Rechenberg 1973), on in a direction that got worse; at most
 * `steps`, and until it rises no more.  The numbers drawn are the same each time. */
bool climb_ridge(const struct judge *judge, const struct region *region, size_t line, int steps,
                 struct worst *worst, struct error *error);

/* The distance between `samples` samples of an axis from `low` to its end. */
double climb_cell(const struct region_axis *axis, double low, size_t samples);

#endif

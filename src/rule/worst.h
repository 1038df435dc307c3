#ifndef RULE_WORST_H
#define RULE_WORST_H

#include "judge.h"

/* The worst case of a region: a scan over samples of every axis, then a climb from the worst of
 * them by solving. What the scan cannot exclude: a maximum between two samples that shows in none
 * of their neighbours. */

enum worst_effort {
    WORST_PROBE, /* to see where a bound may lie, and for curves */
    WORST_FULL,  /* to prove it: finer samples, more starts, tolerances searched inside their ends too */
};

struct worst {
    struct verdict verdict;
    double inputs[MODEL_MOST_INPUTS];
};

bool worst_of(const struct judge *judge, const struct region *region, enum worst_effort effort,
              struct worst *worst, struct error *error);

#endif

#ifndef RULE_WORST_H
#define RULE_WORST_H

#include "judge.h"

/* The worst cases of a region: a scan over samples of every axis, refined where a worse case may
 * hide between two of them, then a climb from the worst of them by solving.  What cannot be
 * excluded: a maximum between two samples that shows in none of their neighbours.
 * tests/rule/test_dense.c attacks what was found at random. */

enum worst_effort {
    WORST_PROBE, /* to see where a bound may lie, and for curves */
    WORST_FAR,   /* to prove what a probe has found to be far from the limit: its scan, a full climb
                  */
    WORST_FULL,  /* to prove it */
};

struct worst {
    struct verdict verdict;
    double inputs[MODEL_MOST_INPUTS];
};

/* What is so far from the limit, in badness, is as good as proven by a probe: what may hide between
 * its samples does not make a quarter of the limit the whole of it. */
#define WORST_IS_FAR (-0.75)

enum { WORST_MOST_CASES = 6 };

/* Local maxima of badness, the worst first; at least one. */
struct worst_cases {
    struct worst cases[WORST_MOST_CASES];
    size_t count;
};

/* `hint`: a bad case of a region alike, for what the scan leaves out; NULL = none. */
bool worst_of(const struct judge *judge, const struct region *region, enum worst_effort effort,
              const struct worst *hint, struct worst_cases *found, struct error *error);

/* *worst becomes the case with `value` for `input` if that is worse; *badness says how bad it is
 * either way. */
bool worst_try(const struct judge *judge, struct worst *worst, size_t input, double value,
               double *badness, struct error *error);

#endif

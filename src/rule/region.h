#ifndef RULE_REGION_H
#define RULE_REGION_H

#include "groundrules/study.h"

/* What a statement speaks about: one value for most inputs, an interval for the rest. */

enum region_kind {
    REGION_RANGE,     /* stated: lengths up to, edges, drivers */
    REGION_TOLERANCE, /* the fab's */
    REGION_CHOICE,    /* every word between two */
};

struct region_axis {
    size_t input;
    enum region_kind kind;
    double low, high;
    double nominal;   /* of a tolerance */
    bool logarithmic; /* sampled and searched in the logarithm */
    bool whole;       /* a count: whole numbers only */
};

struct region {
    const struct model *model;
    double base[MODEL_MOST_INPUTS]; /* nominal values; axes are written over it */
    struct region_axis axes[MODEL_MOST_INPUTS];
    size_t axis_count;
    size_t range_count; /* axes[0 .. range_count) are ranges and choices, tolerances follow */
};

/* `without`: an input that is not to become an axis although it has a range or tolerance (the found
 * or varied one; its tolerance is the layout's own); SIZE_MAX = none.  Tolerances are left out when
 * `nominal`. */
void region_of(const struct model *model, const struct study_variant *variant, size_t without,
               bool nominal, struct region *region);

void region_add_tolerance(struct region *region, size_t input, const struct quantity *value);

/* Narrows or adds an axis for `input`; a single value fixes it. */
void region_restrict(struct region *region, size_t input, struct interval range);

/* The value of the axis nearest to `value`: within its ends, whole for a count. */
double region_snap(const struct region_axis *axis, double value);

/* Sample `index` of `count` along an axis, first and last exactly at the ends; of a count, several
 * indices may come to one whole number. */
double region_sample(const struct region_axis *axis, size_t index, size_t count);

#endif

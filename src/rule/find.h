#ifndef RULE_FIND_H
#define RULE_FIND_H

#include "worst.h"

#include "groundrules/guideline.h"

/* Finds and proves one rule for one variant.  `region` is what it must hold over, without the found
 * input. The bound is a whole multiple of the grid, rounded to the safe side; everything it permits
 * within rule->within was scanned and held.  An island (held here, failing again further out) is
 * never the answer. */
bool find_bound(const struct study_rule *rule, const struct study_variant *variant,
                struct judge *judge, const struct region *region, struct guideline_finding *finding,
                struct error *error);

/* The fab's smallest of this input; 0 = not stated or does not apply. */
double find_fab_smallest(const struct model *model, size_t input,
                         const struct study_stackup *stackup);

#endif

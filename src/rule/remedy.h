#ifndef RULE_REMEDY_H
#define RULE_REMEDY_H

#include "find.h"

/* What would meet a condition that cannot be met: the same question asked of the length (at most)
 * and of the edge (at least), with the found input at its permitted end, each proven like a rule.
 * Fills the finding's remedies; none where neither helps or the model has neither. */
bool remedies_find(const struct study_rule *rule, const struct study_variant *variant,
                   const struct judge *judge, const struct region *region,
                   struct guideline_finding *finding, struct error *error);

#endif

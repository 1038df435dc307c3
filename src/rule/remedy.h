#ifndef RULE_REMEDY_H
#define RULE_REMEDY_H

#include "find.h"

/* What would meet a condition that cannot be met, each proven like a rule:
 *   the same question asked of the length (at most) and of the edge (at least), with the found
 * input at its permitted end; the same bound with a ground strip between, tied everywhere; the same
 * bound on the study's boards that are not compared anyway. None where nothing helps or the model
 * has no such inputs. */
struct remedy_question {
    const struct study *study; /* its boards; may be NULL */
    const struct study_rule *rule;
    const struct study_variant *variant;
    const struct judge *judge;
    const struct region *region;
};

/* Fills the finding's remedies. */
bool remedies_find(const struct remedy_question *question, struct guideline_finding *finding,
                   struct error *error);

#endif

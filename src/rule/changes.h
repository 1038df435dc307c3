#ifndef RULE_CHANGES_H
#define RULE_CHANGES_H

#include "groundrules/guideline.h"

/* Fills `guideline`'s changes against study->earlier, if there is one: every case of a rule by its
 * id and name, with the inputs that differ as the reason. */
bool changes_find(struct guideline *guideline, struct arena *arena, struct error *error);

#endif

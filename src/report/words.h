#ifndef REPORT_WORDS_H
#define REPORT_WORDS_H

#include "flow.h"

/* Values and statements in the document's language; markup owned by the flow's arena. */

/* At most three digits, trailing zeros cut. */
const char *words_value(struct flow *flow, double value, enum dimension dimension);
/* `digits` as in quantity_print. */
const char *words_digits(struct flow *flow, double value, enum dimension dimension, int digits);
/* A value on a grid: as many decimals as the grid has. */
const char *words_grid(struct flow *flow, double value, double grid, enum dimension dimension);
/* "25 Ω to 45 Ω", or one value. */
const char *words_range(struct flow *flow, struct interval range, enum dimension dimension);
/* "1.51 mm ± 10 %" with its tolerance. */
const char *words_quantity(struct flow *flow, const struct quantity *quantity);
/* One input's value: a word or a number. */
const char *words_input(struct flow *flow, const struct model_input *input, double value);
/* "between_width" -> "between width". */
const char *words_name(struct flow *flow, const char *name);
/* "4 vias", "1 via": counts are named in the plural. */
const char *words_count(struct flow *flow, const char *name, double count);
/* "a gap", "an edge distance" */
const char *words_article(struct flow *flow, const char *name);
/* words_name with a capital first letter, for heads. */
const char *words_capital(struct flow *flow, const char *name);
const char *words_strength(enum study_strength strength); /* "MUST" */

/* "at least 1.85 mm", "met everywhere from 0.15 mm", "cannot be met", "below the fab's capability".
 */
const char *words_finding(struct flow *flow, const struct study_rule *rule,
                          const struct study_chapter *chapter,
                          const struct guideline_finding *finding);
/* The same for a narrow cell: "1.85 mm", "any", "none". */
const char *words_finding_short(struct flow *flow, const struct study_rule *rule,
                                const struct study_chapter *chapter,
                                const struct guideline_finding *finding);
/* "larger crosstalk peak ≤ 320 mV". */
const char *words_condition(struct flow *flow, const struct study_rule *rule,
                            const struct study_chapter *chapter,
                            const struct study_variant *variant);

#endif

#ifndef REPORT_CHAPTER_H
#define REPORT_CHAPTER_H

#include "pages.h"

/* The table of a chapter's curves at its table points, and a rule's own table. */
void chapter_table(struct flow *flow, const struct guideline_chapter *chapter);
void chapter_rule_table(struct flow *flow, const struct guideline_chapter *chapter,
                        const struct guideline_rule *rule);

#endif

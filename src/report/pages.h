#ifndef REPORT_PAGES_H
#define REPORT_PAGES_H

#include "flow.h"

/* The parts of the document, each laid out by one call in reading order. */

void pages_cover(struct flow *flow);
/* Written last, once the page numbers are known: returns scenes to put after the cover. */
size_t pages_contents_count(struct flow *flow);
void pages_contents(struct flow *flow, struct scene **contents, size_t count);
void pages_changes(struct flow *flow);
void pages_glance(struct flow *flow);
void pages_boards(struct flow *flow);
/* As a table, unless the cover had room for them. */
void pages_products(struct flow *flow);
void pages_signals(struct flow *flow);
void pages_chapter(struct flow *flow, size_t index);
void pages_rule_card(struct flow *flow, const struct guideline_chapter *chapter,
                     const struct guideline_rule *rule);
void pages_appendices(struct flow *flow);
/* The whole document in its order, contents and running lines included; returns the number of
 * pages. */
size_t pages_all(struct flow *flow, struct scene ***pages);
/* Running head and foot on all pages, once their number is known. */
void pages_running(struct flow *flow, struct scene *const *pages, const char *const *heads,
                   size_t count);

/* One sentence computed from a chart's curves; "" when there is nothing to say. */
const char *sentence_of_chart(struct flow *flow, const struct guideline_chapter *chapter,
                              const struct study_chart *chart);

/* "rule.SP-1", "chapter.spacing": names that the painter accepts. */
const char *pages_destination(struct flow *flow, const char *kind, const char *id);

#endif

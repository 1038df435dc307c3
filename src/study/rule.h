#ifndef STUDY_RULE_H
#define STUDY_RULE_H

#include "draft.h"

/* A rule while it is read. */
struct rule_draft {
    const struct node *node;
    struct study_rule rule;
    struct given given;
    struct study_variant *variants;
    size_t variant_count;
    const struct node *(*nodes)[MODEL_MOST_INPUTS];
    bool found; /* "find" was understood */
    const struct node *within_node;
};

/* rule.c: the input that is found and the chapter's sweep into the variants; then whether they can
 * be built.  Findings are added at the nodes. */
void rule_place_sweeps(const struct draft *draft, struct rule_draft *rule);
bool rule_check_variants(const struct reader *reader, const struct draft *draft,
                         const struct rule_draft *rule);

/* condition.c: "so_that", after the variants are known. */
bool rule_read_condition(const struct reader *reader, const struct draft *draft,
                         struct rule_draft *rule);

/* reference.c */
bool rule_read_reference(const struct reader *reader, const struct draft *draft,
                         struct rule_draft *rule);

/* rule_table.c */
bool rule_read_table(const struct reader *reader, const struct draft *draft,
                     struct rule_draft *rule);

#endif

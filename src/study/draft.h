#ifndef STUDY_DRAFT_H
#define STUDY_DRAFT_H

#include "given.h"

/* A chapter while it is read: what the study says, with the places where it says it. */

/* One key of "compare" with its options. */
enum axis_kind { AXIS_STACKUP, AXIS_AGGRESSOR, AXIS_VICTIM, AXIS_INPUT };

struct axis_option {
    const struct node *node;
    const struct study_stackup *stackup;
    const struct study_signal *signal;
    struct study_setting setting;
    const char *label;
};

struct axis {
    enum axis_kind kind;
    size_t input; /* AXIS_INPUT */
    const char *key;
    struct axis_option *options;
    size_t count;
};

enum { DRAFT_MOST_AXES = 2 };

struct draft {
    const struct node *node;
    struct study_chapter chapter;
    struct given given;
    struct axis axes[DRAFT_MOST_AXES];
    size_t axis_count;
    const struct node *vary_node;  /* the sweep's value; NULL when it was refused */
    const struct node *swept_node; /* the same, also when only the input was understood */
    const struct node *place;      /* where what is missing belongs: "given", else the chapter */
    /* Where the settings of the variants come from, [variant][input]; NULL = the standard. */
    const struct node *(*variant_nodes)[MODEL_MOST_INPUTS];
};

/* sweep.c: "vary" and "table". */
bool draft_read_vary(const struct reader *reader, struct draft *draft);
bool draft_read_table(const struct reader *reader, struct draft *draft);

/* compare.c */
bool draft_read_compare(const struct reader *reader, struct draft *draft);
bool draft_is_compared(const struct draft *draft, const char *key);

/* show.c: "show" and "limits". */
bool draft_read_show(const struct reader *reader, struct draft *draft);
bool draft_read_limits(const struct reader *reader, struct draft *draft);

/* variant.c: all combinations, for the chapter (given = NULL) or with what a rule gives on top.
 * *nodes [count][MODEL_MOST_INPUTS] says where each setting comes from. */
bool draft_resolve(const struct reader *reader, const struct draft *draft,
                   const struct given *given, struct study_variant **variants, size_t *count,
                   const struct node *(**nodes)[MODEL_MOST_INPUTS]);

/* Reports inputs that are missing, out of range or impossible together, `swept` running over
 * `span`.  Settings that were refused before (NAN with a node) are passed over.  `fallback`: the
 * place of what no setting of the study is to blame for. */
bool draft_check_variant(const struct reader *reader, const struct draft *draft,
                         const struct study_variant *variant,
                         const struct node *const *setting_nodes, const struct node *fallback,
                         size_t swept, struct interval span, const struct node *span_node);

/* rule.c */
bool draft_read_rules(const struct reader *reader, struct draft *draft, size_t *rules_left);

#endif

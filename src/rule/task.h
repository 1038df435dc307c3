#ifndef RULE_TASK_H
#define RULE_TASK_H

#include "groundrules/guideline.h"

enum task_kind { TASK_RULE, TASK_CELL, TASK_POINT };

/* One piece of work with its place for the answer; runs on any thread. */
struct task {
    enum task_kind kind;
    const struct study *study;
    const struct guideline_chapter *chapter;
    const struct guideline_rule *rule; /* TASK_RULE, TASK_CELL */
    size_t variant;
    size_t index; /* of the cell or the point */
    struct error error;
    size_t asked, solved;
    double error_at[MODEL_MOST_OUTPUTS]; /* TASK_POINT: absolute, per output drawn */
};

void task_run(struct task *task, struct model_memo *memo);

#endif

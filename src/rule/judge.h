#ifndef RULE_JUDGE_H
#define RULE_JUDGE_H

#include "region.h"
#include "solver.h"

#include "groundrules/study.h"

/* How bad a case is.  For a rule: the distance beyond the limit as a share of it, the case's own
 * error added on the unsafe side, so the condition holds where badness <= 0.  For a curve: the
 * output itself, or its negative where lower is worse. */
struct judge {
    struct solver *solver;
    const struct region *region; /* its tolerance axes name what a reference takes at nominal */
    size_t output;
    bool at_most;
    bool curve;
    double limit;                            /* constant or budget */
    const struct study_reference *reference; /* NULL = none */
    double share;                            /* of its value; 0 = all of it */
    /* What the reference board has when its impedance is kept; NAN = as long as `width`. */
    double reference_width, reference_victim_width;
};

struct verdict {
    double badness; /* -INFINITY for a case without an answer */
    double value, limit, error;
    unsigned flags;
};

bool judge_case(const struct judge *judge, const double *inputs, struct verdict *verdict,
                struct error *error);

/* The case on the reference board, at nominal values, all that the reference does not say as in the
 * case judged; widths are those of the case judged unless the reference says them. */
void judge_reference_board(const struct judge *judge, const double *inputs, double *reference);

#endif

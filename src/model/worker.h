#ifndef MODEL_WORKER_H
#define MODEL_WORKER_H

#include "groundrules/line.h"
#include "groundrules/model.h"

/* The response in time of the last line problem that this thread was asked for: cases that differ
 * only in their edge come one after the other, and one response serves them all.  The answer is the
 * same as a fresh one's. */
const struct line_response *worker_response(struct model_worker *worker,
                                            const struct line_problem *problem, double edge,
                                            struct error *error);

#endif

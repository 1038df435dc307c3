#ifndef MODEL_WORKER_H
#define MODEL_WORKER_H

#include "groundrules/line.h"
#include "groundrules/model.h"

/* The response in time of a line problem, made or one of the last that this thread was asked for:
 * one response serves all edges of a class.  The answer is the same as a fresh one's and lives
 * until the next call. */
const struct line_response *worker_response(struct model_worker *worker,
                                            const struct line_problem *problem, double edge,
                                            bool lasting, struct error *error);

#endif

#ifndef MODEL_WORKER_H
#define MODEL_WORKER_H

#include "groundrules/line.h"
#include "groundrules/model.h"

/* A case asks for as many as it has aggressors that switch independently. */
enum { WORKER_RESPONSES = 4 };

/* The response in time of the last line problem that this thread was asked for in this place, 0 ..
 * WORKER_RESPONSES - 1: cases that differ only in their edge come one after the other, and one
 * response serves them all.  The answer is the same as a fresh one's.  `to_rest`: what rings late
 * counts too (line_response_create_long). */
const struct line_response *worker_response(struct model_worker *worker, size_t place,
                                            const struct line_problem *problem, double edge,
                                            bool to_rest, struct error *error);

#endif

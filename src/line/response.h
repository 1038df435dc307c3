#ifndef LINE_RESPONSE_H
#define LINE_RESPONSE_H

#include "curve.h"
#include "staircase.h"

/* What is kept of a prepared response: exact staircases, or curves on two grids. */
struct line_response {
    size_t count;
    double shortest_edge;
    bool exact;
    struct staircase staircase[2];
    struct curve curve[2][LINE_MOST_CONDUCTORS];
    struct curve coarse[2][LINE_MOST_CONDUCTORS]; /* the same on twice the step */
    /* For the shortest edge, of all but what is driven: peaks, and by how much the coarse ones
     * differ. */
    struct line_peak shortest[2][LINE_MOST_CONDUCTORS];
    double difference[2][LINE_MOST_CONDUCTORS];
    double late[2][LINE_MOST_CONDUCTORS];       /* what the last window still shows, of a peak */
    double rest_error[2][LINE_MOST_CONDUCTORS]; /* relative: what may follow the window */
};

/* Whether the conductor exists and the edge was prepared for; ERROR_INPUT otherwise. */
bool response_check(const struct line_response *response, size_t victim, double edge,
                    struct error *error);

/* V at the near (0) or far end (1) of `victim` at `time`, for a ramp of `edge`. */
double response_at(const struct line_response *response, size_t end, size_t victim, double edge,
                   double time);
/* The same on twice the step. */
double response_coarse_at(const struct line_response *response, size_t end, size_t victim,
                          double edge, double time);

#endif

#ifndef LINE_RESPONSE_H
#define LINE_RESPONSE_H

#include "curve.h"
#include "lossy.h"
#include "staircase.h"

/* What is kept of a prepared response: exact staircases, curves on two grids, or what the Laplace
 * transform of a lossy line gave. */
struct line_response {
    size_t count;
    double shortest_edge;
    bool exact;
    struct staircase staircase[2];
    struct curve curve[2][LINE_MOST_CONDUCTORS];
    struct curve coarse[2][LINE_MOST_CONDUCTORS]; /* the same on twice the step */
    struct lossy *lossy;                          /* NULL without loss */
    double emf;                                   /* V, the largest */
    /* For the shortest edge, of all but what is driven: peaks, and by how much the coarse ones
     * differ. */
    struct line_peak shortest[2][LINE_MOST_CONDUCTORS];
    double difference[2][LINE_MOST_CONDUCTORS];
    double rest_error[2][LINE_MOST_CONDUCTORS]; /* relative: what may follow the window */
    /* V s: range of the integral, and by how much it still swings at the end of the march */
    double range[2][LINE_MOST_CONDUCTORS], late[2][LINE_MOST_CONDUCTORS];
};

/* s: step of the grid that resolves it; INFINITY for staircases. */
double response_step(const struct line_response *response);
/* Jumps of the step response at one end that are known: times in s, jumps in V. */
size_t response_corners(const struct line_response *response, size_t end, size_t victim);
double response_corner(const struct line_response *response, size_t end, size_t victim,
                       size_t index, double *jump);

/* Largest magnitude at one end from `from` seconds on; without its error. */
struct line_peak response_peak(const struct line_response *response, size_t end, size_t victim,
                               double edge, double from);
/* By how much the two grids differ there, V; 0 for staircases. */
double response_peak_error(const struct line_response *response, size_t end, size_t victim,
                           double edge, double from);

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

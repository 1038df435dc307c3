#ifndef LINE_COMB_H
#define LINE_COMB_H

#include "response.h"

/* The response to one edge, sampled for sequences of edges `apart` seconds apart: at phases within
 * one such time and at all of these a whole number of times `apart` later.  So what follows a
 * sample as soon as it may is a sample too, whatever the phases are, and they need not be uniform:
 * beside `uniform` of them there are those of the extrema and of the corners of the response, for
 * an edge of the worst sequence stands on one of these or follows another one directly. */
struct comb {
    double apart; /* s */
    size_t phases, teeth;
    double *phase;   /* [phases], ascending, the first is where the instants begin */
    bool *extra;     /* [phases]: not one of the uniform ones */
    double *samples; /* [teeth * phases], ascending in time: tooth by tooth */
};

/* Until `longest` seconds after `from`.  Free with comb_free.  ERROR_INPUT when more than a million
 * samples would be needed; ERROR_MEMORY. */
bool comb_create(const struct line_response *response, size_t end, size_t victim, double edge,
                 double bit_time, double from, double longest, struct comb *comb,
                 struct error *error);
/* The same phases sampled on the response's coarser grid. */
void comb_coarse(const struct line_response *response, size_t end, size_t victim, double edge,
                 struct comb *comb);
void comb_free(struct comb *comb);

/* Leaves every other uniform phase out, for what the rest is worth. */
void comb_thin(struct comb *comb);

#endif

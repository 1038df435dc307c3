#ifndef LINE_RUNGS_H
#define LINE_RUNGS_H

#include "ends.h"
#include "response.h"

/* What the parts of one response share. */
struct line_setup {
    const struct line_problem *problem;
    struct line_modes modes;
    bool lasting; /* late ringing counts too */
    struct end_system near, far;
};

/* Fills the curves of a lossless line with capacitive ends, and all that tells their error. */
bool rungs_climb(const struct line_setup *setup, struct arena *arena,
                 struct line_response *response, struct error *error);

#endif

#ifndef LINE_FRONTS_H
#define LINE_FRONTS_H

#include "ends.h"
#include "groundrules/arena.h"

/* The wave fronts that a step of the EMF sends to and fro.  After k passages a front has spent
 * k_1 passages in mode 1, k_2 in mode 2 ..., arrives at k_1 delay_1 + k_2 delay_2 ..., and all ways
 * with the same counts arrive together: the fronts live on a lattice and are summed there, not
 * followed one by one (Bewley's lattice diagram 1933, for modes that convert at the ends).
 * A front carries the jumps of the waves and of their first derivatives in time, so that what is
 * left between fronts is smooth.  With resistive ends the jumps alone are the exact response. */

enum { FRONT_ORDERS = 4 }; /* jump of the value and of three derivatives */

struct front {
    double time;
    bool near;       /* where it arrives */
    double *wave;    /* [orders][count] jumps of the arriving modal waves */
    double *leaving; /* [orders][count] jumps of the leaving modal waves */
    double *voltage; /* [orders][count] */
    double *state;   /* [orders][states] jumps of dx/dt, d2x/dt2 ... */
    bool last;       /* what it sends on is not followed */
};

struct fronts {
    size_t orders; /* 1 (jumps only) or FRONT_ORDERS */
    struct front *front;
    size_t count, room;
    double complete_until; /* s; later fronts may be missing (INFINITY: only negligible ones are) */
};

struct fronts_limit {
    double smallest;  /* V; fronts below are dropped */
    double weakest;   /* V; passages whose strongest front is below are not followed */
    size_t most;      /* no more fronts than this */
    double latest;    /* s */
    double scale;     /* s, the time over which derivatives are compared with jumps */
    double converged; /* largest share of the last derivative in a front that is followed */
};

bool fronts_follow(const struct line_modes *modes, double length, const struct end_system *near,
                   const struct end_system *far, const struct fronts_limit *limit,
                   struct arena *arena, struct fronts *fronts, struct error *error);

#endif

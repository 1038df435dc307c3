#ifndef GROUNDRULES_LINE_H
#define GROUNDRULES_LINE_H

#include "groundrules/arena.h"

#include <complex.h>
#include <stddef.h>

/* Coupled lossless lines of one length between two sets of ends.
 *     dV/dx = -L dI/dt,   dI/dx = -C dV/dt          (C is the Maxwell matrix, reference = the plane
 * at 0 V) Every end of every conductor has a resistance in series with an EMF (0 V where the end is
 * not driven) to the plane, and a capacitance to the plane in parallel with that branch. */

enum { LINE_MOST_CONDUCTORS = 8 };

struct line_end {
    double resistance;  /* ohm, >= 0; INFINITY = open */
    double capacitance; /* F, >= 0 */
};

struct line_problem {
    size_t count;  /* conductors, 1 .. LINE_MOST_CONDUCTORS */
    double length; /* m, > 0 */
    double inductance[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];  /* H/m, row major, symmetric */
    double capacitance[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* F/m, Maxwell */
    struct line_end near[LINE_MOST_CONDUCTORS];
    struct line_end far[LINE_MOST_CONDUCTORS];
};

/* Modes: eigenvectors of the symmetric pencil (C, inv L), so equal velocities are no special case.
 * L C T = T diag(slowness^2), with T' C T = I.  `slowness` ascending, s/m. */
struct line_modes {
    size_t count;
    double slowness[LINE_MOST_CONDUCTORS];
    double voltage[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* T, columns are modes */
    double
        characteristic_admittance[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* S, row major */
};
bool line_modes(const struct line_problem *problem, struct line_modes *modes, struct error *error);

/* Voltages of all ends at one frequency for an EMF of 1 V at the near end of conductor `driven`.
 * near[count], far[count]: complex volts per volt of EMF.  frequency in Hz, > 0. */
bool line_frequency_response(const struct line_problem *problem, size_t driven, double frequency,
                             double complex *near, double complex *far, struct error *error);

/* The 2 count x 2 count scattering matrix between ports of `reference` ohms at all ends (near ends
 * first, then far ends; the problem's own ends are not used).  Row major, written only on success.
 */
bool line_scattering(const struct line_problem *problem, double reference, double frequency,
                     double complex *scattering, struct error *error);

/* The response in time, prepared once for one driven conductor and asked for any edge.
 * The EMF is one linear ramp from 0 to 1 V within `edge` seconds, then held. */
struct line_response;

/* `shortest_edge` s, > 0: the shortest edge that will be asked for.  Owned by `arena`. */
struct line_response *line_response_create(const struct line_problem *problem, size_t driven,
                                           double shortest_edge, struct arena *arena,
                                           struct error *error);

/* The same, solved so finely that the late ringing, which sequences of edges add up, counts too:
 * two to four times the work. */
struct line_response *line_response_create_lasting(const struct line_problem *problem,
                                                   size_t driven, double shortest_edge,
                                                   struct arena *arena, struct error *error);

struct line_peak {
    double highest; /* V per volt of swing, largest |v(t)| */
    double time;    /* s after the start of the ramp */
    double error;   /* estimate of the relative error of `highest` */
};

/* Peaks at both ends of conductor `victim` for an edge >= shortest_edge. */
bool line_response_peaks(const struct line_response *response, size_t victim, double edge,
                         struct line_peak *near, struct line_peak *far, struct error *error);

/* The worst sequence of edges at both ends of `victim`, V per volt of swing, best asked of a
 * lasting response: free     edges of alternating sign, any two at least `bit_time` apart clocked
 * edges on whole multiples of `bit_time`, worst over the phase of the observation `free` never
 * grows with bit_time; `clocked` may.  Exact for the sampled response (32 samples an edge); `error`
 * is the relative change on twice the sample step and on the response's coarser grid.  Fails:
 * ERROR_INPUT when bit_time is not above 0 or so short against the ringing that more than a million
 * samples would be needed; ERROR_MEMORY. */
struct line_sequence {
    double free, clocked;
    double error;
};
bool line_response_sequences(const struct line_response *response, size_t victim, double edge,
                             double bit_time, struct line_sequence *near, struct line_sequence *far,
                             struct error *error);

/* Samples v(t) at t = 0, step, 2 step ... for plots and sequences of edges; near[samples],
 * far[samples]. */
bool line_response_samples(const struct line_response *response, size_t victim, double edge,
                           double step, size_t samples, double *near, double *far,
                           struct error *error);

#endif

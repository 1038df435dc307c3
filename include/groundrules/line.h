#ifndef GROUNDRULES_LINE_H
#define GROUNDRULES_LINE_H

#include "groundrules/arena.h"

#include <complex.h>
#include <stddef.h>

/* Coupled lines of one length between two sets of ends, with s = j 2 pi f or any Re s > 0:
 *     dV/dx = -Z(s) I,   dI/dx = -Y(s) V         (C is the Maxwell matrix, reference = the plane at
 * 0 V)
 *     Z(s) = dc_resistance + skin_resistance sqrt(s/pi) + s L
 *     Y(s) = s (C + dielectric_capacitance chi(s))
 * Every end of every conductor has a resistance in series with an EMF (0 V where the end is not
 * driven) to the plane, and a capacitance to the plane in parallel with that branch.  Any number
 * of near ends may be driven, all by the same ramp in their own proportion; far ends are not.
 *
 * At s = j 2 pi f the skin term is skin_resistance sqrt(f) (1 + j): resistance and internal
 * reactance are equal, as in good conductors thicker than a few skin depths.  chi is what the
 * permittivity departs from its value at `material_frequency`, relative, in the causal model of
 * Djordjevic, Biljic, Likar-Smiljanic and Sarkar (IEEE Trans. EMC 43, 2001):
 *     1 + chi(s) = a + b ln((w2 + s)/(w1 + s)) / ln(w2/w1),  w1, w2 = 2 pi times the corners below,
 * a and b such that at `material_frequency` the real part is 1 and the loss tangent `df`.  Without
 * loss (all of it zero) the lossless solvers are used. */

enum { LINE_MOST_CONDUCTORS = 8 };

#define LINE_LOWEST_RELAXATION 1e3   /* Hz, lower corner of the dielectric's relaxations */
#define LINE_HIGHEST_RELAXATION 1e12 /* Hz, upper corner */

struct line_end {
    double resistance;  /* ohm, >= 0; INFINITY = open */
    double capacitance; /* F, >= 0 */
    double emf; /* V per volt of swing, of either sign; 0 = not driven, as all far ends and open
                   ones are */
};

struct line_problem {
    size_t count;  /* conductors, 1 .. LINE_MOST_CONDUCTORS */
    double length; /* m, > 0 */
    double inductance[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];  /* H/m, row major, symmetric */
    double capacitance[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* F/m, Maxwell */
    struct line_end near[LINE_MOST_CONDUCTORS];
    struct line_end far[LINE_MOST_CONDUCTORS];
    /* Loss, each zero when there is none.  Matrices symmetric, positive semidefinite. */
    double dc_resistance[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];   /* ohm/m */
    double skin_resistance[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* ohm/m/sqrt(Hz) */
    double dielectric_capacitance[LINE_MOST_CONDUCTORS *
                                  LINE_MOST_CONDUCTORS]; /* F/m: dk dC/ddk, Maxwell */
    double df;                                           /* loss tangent at material_frequency */
    double material_frequency; /* Hz, > 0 with df: where `capacitance` holds */
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

/* Complex propagation constants gamma = alpha + j beta of all modes at one frequency, per metre:
 * eigenvalues of sqrt(Z Y), slow modes last where there is no loss.  constants[count]. */
bool line_propagation(const struct line_problem *problem, double frequency,
                      double complex *constants, struct error *error);

/* Voltages of all ends at one frequency, for the EMFs of the near ends.
 * near[count], far[count]: complex volts per volt of swing.  frequency in Hz, > 0. */
bool line_frequency_response(const struct line_problem *problem, double frequency,
                             double complex *near, double complex *far, struct error *error);

/* The 2 count x 2 count scattering matrix between ports of `reference` ohms at all ends (near ends
 * first, then far ends; the problem's own ends are not used).  Row major, written only on success.
 */
bool line_scattering(const struct line_problem *problem, double reference, double frequency,
                     double complex *scattering, struct error *error);

/* The response in time, prepared once for one set of EMFs and asked for any edge.
 * Every EMF is one linear ramp within `edge` seconds from 0 to its share of the swing, then held.
 * Lossless lines are solved by bounces and characteristics, lossy ones by inversion of the Laplace
 * transform (docs/methods-line.md says how, and how well). */
struct line_response;

/* `shortest_edge` s, > 0: the shortest edge that will be asked for.  Owned by `arena`. */
struct line_response *line_response_create(const struct line_problem *problem, double shortest_edge,
                                           struct arena *arena, struct error *error);

/* The same, followed until the integral swings by a thousandth of its range instead of a fiftieth,
 * and so finely that the late ringing keeps its phase: for sequences of edges, where ringing adds
 * up, and for victims that are sampled late.  Two to four times the work. */
struct line_response *line_response_create_long(const struct line_problem *problem,
                                                double shortest_edge, struct arena *arena,
                                                struct error *error);

struct line_peak {
    double highest; /* V per volt of swing, largest |v(t)| */
    double time;    /* s after the start of the ramp */
    double error;   /* estimate of the relative error of `highest` */
};

/* Peaks at both ends of conductor `victim` for an edge >= shortest_edge. */
bool line_response_peaks(const struct line_response *response, size_t victim, double edge,
                         struct line_peak *near, struct line_peak *far, struct error *error);

/* The worst sequence of edges at both ends of `victim`, V per volt of swing:
 *   free     edges of alternating sign, any two at least `bit_time` apart
 *   clocked  edges on whole multiples of `bit_time`, worst over the phase of the observation
 * `free` never grows with bit_time; `clocked` may.  Exact for the sampled response (32 samples an
 * edge, more where it rings faster, its extrema and corners among them), within 1e-3 of much finer
 * sampling (test_sequence.c), and no less than a single edge; `error` is relative, of the larger:
 * of the response, of leaving every other sample out, and of what the response may still hold after
 * its end.  Fails: ERROR_INPUT when bit_time is not above 0 or so short against the ringing that
 * more than a million samples would be needed; ERROR_MEMORY. */
struct line_sequence {
    double free, clocked;
    double error;
};
bool line_response_sequences(const struct line_response *response, size_t victim, double edge,
                             double bit_time, struct line_sequence *near, struct line_sequence *far,
                             struct error *error);

/* What a victim sees that is sampled `settling` seconds or more after the start of the ramp of the
 * latest edge, at both its ends.  settling = 0: every instant counts. */
struct line_settled {
    double single; /* V per volt of swing: largest |v(t)|, t >= settling, of one edge */
    double time;   /* s, where that is */
    double free;  /* V per volt of swing: the worst sequence as above, its latest edge `settling` or
                     more before the instant; `single` without a bit time */
    double error; /* V per volt of swing, of the larger: of what was found, and of what the response
                     may still hold after its end */
};
/* bit_time >= 0, 0 = a single edge.  `single` is found between samples too (exact with resistive
 * ends), `free` from samples that begin at `settling`.  Errors as line_response_sequences. */
bool line_response_settled(const struct line_response *response, size_t victim, double edge,
                           double bit_time, double settling, struct line_settled *near,
                           struct line_settled *far, struct error *error);

/* Samples v(t) at t = 0, step, 2 step ... for plots and sequences of edges; near[samples],
 * far[samples]. */
bool line_response_samples(const struct line_response *response, size_t victim, double edge,
                           double step, size_t samples, double *near, double *far,
                           struct error *error);

#endif

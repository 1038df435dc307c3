#ifndef GROUNDRULES_SECTION_LOSS_H
#define GROUNDRULES_SECTION_LOSS_H

#include "groundrules/section.h"

/* What the copper of a section costs.  Skin effect by the incremental-inductance rule (H. A.
 * Wheeler, Proc. IRE 30, 1942, 412-424): where current flows within a depth that is small against
 * thickness and radius, the resistance is that of the surface,
 *     R = Rs g,   g = (1/mu0) dL/dn,   Rs = sqrt(pi f mu0 rho),
 * dL/dn the growth of the external inductance when the walls recede into the metal.  In matrix form
 * it is the power of all surface currents, those that neighbours drive in a conductor included, so
 * R is symmetric and positive semidefinite. */

struct section_loss {
    size_t count; /* as section_solution's */
    /* g, 1/m, row major: of the conductors' own walls and of the planes'. */
    double copper[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double plane[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    /* DC resistance over resistivity, 1/m^2: one over the conductor's area (a trapezoid's with
     * etch); a plane is infinite and has none, a reference conductor adds its own to all entries.
     */
    double dc[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double error; /* estimate: largest error of copper + plane over its diagonal */
};

/* Solves one section; section_solve's shape, with whatever the caller needs (a memo). */
typedef bool section_solver(void *context, const struct section_problem *problem,
                            struct section_solution *solution, struct error *error);

/* `solve` NULL: section_solve, `context` not used.  Eight sections in air are solved: central
 * differences at two distances, extrapolated.  The dielectrics of `problem` play no part.
 * The plane's share under a plane that ends is taken as that of an infinite one.
 * Fails: ERROR_INPUT where a conductor is a sheet (thickness 0: the current at its edges has no
 * finite loss), and as section_solve does. */
bool section_loss(const struct section_problem *problem, section_solver *solve, void *context,
                  struct section_loss *loss, struct error *error);

/* The signals alone, as section_reduce makes them: a conductor that is tied everywhere carries the
 * current that keeps its flux zero, one that floats or is tied at one end none; what they lose is
 * part of the signals' resistance.  At DC the return flows in the plane, ties carry nothing.
 * `solution` is the section itself, not reduced.  `reduced` may be `loss`. */
bool section_loss_reduce(const struct section_loss *loss, const struct section_solution *solution,
                         const enum section_tie *ties, struct section_loss *reduced,
                         struct error *error);

/* Skin resistance per root of frequency of a metal, ohm/sqrt(Hz) for g = 1: sqrt(pi mu0 rho). */
double section_surface_resistance(double resistivity);

#endif

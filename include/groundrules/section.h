#ifndef GROUNDRULES_SECTION_H
#define GROUNDRULES_SECTION_H

#include "groundrules/arena.h"

#include <stddef.h>

/* A 2-D cross-section: perfect conductors lying on a dielectric slab over a ground plane, air
 * above. The plane is y = 0; the slab fills 0 < y < height with relative permittivity dk (1 = air
 * everywhere).  What zero leaves out may be added: a coating, a plane above, a plane that ends, no
 * plane at all, copper that is narrower at its top; only a cover over a plane that ends or over no
 * plane is refused.  Quasi-TEM: C from the electrostatic problem, external L = mu0 eps0 inv(C0)
 * from the same section in air (the field outside perfect conductors). */

#define SECTION_EPSILON_0 8.8541878188e-12 /* F/m, CODATA 2022 */
#define SECTION_MU_0 1.25663706127e-6      /* H/m, CODATA 2022 */

enum { SECTION_MOST_CONDUCTORS = 16 };

struct section_conductor {
    double left;      /* m, x of the left edge of the foot */
    double width;     /* m, > 0 */
    double thickness; /* m, >= 0; 0 is an infinitely thin sheet at y = height */
    double etch;      /* m, 0 .. 0.45 width and 10 thickness: the top is so much narrower on either
                         side */
};

enum section_plane {
    SECTION_PLANE,      /* infinite, at y = 0 */
    SECTION_PLANE_ENDS, /* a thin half-plane y = 0, x < plane_end, at 0 V on both sides; the slab
                           goes on beyond it */
    SECTION_NO_PLANE,   /* a board without one: the first conductor is the reference at 0 V, the
                           matrices are those of the others; air below y = 0 */
};

struct section_problem {
    double height; /* m, > 0: top of the plane to the foot of the copper */
    double dk;     /* >= 1 */
    enum section_plane plane;
    double plane_end; /* m, x where it ends; with SECTION_PLANE_ENDS */
    double mask;      /* m, >= 0: coating over board and copper, 0 = none: as thick on the board as
                         on the copper and its flanks, square at the corners; coatings that meet
                         between two conductors become one */
    double mask_dk;   /* >= 1 */
    bool mask_flat; /* instead one flat layer from y = height to `mask` above the thickest copper */
    double cover;   /* m, > thickness + mask: foot of the copper to a plane above it, 0 = none */
    double cover_dk; /* >= 1: of what fills the room under it (beside a coating) */
    size_t count;    /* 1 .. SECTION_MOST_CONDUCTORS, from left to right, no two touching */
    struct section_conductor conductors[SECTION_MOST_CONDUCTORS];
};

/* All matrices are count x count, row major, symmetric. */
struct section_solution {
    size_t count; /* of the problem; without a plane one less */
    double capacitance[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];        /* F/m, Maxwell */
    double vacuum_capacitance[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS]; /* F/m, dk = 1 */
    double inductance[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS]; /* H/m, external */
    /* F/m: the sum over all dielectrics of dk dC/ddk, what a loss tangent multiplies.  NAN until
     * section_dielectric_capacitance has filled it in. */
    double dielectric_capacitance[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double error;    /* estimate: largest relative error of any entry of the three matrices */
    size_t unknowns; /* of the finest system that was solved */
};

/* The plain solver, the oracle: first-kind Galerkin boundary elements, Legendre polynomials on
 * panels graded geometrically to every edge, closed-form panel potentials, exact image series of
 * the slab; with any of the additions the general solver on such panels. */
bool section_solve_plain(const struct section_problem *problem, struct section_solution *solution,
                         struct error *error);

/* The solvers in use.  Rectangles on a slab over an endless plane: one mapped expansion with corner
 * exponents per face, reweighted images, tabulated self-blocks; orders are chosen from the
 * geometry; where the orders that it asks for are beyond the expansion the plain solver answers.
 * Everything else: total charge, free and bound, on the copper and on the borders of dielectrics
 * (Wei, Harrington, Mautz, Sarkar 1984), mapped expansions with corner exponents on pieces of every
 * face, exact kernels of a plane, two planes, a half-plane and free space.
 * `section_solve` refines once, in every order (with additions up to three times, until below
 * 4e-4), and reports the change (with additions twice the change) plus 5e-6 as the error estimate.
 * `section_solve_once` is the single solve that the benchmark times (error = NAN). */
bool section_solve(const struct section_problem *problem, struct section_solution *solution,
                   struct error *error);
bool section_solve_once(const struct section_problem *problem, struct section_solution *solution,
                        struct error *error);

/* Fills in solution->dielectric_capacitance of a problem's solution, within about 1e-4
 * (small mutual entries 1e-3): from the
 * change of C with dk, or as the part of the energy that is not in air (permittivity 1 has no loss,
 * wherever it is).  Apart, because it takes about as long as a solve. */
bool section_dielectric_capacitance(const struct section_problem *problem,
                                    struct section_solution *solution, struct error *error);

/* How a conductor that is no signal is connected. */
enum section_tie {
    SECTION_SIGNAL,       /* kept */
    SECTION_TIED,         /* to ground everywhere: zero potential, zero flux */
    SECTION_FLOATING,     /* zero net charge, zero net current */
    SECTION_TIED_ONE_END, /* to ground at one point: zero potential, zero net current */
};

/* Eliminates every conductor that is no signal.  `ties` [count].  `reduced` keeps the signals in
 * order; reduced->inductance follows from the tie, it is not always mu0 eps0
 * inv(reduced->vacuum_capacitance); the dielectric part is the derivative of the reduced
 * capacitance.  `reduced` may be `solution`. */
bool section_reduce(const struct section_solution *solution, const enum section_tie *ties,
                    struct section_solution *reduced, struct error *error);

#endif

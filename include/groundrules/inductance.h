#ifndef GROUNDRULES_INDUCTANCE_H
#define GROUNDRULES_INDUCTANCE_H

#include "groundrules/error.h"

#include <stddef.h>

/* Partial inductances of straight conductors and the loops that are made of them.  Quasi-static,
 * no magnetic material, perfect conductors or uniform current as stated.  Lengths in m, results in
 * H. mu0 is 4 pi 1e-7 H/m as in the handbooks whose formulas are used; CODATA 2022 differs by
 * 1.3e-10.
 *
 * Which inductance a figure is has three answers, and every function says which one it gives:
 *   barrel alone    partial, in free space; the rest of the loop is somewhere else
 *   onto a plane    with the plane's return current, by images; the other end is open
 *   loop            of a closed current path */

#define INDUCTANCE_MU_0 1.25663706143591729539e-6 /* H/m, 4 pi 1e-7 */

/* --- Single pieces ---------------------------------------------------------------------------- */

enum inductance_shape {
    INDUCTANCE_FILAMENT, /* no width; its own inductance is infinite */
    INDUCTANCE_TUBE,     /* thin round tube, current even around it */
    INDUCTANCE_BAR,      /* rectangular, current even over its section; flat when one side is 0 */
};

enum inductance_axis { INDUCTANCE_X, INDUCTANCE_Y, INDUCTANCE_Z };

struct inductance_piece {
    enum inductance_shape shape;
    enum inductance_axis axis; /* the current runs towards larger coordinates along it */
    double start[3];           /* m, middle of the end where the current enters */
    double length;             /* m, > 0 */
    double diameter;           /* m, > 0: of a tube */
    double across[2]; /* m, >= 0: a bar's sides along the other two axes, in the order x, y, z */
};

/* Partial self inductance in free space.  Tube: the average of Neumann's integral over the
 * tube, 1e-12.  Bar: Hoer and Love 1965 where that form keeps its digits, else the average by
 * quadrature; flat bars by quadrature, which is Ruehli's tape; 1e-9.  Filament: INFINITY.  Tests:
 * test_inductance_pieces.c. */
double inductance_self(const struct inductance_piece *piece);

/* Partial mutual inductance in free space; 0 between perpendicular pieces.  Two parallel filaments:
 * Grover's sum, by quadrature where that cancels; relative 1e-12 at any distance.  Tubes: average
 * over both, on one axis or apart, 1e-10.  Bars: as above, apart, touching or overlapping, thin or
 * long, 1e-9.  The pieces may be given in any order. */
double inductance_mutual(const struct inductance_piece *a, const struct inductance_piece *b);

/* What a perfectly conducting plane z = 0 adds to the self (a == b) or mutual inductance of two
 * pieces above it: the image of an upright current runs the same way, that of a level one the
 * other way. */
double inductance_image(const struct inductance_piece *a, const struct inductance_piece *b);

/* Two straight filaments that start at one point and enclose `angle` (rad, 0 < angle < pi), both
 * currents flowing away from it (Grover 1946). */
double inductance_meeting(double length_a, double length_b, double angle);

/* The barrel formula of the trade: Rosa 1908 without the term of the solid wire's inside, one
 * barrel alone in free space.  3 % below the exact tube at 1.6 mm and 24 % at 0.19 mm for
 * a diameter of 0.6 mm. */
double inductance_barrel(double height, double diameter);

/* matrix[count * count], row major, H: partial inductances of all pieces, with their images in
 * z = 0 when `plane`.  Fails: ERROR_INPUT for a piece that has no length or section, lies below the
 * plane, or is a filament (its own inductance is infinite). */
bool inductance_matrix(const struct inductance_piece *pieces, size_t count, bool plane,
                       double *matrix, struct error *error);

/* --- Networks --------------------------------------------------------------------------------- */

/* Branches with a partial inductance matrix between nodes; node 0 is the plane (or any reference).
 * Lossless: shares do not depend on frequency. */
struct inductance_network {
    size_t branches;
    const double *matrix; /* H, branches * branches, row major, symmetric positive definite */
    const size_t *from;   /* node where a branch's current enters, 0 .. nodes - 1 */
    const size_t *to;
    size_t nodes;
    size_t ports;
    const size_t *port_in;  /* node where a port's current enters the network */
    const size_t *port_out; /* node where it leaves again */
};

/* inductance[ports * ports], H: flux per current, all other ports open.  currents may be NULL, or
 * [ports * branches]: every branch's current for 1 A through a port.  Fails: ERROR_INPUT for nodes
 * that do not exist; ERROR_SINGULAR when a node hangs in the air or the matrix is not positive
 * definite; ERROR_MEMORY. */
bool inductance_network_solve(const struct inductance_network *network, double *inductance,
                              double *currents, struct error *error);

/* --- Groups of upright barrels ---------------------------------------------------------------- */

enum inductance_ends {
    INDUCTANCE_FREE,     /* barrels alone */
    INDUCTANCE_ON_PLANE, /* foot on a plane z = 0, top open: half of twice the height */
    INDUCTANCE_PLANES,   /* between two planes: only currents that sum to zero have a meaning */
};

enum { INDUCTANCE_MOST_HARMONICS = 12 };

struct inductance_barrels {
    size_t count;
    const double *x; /* m, [count] each, centres */
    const double *y;
    double height;   /* m, of all of them */
    double diameter; /* m */
    enum inductance_ends ends;
    /* How freely the current spreads around each barrel: harmonics of the azimuth up to this order
     * find their own size so that every line along a barrel has the same flux (perfect conductor,
     * current constant along the height); 0 = even around it.  The energy is stationary, so an
     * inductance falls with every order towards the one of a free distribution. */
    size_t harmonics;
};

/* For two barrels this far apart, centre to centre: what a harmonic brings over what the one before
 * it brought, and how many reach 3e-4 of a group's inductance or better (test_inductance_groups.c).
 */
double inductance_barrel_convergence(double diameter, double spacing);
size_t inductance_barrel_harmonics(double diameter, double spacing);

/* matrix[count * count], H: partial inductances after the azimuthal currents have found their
 * shares. coarser and even, of the same size, may be NULL: the same with two harmonics fewer (one
 * of two, none of one), and with current even around each barrel, which are exact tube
 * averages, 1e-9. Fails: ERROR_INPUT for barrels that touch; ERROR_SINGULAR; ERROR_MEMORY. */
bool inductance_barrels_solve(const struct inductance_barrels *barrels, double *matrix,
                              double *coarser, double *even, struct error *error);

/* --- Traces side by side over a plane --------------------------------------------------------- */

enum { INDUCTANCE_MOST_TRACES = 8 };

struct inductance_trace {
    double centre;    /* m, across */
    double width;     /* m, > 0 */
    double thickness; /* m, >= 0; 0 = thin sheet */
    double height;    /* m, > 0: foot over the plane */
};

struct inductance_traces {
    size_t count;
    const struct inductance_trace *traces; /* all start and end together, none touching */
    double length;                         /* m, at least a quarter of any width and thickness */
};

/* inductance[count * count], H: partial inductances of straight traces with their images in the
 * plane. The copper's surface is divided into strips, graded to the edges, that are joined at both
 * ends of the trace and find their shares of its current (perfect conductor).  estimate[count *
 * count], H: the step of the extrapolation from half as many strips.  Tests: the 2-D limit against
 * exact sections and against the section solver.  Fails: ERROR_INPUT, ERROR_SINGULAR, ERROR_MEMORY.
 */
bool inductance_traces_solve(const struct inductance_traces *traces, double *inductance,
                             double *estimate, struct error *error);

#endif

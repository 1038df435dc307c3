#ifndef FIELD_FACE_H
#define FIELD_FACE_H

#include "groundrules/error.h"

#include <stddef.h>

/* One side of a rectangular conductor with one expansion over its whole length: position
 * x = length * I_s(a, b), s in [0, 1], I the regularised incomplete beta function, and
 * density dx = sum_k c_k P_k(2s - 1) ds, so that c_0 is the side's charge.  Near an end x ~ s^a, so
 * density ~ x^(1/a - 1): with a the reciprocal of the corner's exponent the singular field there is
 * one of the functions. */

/* Corner exponents come in steps of 0.06: 1.5 (a right angle in one medium), 1.56 .. 1.98, and 2
 * (the edge of a sheet).  Half a step costs below 1e-5 of the capacitance. */
enum { FACE_AIR_CORNER = 0, FACE_SHEET_EDGE = 9, FACE_CORNERS = 10 };
double face_corner_exponent(size_t corner);

/* The nearest step for a right-angled conductor corner that stands on a dielectric of dk:
 * pi / (2 atan sqrt(1 + 2/dk)) (Meixner's edge condition for one metal and two dielectric angles).
 */
size_t face_foot_corner(double dk);

/* Both ends alike (foot, top, sheet), or an upright whose upper end is an air corner. */
enum face_kind { FACE_LEVEL, FACE_UPRIGHT, FACE_KINDS };

enum { FACE_MOST_TERMS = 24, FACE_MOST_NODES = 320 };

/* I_s(a, b) for 0 <= s <= 1, within 1e-15. */
double face_position(enum face_kind kind, size_t corner, double s);

/* Nodes in x and moments so that, for f smooth over the face,
 * integral P_k(2s - 1) f(x(s)) ds = sum_q moment[k * count + q] f(node[q]): f is interpolated at
 * Gauss nodes, of x itself or, when `crowded`, of tau with x = 3 tau^2 - 2 tau^3, which puts more
 * nodes near the ends for kernels that are nearly singular there. */
struct face_rule {
    size_t count;
    double node[FACE_MOST_NODES]; /* fractions of the length, ascending */
    double *moment;               /* [FACE_MOST_TERMS * count] */
};

/* The rule with at least `wanted` nodes (from a fixed ladder of counts, at most FACE_MOST_NODES).
 * Made at first use and kept for the life of the process; safe from any thread, the same numbers
 * whichever thread makes it.  NULL and ERROR_MEMORY when there is no memory. */
const struct face_rule *face_rule(enum face_kind kind, size_t corner, size_t wanted, bool crowded,
                                  struct error *error);

#endif

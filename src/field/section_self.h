#ifndef FIELD_SECTION_SELF_H
#define FIELD_SECTION_SELF_H

#include "face.h"

/* A conductor's unknowns: foot, top, left, right (both sides upwards), or one sheet (foot only). */
struct section_terms {
    size_t level;   /* terms of foot and top */
    size_t upright; /* terms of each side; 0 for a sheet */
};

enum { SECTION_MOST_UPRIGHT = 8 };
enum { SECTION_MOST_OWN = 2 * FACE_MOST_TERMS + 2 * SECTION_MOST_UPRIGHT };

static inline size_t section_own(struct section_terms terms) {
    return terms.upright == 0 ? terms.level : 2 * (terms.level + terms.upright);
}

/* Interaction of one rectangle with itself; added to own[m * n + n']: double integral of
 * P_m P_n' (direct * ln r0 + mirrored * ln r1) ds ds', r1 the distance to the mirror image in the
 * line of the foot, for n = section_own(terms) functions; symmetric.  Corner exponent `corner` at
 * the foot.  Tabulated over thickness/width (Chebyshev series in its logarithm, made once per
 * corner and range; 1e-7 of the largest entry), computed outright beyond the tables' range. */
bool section_self(double width, double thickness, size_t corner, struct section_terms terms,
                  double direct, double mirrored, double *own, struct error *error);

#endif

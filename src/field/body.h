#ifndef FIELD_BODY_H
#define FIELD_BODY_H

#include "face.h"
#include "section_fast.h"
#include "slab_kernel.h"

#include "groundrules/arena.h"

/* A conductor as seen by one partner: its functions, and its nodes for the kernel between the two.
 */

enum { BODY_FACES = 4 };
enum body_medium { BODY_VACUUM, BODY_SLAB, BODY_MEDIA };

struct body_face {
    size_t terms, first_term, first_node;
    const struct face_rule *rule[BODY_MEDIA]; /* same nodes, moments by corner exponents */
};

struct body {
    size_t faces, terms, nodes;
    struct body_face face[BODY_FACES]; /* foot, top, near side, far side; or one sheet */
    double *x, *y;                     /* [nodes], in heights */
};

struct body_shape {
    double left, width, thickness; /* in heights */
    size_t corner;                 /* of the foot on the slab, face.h */
    bool flipped;                  /* functions and sides counted from the right */
};

bool body_place(struct body_shape shape, struct section_terms terms, struct section_nodes nodes,
                struct arena *arena, struct body *body, struct error *error);

/* block[medium][m * source->terms + n] = sum over nodes of moment_m kernel moment_n.  `same`: the
 * two are one body or each other's mirror image in an upright line, node for node; then only half
 * of the kernel is evaluated. */
bool body_interaction(const struct slab_kernel *kernel, bool direct, bool same,
                      const struct body *target, const struct body *source, struct arena *arena,
                      double *const block[BODY_MEDIA], struct error *error);

#endif

#include "body.h"

#include "vector.h"

#include <math.h>

/* Kernel values evaluated in one go: long loops for the vector units, short enough for the cache.
 */
enum { CHUNK = 512 };

bool body_place(struct body_shape shape, struct section_terms terms, struct section_nodes nodes,
                struct arena *arena, struct body *body, struct error *error) {
    bool sheet = !(shape.thickness > 0);
    size_t foot[BODY_MEDIA] = {sheet ? FACE_SHEET_EDGE : FACE_AIR_CORNER,
                               sheet ? FACE_SHEET_EDGE : shape.corner};
    body->faces = sheet ? 1 : BODY_FACES;
    body->terms = body->nodes = 0;
    for (size_t f = 0; f < body->faces; f++) {
        struct body_face *face = &body->face[f];
        enum face_kind kind = f < 2 ? FACE_LEVEL : FACE_UPRIGHT;
        for (size_t medium = 0; medium < BODY_MEDIA; medium++) {
            face->rule[medium] = face_rule(
                kind, f == 1 ? FACE_AIR_CORNER : foot[medium], f < 2 ? nodes.level : nodes.upright,
                f < 2 ? nodes.level_crowded : nodes.upright_crowded, error);
            if (face->rule[medium] == NULL)
                return false;
        }
        face->terms = f < 2 ? terms.level : terms.upright;
        face->first_term = body->terms;
        face->first_node = body->nodes;
        body->terms += face->terms;
        body->nodes += face->rule[0]->count;
    }
    body->x = arena_take(arena, body->nodes, sizeof(double), error);
    body->y = arena_take(arena, body->nodes, sizeof(double), error);
    if (body->x == NULL || body->y == NULL)
        return false;
    double start = shape.flipped ? shape.left + shape.width : shape.left;
    double step = shape.flipped ? -shape.width : shape.width;
    for (size_t f = 0; f < body->faces; f++)
        for (size_t q = 0; q < body->face[f].rule[0]->count; q++) {
            size_t at = body->face[f].first_node + q;
            double fraction = body->face[f].rule[0]->node[q];
            body->x[at] = start + step * (f < 2 ? fraction : f == 2 ? 0 : 1);
            body->y[at] = 1 + shape.thickness * (f < 2 ? (double)f : fraction);
        }
    return true;
}

/* Pairs of nodes, row by row of the source; of two equal bodies only from the diagonal on. */
struct pairs {
    size_t count;
    double *across2, *apart, *sum, *value[BODY_MEDIA];
};

static bool pairs_list(const struct body *target, const struct body *source, bool same,
                       struct arena *arena, struct pairs *pairs, struct error *error) {
    size_t n = target->nodes;
    size_t count = same ? n * (n + 1) / 2 : n * source->nodes;
    double *all = arena_take(arena, count, 5 * sizeof(double), error);
    if (all == NULL)
        return false;
    *pairs =
        (struct pairs){0, all, all + count, all + 2 * count, {all + 3 * count, all + 4 * count}};
    for (size_t q = 0; q < source->nodes; q++)
        for (size_t p = same ? q : 0; p < n; p++) {
            double dx = target->x[p] - source->x[q];
            size_t i = pairs->count++;
            pairs->across2[i] = dx * dx;
            pairs->apart[i] = target->y[p] - source->y[q];
            pairs->sum[i] = target->y[p] + source->y[q];
        }
    return true;
}

static void pairs_evaluate(const struct slab_kernel *kernel, bool direct, struct pairs *pairs) {
    for (size_t i = 0; i < pairs->count; i += CHUNK) {
        size_t n = pairs->count - i < CHUNK ? pairs->count - i : CHUNK;
        slab_kernel_evaluate(kernel, direct, n, pairs->across2 + i, pairs->apart + i,
                             pairs->sum + i, pairs->value[BODY_SLAB] + i,
                             pairs->value[BODY_VACUUM] + i);
    }
}

static void unpack(const double *triangle, size_t n, double *matrix) {
    for (size_t q = 0; q < n; q++)
        for (size_t p = q; p < n; p++)
            matrix[q * n + p] = matrix[p * n + q] = *triangle++;
}

/* half[l * columns + p] = sum_q moment_l(q) value[q][p] */
VECTOR_CLONES
static void source_moments(const struct body *source, size_t medium, const double *matrix,
                           size_t columns, double *restrict half) {
    for (size_t g = 0; g < source->faces; g++) {
        const struct body_face *face = &source->face[g];
        size_t count = face->rule[medium]->count;
        for (size_t l = 0; l < face->terms; l++) {
            const double *moment = face->rule[medium]->moment + l * count;
            double *restrict to = half + (face->first_term + l) * columns;
            for (size_t q = 0; q < count; q++) {
                const double *restrict from = matrix + (face->first_node + q) * columns;
                for (size_t p = 0; p < columns; p++)
                    to[p] += moment[q] * from[p];
            }
        }
    }
}

static void target_moments(const struct body *target, size_t medium, size_t source_terms,
                           const double *half, size_t columns, double *block) {
    for (size_t f = 0; f < target->faces; f++) {
        const struct body_face *face = &target->face[f];
        size_t count = face->rule[medium]->count;
        for (size_t k = 0; k < face->terms; k++) {
            const double *moment = face->rule[medium]->moment + k * count;
            for (size_t l = 0; l < source_terms; l++) {
                const double *from = half + l * columns + face->first_node;
                double sum = 0;
                for (size_t p = 0; p < count; p++)
                    sum += moment[p] * from[p];
                block[(face->first_term + k) * source_terms + l] = sum;
            }
        }
    }
}

bool body_interaction(const struct slab_kernel *kernel, bool direct, bool same,
                      const struct body *target, const struct body *source, struct arena *arena,
                      double *const block[BODY_MEDIA], struct error *error) {
    struct arena_mark mark = arena_mark(arena);
    size_t columns = target->nodes;
    struct pairs pairs;
    double *half = arena_take(arena, BODY_MEDIA * source->terms * columns, sizeof(double), error);
    double *full = arena_take(arena, same ? columns * columns : 1, sizeof(double), error);
    if (half == NULL || full == NULL || !pairs_list(target, source, same, arena, &pairs, error))
        return false;
    pairs_evaluate(kernel, direct, &pairs);
    for (size_t medium = 0; medium < BODY_MEDIA; medium++) {
        double *part = half + medium * source->terms * columns;
        if (same)
            unpack(pairs.value[medium], columns, full);
        source_moments(source, medium, same ? full : pairs.value[medium], columns, part);
        target_moments(target, medium, source->terms, part, columns, block[medium]);
    }
    arena_rewind(arena, mark);
    return true;
}

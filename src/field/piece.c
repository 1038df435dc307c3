/* Pieces from faces: a face is cut until every piece is no longer than `reach` times its distance
 * to the nearest corner that is not its own end, for charge and kernel vary at that scale. */

#include "piece.h"

#include "quadrature.h"

#include <math.h>
#include <string.h>

enum { MOST_PIECES = 1000 };

/* Of neighbours on graded meshes. */
static const double graded_ratio = 0.12;

/* A plain expansion is that much shorter where the corner lies aside, not on its own face: what it
 * sees of it is a peak, not a tail. */
static const double beside_share = 0.55;

/* From a piece's middle, in its lengths; beyond, Gauss' rule needs no help. */
static const double close_by = 1.5;

/* A mapping with a power above two leaves little resolution for the far end. */
static const double strong_share = 0.6;

/* A slab with two faces guides the field out to dk times its height: its faces are cut finer and
 * farther out. */
static const double guiding_share = 0.5, guiding_tail = 4, tail = 0.6;

/* The half-plane's end is a branch point of every kernel, sharper than a corner is to a charge. */
static const double end_share = 0.3;

static void make_rule(size_t count, size_t terms, bool crowded, struct piece_rule *rule) {
    double t[PIECE_MOST_NODES], weight[PIECE_MOST_NODES];
    rule->count = count;
    quadrature_gauss(count, t, weight);
    for (size_t q = 0; q < count; q++) {
        double s = 0.5 * (1 + t[q]), w = 0.5 * weight[q];
        if (crowded) {
            w *= 2 * s;
            s *= s;
        }
        rule->s[q] = s;
        quadrature_legendre(terms, 2 * s - 1, rule->moment[q]);
        for (size_t k = 0; k < terms; k++)
            rule->moment[q][k] *= w;
    }
}

void piece_rules_make(const struct piece_effort *effort, struct piece_rules *rules) {
    memset(rules, 0, sizeof *rules);
    rules->terms = effort->terms;
    make_rule(effort->terms + effort->more_tests, effort->terms, false, &rules->test);
    make_rule(effort->far_nodes, effort->terms, false, &rules->far);
    make_rule(effort->near_nodes, effort->terms, true, &rules->near);
    rules->end_logarithm[0] = -1;
    for (size_t k = 1; k < effort->terms; k++)
        rules->end_logarithm[k] = -1 / ((double)k * (double)(k + 1));
}

double complex piece_position(const struct piece *piece, double s) {
    return piece->origin + piece->step * (piece->tail         ? pow(1 - s, -piece->power)
                                          : piece->power == 1 ? s
                                                              : pow(s, piece->power));
}

double complex piece_slope(const struct piece *piece, double s) {
    double a = piece->power;
    return piece->step * a * (piece->tail ? pow(1 - s, -a - 1) : a == 1 ? 1 : pow(s, a - 1));
}

struct cutter {
    const struct outline *outline;
    const struct piece_effort *effort;
    const struct outline_face *face;
    double complex along; /* unit */
    struct arena *arena;
    struct error *error;
    struct piece *pieces;
    size_t count, room;
    bool failed;
};

static bool make_room(struct cutter *cutter) {
    if (cutter->count < cutter->room)
        return true;
    if (cutter->count == MOST_PIECES)
        return error_set(cutter->error, ERROR_INPUT,
                         "section: copper is too wide beside its height, thickness and gaps: more "
                         "than %d pieces of outline",
                         MOST_PIECES);
    size_t room = cutter->room == 0 ? 48 : 2 * cutter->room;
    room = room > MOST_PIECES ? MOST_PIECES : room;
    struct piece *pieces = arena_new(cutter->arena, room, struct piece, cutter->error);
    if (pieces == NULL)
        return false;
    if (cutter->count > 0)
        memcpy(pieces, cutter->pieces, cutter->count * sizeof *pieces);
    cutter->pieces = pieces;
    cutter->room = room;
    return true;
}

static void add_piece(struct cutter *cutter, struct piece piece) {
    cutter->failed = cutter->failed || !make_room(cutter);
    if (cutter->failed)
        return;
    double complex middle = piece.origin + 0.5 * piece.step;
    double length = cabs(piece.step);
    piece.middle_x = creal(middle);
    piece.middle_y = cimag(middle);
    piece.close2 = piece.tail ? INFINITY : close_by * close_by * length * length;
    piece.normal = I * cutter->along;
    piece.left = cutter->face->left;
    piece.right = cutter->face->right;
    piece.conductor = cutter->face->conductor;
    cutter->pieces[cutter->count++] = piece;
}

/* Distance of a stretch of the face to the nearest corner but those at its own ends. */
static double clearance(const struct cutter *cutter, double from, double to, bool corner_from,
                        bool corner_to) {
    double least = INFINITY, tiny = 1e-10 * (to - from);
    for (size_t i = 0; i < cutter->outline->corners; i++) {
        double complex at = (cutter->outline->corner[i] - cutter->face->from) * conj(cutter->along);
        double across = cimag(at), x = creal(at);
        if (fabs(across) <= tiny &&
            ((corner_from && fabs(x - from) <= tiny) || (corner_to && fabs(x - to) <= tiny)))
            continue;
        double beside = fmax(0, fmax(from - x, x - to));
        double distance = hypot(across, beside);
        if (!corner_from && !corner_to && fabs(across) > tiny)
            distance *= beside_share;
        if (cutter->outline->map.kind == PLANE_HALF &&
            cutter->outline->corner[i] == cutter->outline->map.end)
            distance *= end_share;
        least = fmin(least, distance);
    }
    if (cutter->outline->map.kind == PLANE_TWO)
        least = fmin(least, 0.5 * cutter->outline->map.spacing);
    return least;
}

static double face_distance(const struct outline_face *face, double complex at) {
    double complex along = face->endless ? face->to : face->to - face->from;
    double length = cabs(along);
    double complex z = (at - face->from) * conj(along) / length;
    double beyond = face->endless ? fmax(0, -creal(z)) : fmax(-creal(z), creal(z) - length);
    return hypot(fmax(0, beyond), cimag(z));
}

/* A corner sees its own image in a face beside it. */
static double image_clearance(const struct cutter *cutter, double complex corner) {
    double least = INFINITY;
    for (size_t i = 0; i < cutter->outline->count; i++) {
        double distance = face_distance(&cutter->outline->face[i], corner);
        if (distance > 1e-9)
            least = fmin(least, distance);
    }
    return 2 * least;
}

static bool is_guiding(const struct cutter *cutter) {
    enum plane_kind kind = cutter->outline->map.kind;
    return (kind == PLANE_HALF || kind == PLANE_NONE) && cutter->face->conductor == OUTLINE_NOBODY;
}

/* Powers are those of the face where the stretch ends at its corners, otherwise 1. */
static void cut(struct cutter *cutter, double from, double to, double power_from, double power_to) {
    double length = to - from;
    double reach = cutter->effort->reach * (is_guiding(cutter) ? guiding_share : 1);
    bool corner_from = power_from > 1, corner_to = power_to > 1;
    double middle = 0.5 * (from + to);
    if (cutter->failed)
        return;
    if (corner_from && corner_to) {
        cut(cutter, from, middle, power_from, 1);
        cut(cutter, middle, to, 1, power_to);
        return;
    }
    double clear = clearance(cutter, from, to, corner_from, corner_to);
    if (corner_from || corner_to)
        clear = fmin(clear, image_clearance(cutter, cutter->face->from +
                                                        cutter->along * (corner_to ? to : from)));
    if (fmax(power_from, power_to) > 2)
        clear *= strong_share;
    bool done = length <= reach * clear;
    double share = 1 / (1 + reach);
    if (cutter->effort->smallest > 0 && (corner_from || corner_to)) {
        done = length < cutter->effort->smallest;
        share = graded_ratio;
    }
    if (done) {
        double complex start = cutter->face->from + cutter->along * (corner_to ? to : from);
        add_piece(cutter, (struct piece){.origin = start,
                                         .step = cutter->along * (corner_to ? -length : length),
                                         .power = cutter->effort->smallest > 0 ? 1
                                                  : corner_to                  ? power_to
                                                                               : power_from});
        return;
    }
    if (corner_from)
        middle = from + share * length;
    else if (corner_to)
        middle = to - share * length;
    cut(cutter, from, middle, power_from, 1);
    cut(cutter, middle, to, 1, power_to);
}

/* From where on the section is compact as seen along an endless face. */
static double tail_start(const struct cutter *cutter) {
    double start = 0, share = is_guiding(cutter) ? guiding_tail : tail;
    for (size_t i = 0; i < cutter->outline->corners; i++) {
        double complex at = (cutter->outline->corner[i] - cutter->face->from) * conj(cutter->along);
        double offset = fabs(cimag(at)), x = creal(at);
        start = fmax(start, share * cabs(at));
        if (x > 0)
            start = fmax(start, 1.3 * x + 0.6 * offset);
    }
    return start;
}

static void cut_face(struct cutter *cutter, const struct outline_face *face) {
    cutter->face = face;
    if (!face->endless) {
        double length = cabs(face->to - face->from);
        cutter->along = (face->to - face->from) / length;
        cut(cutter, 0, length, face->power[0], face->power[1]);
        return;
    }
    cutter->along = face->to;
    double start = tail_start(cutter);
    cut(cutter, 0, start, face->power[0], 1);
    add_piece(cutter, (struct piece){.tail = true,
                                     .origin = face->from,
                                     .step = cutter->along * start,
                                     .power = cutter->outline->map.kind == PLANE_HALF ? 2 : 1});
}

static bool place_nodes(struct piece *piece, const struct plane_map *map,
                        const struct piece_rules *rules, struct arena *arena, struct error *error) {
    size_t far = rules->far.count, near = rules->near.count;
    double *all = arena_new(arena, 2 * (far + near), double, error);
    if (all == NULL)
        return false;
    piece->far_x = all;
    piece->far_y = all + far;
    piece->near_x = all + 2 * far;
    piece->near_y = all + 2 * far + near;
    for (size_t q = 0; q < far + near; q++) {
        double s = q < far ? rules->far.s[q] : rules->near.s[q - far];
        double complex w = plane_map_at(map, piece_position(piece, s));
        size_t at = q < far ? q : q - far;
        (q < far ? piece->far_x : piece->near_x)[at] = creal(w);
        (q < far ? piece->far_y : piece->near_y)[at] = cimag(w);
    }
    return true;
}

struct piece *piece_cut(const struct outline *outline, const struct piece_effort *effort,
                        const struct piece_rules *rules, size_t *count, struct arena *arena,
                        struct error *error) {
    struct cutter cutter = {.outline = outline, .effort = effort, .arena = arena, .error = error};
    for (size_t i = 0; i < outline->count; i++)
        cut_face(&cutter, &outline->face[i]);
    if (cutter.failed)
        return NULL;
    for (size_t i = 0; i < cutter.count; i++)
        if (!place_nodes(&cutter.pieces[i], &outline->map, rules, arena, error))
            return NULL;
    *count = cutter.count;
    return cutter.pieces;
}

/* The fast section solver, Galerkin like the plain one but with one expansion per side of a
 * conductor (face.h), eight to a dozen unknowns per trace.
 * 1. Own blocks: ln r0 and ln r1 from tables (section_self.h), the images by nodes.
 * 2. Blocks between conductors: the whole kernel by nodes (body.h).
 * 3. A mirror-symmetric section falls into an even and an odd system of half the size: the right
 * half counts its functions from the right, so that a conductor and its image have the same block;
 *    functions of a conductor in the middle are even or odd themselves.
 * 4. Elimination; C = Y'Y. */

#include "section_fast.h"

#include "body.h"
#include "dense.h"
#include "section_parts.h"

#include <math.h>
#include <string.h>

static const double green_factor = -1 / (2 * 3.14159265358979323846);
static const double root_half = 0.70710678118654752440;

enum parity { EVEN, ODD, PARITIES }; /* without symmetry all is in EVEN */

/* One function of a conductor in the systems: where, with which weight; weight 0: not there. */
struct place {
    size_t at[PARITIES];
    double weight[PARITIES];
};

struct system {
    const struct section_problem *problem;
    const struct section_orders *orders;
    struct slab_kernel kernel;
    struct arena *arena;
    bool mirrored;
    size_t heads; /* conductors with unknowns of their own: all, or the left half and the middle */
    size_t unknowns[PARITIES], stride[PARITIES];
    struct place *places[SECTION_MOST_CONDUCTORS];
    double *a[BODY_MEDIA][PARITIES];
    double *scratch[BODY_MEDIA]; /* a block between two conductors */
};

static bool is_mirrored(const struct section_problem *problem) {
    const struct section_conductor *c = problem->conductors;
    size_t n = problem->count;
    double left = c[0].left, right = c[n - 1].left + c[n - 1].width;
    double allowed = 1e-10 * problem->height;
    for (size_t i = 0; i < (n + 1) / 2; i++) {
        const struct section_conductor *one = &c[i], *other = &c[n - 1 - i];
        if (fabs(one->width - other->width) > allowed ||
            fabs(one->thickness - other->thickness) > allowed ||
            fabs((one->left - left) - (right - other->left - other->width)) > allowed)
            return false;
    }
    return true;
}

static bool in_middle(const struct system *s, size_t i) {
    return s->mirrored && 2 * i + 1 == s->problem->count;
}

/* Level functions of the middle conductor have the parity of their polynomial; its two sides
 * combine to an even and an odd function each. */
static void place_middle(struct section_terms terms, const size_t *first, struct place *places) {
    size_t next[PARITIES] = {first[EVEN], first[ODD]};
    size_t levels = terms.upright > 0 ? 2 : 1, k = 0;
    for (size_t f = 0; f < levels; f++)
        for (size_t n = 0; n < terms.level; n++, k++) {
            enum parity parity = n % 2 == 0 ? EVEN : ODD;
            places[k].at[parity] = next[parity]++;
            places[k].weight[parity] = 1;
        }
    for (size_t n = 0; n < terms.upright; n++, k++)
        for (size_t parity = 0; parity < PARITIES; parity++) {
            struct place *left = &places[k], *right = &places[k + terms.upright];
            left->at[parity] = right->at[parity] = next[parity]++;
            left->weight[parity] = root_half;
            right->weight[parity] = parity == EVEN ? root_half : -root_half;
        }
}

static size_t middle_count(struct section_terms terms, enum parity parity) {
    size_t levels = terms.upright > 0 ? 2 : 1;
    return levels * ((terms.level + (parity == EVEN ? 1 : 0)) / 2) + terms.upright;
}

static bool make_places(struct system *s, struct error *error) {
    size_t n = s->problem->count;
    s->mirrored = is_mirrored(s->problem);
    s->heads = s->mirrored ? (n + 1) / 2 : n;
    for (size_t i = 0; i < s->heads; i++) {
        struct section_terms terms = s->orders->terms[i];
        size_t own = section_own(terms);
        struct place *places = s->places[i] = arena_new(s->arena, own, struct place, error);
        if (places == NULL)
            return false;
        if (in_middle(s, i)) {
            place_middle(terms, s->unknowns, places);
            for (size_t parity = 0; parity < PARITIES; parity++)
                s->unknowns[parity] += middle_count(terms, parity);
            continue;
        }
        for (size_t parity = 0; parity < (s->mirrored ? PARITIES : 1); parity++) {
            for (size_t k = 0; k < own; k++) {
                places[k].at[parity] = s->unknowns[parity]++;
                places[k].weight[parity] = 1;
            }
        }
    }
    return true;
}

static bool make_matrices(struct system *s, struct error *error) {
    size_t most = 0;
    for (size_t i = 0; i < s->heads; i++)
        if (section_own(s->orders->terms[i]) > most)
            most = section_own(s->orders->terms[i]);
    for (size_t medium = 0; medium < BODY_MEDIA; medium++) {
        s->scratch[medium] = arena_take(s->arena, most * most, sizeof(double), error);
        if (s->scratch[medium] == NULL)
            return false;
        for (size_t parity = 0; parity < PARITIES; parity++) {
            s->stride[parity] = s->unknowns[parity] + s->heads;
            s->a[medium][parity] = arena_take(s->arena, s->unknowns[parity] * s->stride[parity],
                                              sizeof(double), error);
            if (s->a[medium][parity] == NULL)
                return false;
        }
    }
    return true;
}

/* Adds the block between heads i and j (i <= j; upper triangle), `sign[parity]` times. */
static void add_scratch(struct system *s, size_t i, size_t j, const double *sign) {
    size_t rows = section_own(s->orders->terms[i]), columns = section_own(s->orders->terms[j]);
    /* A pair's normalised functions meet the middle one twice, over root two. */
    double factor = green_factor * (in_middle(s, j) && !in_middle(s, i) ? 2 * root_half : 1);
    for (size_t parity = 0; parity < PARITIES; parity++) {
        if (s->unknowns[parity] == 0)
            continue;
        for (size_t m = 0; m < rows; m++) {
            const struct place *row = &s->places[i][m];
            double weight = factor * sign[parity] * row->weight[parity];
            if (weight == 0)
                continue;
            for (size_t n = 0; n < columns; n++) {
                const struct place *column = &s->places[j][n];
                if (column->weight[parity] == 0)
                    continue;
                size_t at = row->at[parity] * s->stride[parity] + column->at[parity];
                double both = weight * column->weight[parity];
                s->a[BODY_VACUUM][parity][at] += both * s->scratch[BODY_VACUUM][m * columns + n];
                s->a[BODY_SLAB][parity][at] += both * s->scratch[BODY_SLAB][m * columns + n];
            }
        }
    }
}

static struct body_shape shape_of(const struct system *s, size_t i) {
    const struct section_conductor *c = &s->problem->conductors[i];
    double h = s->problem->height;
    return (struct body_shape){c->left / h, c->width / h, c->thickness / h, s->orders->foot_corner,
                               s->mirrored && 2 * i + 1 > s->problem->count};
}

static bool add_own(struct system *s, size_t i, struct error *error) {
    static const double signs[PARITIES] = {1, 1};
    struct body_shape shape = shape_of(s, i);
    struct section_terms terms = s->orders->terms[i];
    struct body body;
    if (!body_place(shape, terms, section_nodes(s->problem, s->orders, i, i), s->arena, &body,
                    error) ||
        !body_interaction(&s->kernel, false, true, &body, &body, s->arena, s->scratch, error))
        return false;
    return section_self(shape.width, shape.thickness, FACE_AIR_CORNER, terms, 1, 0,
                        s->scratch[BODY_VACUUM], error) &&
           section_self(shape.width, shape.thickness, shape.corner, terms, 1, -s->kernel.reflection,
                        s->scratch[BODY_SLAB], error) &&
           (add_scratch(s, i, i, signs), true);
}

/* Conductor `other` is j or j's mirror image. */
static bool add_pair(struct system *s, size_t i, size_t j, size_t other, struct error *error) {
    static const double straight[PARITIES] = {1, 1}, across[PARITIES] = {1, -1};
    struct arena_mark mark = arena_mark(s->arena);
    struct section_nodes one = section_nodes(s->problem, s->orders, i, other);
    struct section_nodes two = i == j ? one : section_nodes(s->problem, s->orders, other, i);
    struct body target, source;
    if (!body_place(shape_of(s, i), s->orders->terms[i], one, s->arena, &target, error) ||
        !body_place(shape_of(s, other), s->orders->terms[j], two, s->arena, &source, error) ||
        !body_interaction(&s->kernel, true, i == j, &target, &source, s->arena, s->scratch, error))
        return false;
    add_scratch(s, i, j, j == other ? straight : across);
    arena_rewind(s->arena, mark);
    return true;
}

static bool assemble(struct system *s, struct error *error) {
    size_t n = s->problem->count;
    for (size_t i = 0; i < s->heads; i++)
        for (size_t j = i; j < s->heads; j++) {
            if (i == j ? !add_own(s, i, error) : !add_pair(s, i, j, j, error))
                return false;
            if (s->mirrored && !in_middle(s, i) && !in_middle(s, j) &&
                !add_pair(s, i, j, n - 1 - j, error))
                return false;
        }
    return true;
}

static void set_potentials(struct system *s, size_t medium, size_t parity) {
    for (size_t i = 0; i < s->heads; i++) {
        struct section_terms terms = s->orders->terms[i];
        size_t charge[BODY_FACES] = {0, terms.level, 2 * terms.level,
                                     2 * terms.level + terms.upright};
        for (size_t f = 0; f < (terms.upright > 0 ? BODY_FACES : 1); f++) {
            const struct place *place = &s->places[i][charge[f]];
            if (place->weight[parity] != 0)
                s->a[medium][parity][place->at[parity] * s->stride[parity] + s->unknowns[parity] +
                                     i] += place->weight[parity];
        }
    }
}

/* modal[i * heads + j] = R' inverse(A) R */
static bool modal_charges(struct system *s, size_t medium, size_t parity, double *modal,
                          struct error *error) {
    size_t n = s->unknowns[parity], stride = s->stride[parity];
    double *a = s->a[medium][parity];
    memset(modal, 0, s->heads * s->heads * sizeof *modal);
    if (n == 0)
        return true;
    set_potentials(s, medium, parity);
    if (!dense_eliminate(n, s->heads, stride, a, error))
        return false;
    for (size_t k = 0; k < n; k++) {
        const double *y = a + k * stride + n;
        for (size_t i = 0; i < s->heads; i++)
            for (size_t j = i; j < s->heads; j++)
                modal[i * s->heads + j] += y[i] * y[j];
    }
    return true;
}

static bool charges(struct system *s, size_t medium, double *capacitance, struct error *error) {
    double even[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double odd[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    if (!modal_charges(s, medium, EVEN, even, error) || !modal_charges(s, medium, ODD, odd, error))
        return false;
    size_t n = s->problem->count;
    for (size_t i = 0; i < s->heads; i++)
        for (size_t j = i; j < s->heads; j++) {
            double e = SECTION_EPSILON_0 * even[i * s->heads + j];
            double o = SECTION_EPSILON_0 * odd[i * s->heads + j];
            bool one = in_middle(s, i), two = in_middle(s, j);
            double same = !s->mirrored || (one && two) ? e : two ? e * root_half : 0.5 * (e + o);
            double across = two ? same : 0.5 * (e - o);
            capacitance[i * n + j] = capacitance[j * n + i] = same;
            if (!s->mirrored)
                continue;
            size_t mi = n - 1 - i, mj = n - 1 - j;
            capacitance[mi * n + mj] = capacitance[mj * n + mi] = same;
            capacitance[i * n + mj] = capacitance[mj * n + i] = across;
            capacitance[mi * n + j] = capacitance[j * n + mi] = across;
        }
    return true;
}

bool section_fast(const struct section_problem *problem, const struct section_orders *orders,
                  struct section_solution *solution, struct error *error) {
    struct arena *arena = arena_create(error);
    if (arena == NULL)
        return false;
    struct system s = {.problem = problem, .orders = orders, .arena = arena};
    struct section_solution result = {.count = problem->count, .error = NAN};
    slab_kernel_set(&s.kernel, section_reflection(problem->dk), orders->images);
    bool ok =
        make_places(&s, error) && make_matrices(&s, error) && assemble(&s, error) &&
        charges(&s, BODY_VACUUM, result.vacuum_capacitance, error) &&
        charges(&s, BODY_SLAB, result.capacitance, error) &&
        section_inductance(problem->count, result.vacuum_capacitance, result.inductance, error);
    for (size_t i = 0; i < problem->count; i++)
        result.unknowns += section_own(orders->terms[i]);
    arena_free(arena);
    if (ok)
        *solution = result;
    return ok;
}

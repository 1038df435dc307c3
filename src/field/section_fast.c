/* The fast section solver, Galerkin like the plain one but with one expansion per side of a
 * conductor (face.h): eight to a dozen unknowns per trace.
 * 1. orders and node counts from the geometry (section_orders).
 * 2. own blocks: ln r0 and ln r1 from tables (section_self.h), images by nodes.
 * 3. blocks between conductors: all of the kernel by nodes; both media share the logarithms.
 * 4. Cholesky, charges. */

#include "section_fast.h"
#include "face.h"
#include "logarithm.h"
#include "section_image.h"
#include "section_parts.h"
#include "section_self.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

enum { FACES = 4, MOST_NODES = 2 * FACE_MOST_NODES + 2 * FACE_MOST_NODES };
enum { VACUUM, SLAB, MEDIA };

struct face {
    size_t terms, first_term;
    size_t first_node;
    const struct face_rule *rule[MEDIA];
};

/* A conductor as one pair of them needs it; lengths in heights. */
struct body {
    size_t faces, terms, nodes;
    struct face face[FACES];
    double x[MOST_NODES], y[MOST_NODES];
};

struct kernel {
    size_t images;
    bool direct; /* ln r0 and ln r1 too */
    double reflection;
    double weight[SECTION_MOST_IMAGES]; /* already times 1 - K^2 */
};

static bool place_body(const struct section_problem *problem, size_t i, size_t corner,
                       struct section_terms terms, struct section_nodes nodes, struct body *body,
                       struct error *error) {
    const struct section_conductor *c = &problem->conductors[i];
    double h = problem->height, w = c->width / h, t = c->thickness / h, left = c->left / h;
    size_t foot_vacuum = t > 0 ? FACE_AIR_CORNER : FACE_SHEET_EDGE;
    size_t foot_slab = t > 0 ? corner : FACE_SHEET_EDGE;
    body->faces = t > 0 ? FACES : 1;
    body->terms = body->nodes = 0;
    for (size_t f = 0; f < body->faces; f++) {
        struct face *face = &body->face[f];
        enum face_kind kind = f < 2 ? FACE_LEVEL : FACE_UPRIGHT;
        size_t wanted = f < 2 ? nodes.level : nodes.upright;
        bool crowded = f < 2 ? nodes.level_crowded : nodes.upright_crowded;
        face->rule[VACUUM] =
            face_rule(kind, f == 1 ? FACE_AIR_CORNER : foot_vacuum, wanted, crowded, error);
        face->rule[SLAB] =
            face_rule(kind, f == 1 ? FACE_AIR_CORNER : foot_slab, wanted, crowded, error);
        if (face->rule[VACUUM] == NULL || face->rule[SLAB] == NULL)
            return false;
        face->terms = f < 2 ? terms.level : terms.upright;
        face->first_term = body->terms;
        face->first_node = body->nodes;
        body->terms += face->terms;
        for (size_t q = 0; q < face->rule[SLAB]->count; q++) {
            double at = face->rule[SLAB]->node[q];
            body->x[body->nodes] = kind == FACE_LEVEL ? left + w * at : f == 2 ? left : left + w;
            body->y[body->nodes++] = kind == FACE_UPRIGHT ? 1 + t * at : f == 1 ? 1 + t : 1;
        }
    }
    return true;
}

/* Twice the kernel between one point and the nodes of a body, both media. */
static void kernel_row(const struct kernel *kernel, double x, double y, const struct body *body,
                       double *restrict slab, double *restrict vacuum) {
    size_t n = body->nodes;
    const double *restrict u = body->x, *restrict v = body->y;
    for (size_t p = 0; p < n; p++) {
        double dx = u[p] - x, sum = y + v[p];
        double value = logarithm(dx * dx + sum * sum);
        vacuum[p] = -value;
        slab[p] = -kernel->weight[0] * value;
    }
    for (size_t k = 1; k < kernel->images; k++) {
        double weight = kernel->weight[k], below = y + 2 * (double)k;
        for (size_t p = 0; p < n; p++) {
            double dx = u[p] - x, sum = below + v[p];
            slab[p] -= weight * logarithm(dx * dx + sum * sum);
        }
    }
    if (!kernel->direct)
        return;
    for (size_t p = 0; p < n; p++) {
        double dx = u[p] - x, apart = v[p] - y, sum = v[p] + y - 2;
        double direct = logarithm(dx * dx + apart * apart);
        double mirrored = logarithm(dx * dx + sum * sum);
        vacuum[p] += direct;
        slab[p] += direct - kernel->reflection * mirrored;
    }
}

/* block[m * stride + n] += factor * sum over nodes of moment_m kernel moment_n, for both media. */
static void add_block(const struct kernel *kernel, const struct body *target,
                      const struct body *source, double factor, size_t stride,
                      double *const block[MEDIA]) {
    double half[MEDIA][SECTION_MOST_OWN][MOST_NODES];
    double row[MEDIA][MOST_NODES];
    size_t n = target->nodes;
    for (size_t medium = 0; medium < MEDIA; medium++)
        for (size_t l = 0; l < source->terms; l++)
            memset(half[medium][l], 0, n * sizeof(double));
    for (size_t g = 0; g < source->faces; g++) {
        const struct face *face = &source->face[g];
        size_t count = face->rule[SLAB]->count;
        for (size_t q = 0; q < count; q++) {
            size_t at = face->first_node + q;
            kernel_row(kernel, source->x[at], source->y[at], target, row[SLAB], row[VACUUM]);
            for (size_t medium = 0; medium < MEDIA; medium++)
                for (size_t l = 0; l < face->terms; l++) {
                    double moment = 0.5 * factor * face->rule[medium]->moment[l * count + q];
                    double *restrict to = half[medium][face->first_term + l];
                    const double *restrict from = row[medium];
                    for (size_t p = 0; p < n; p++)
                        to[p] += moment * from[p];
                }
        }
    }
    for (size_t medium = 0; medium < MEDIA; medium++)
        for (size_t f = 0; f < target->faces; f++) {
            const struct face *face = &target->face[f];
            size_t count = face->rule[medium]->count;
            for (size_t k = 0; k < face->terms; k++) {
                const double *moment = face->rule[medium]->moment + k * count;
                for (size_t l = 0; l < source->terms; l++) {
                    const double *from = half[medium][l] + face->first_node;
                    double sum = 0;
                    for (size_t p = 0; p < count; p++)
                        sum += moment[p] * from[p];
                    block[medium][(face->first_term + k) * stride + l] += sum;
                }
            }
        }
}

static const double green_factor = -1 / (2 * 3.14159265358979323846);

struct system {
    const struct section_problem *problem;
    const struct section_orders *orders;
    size_t corner; /* at the foot, on the slab */
    size_t unknowns;
    size_t first[SECTION_MOST_CONDUCTORS + 1];
    struct kernel kernel;
    double *a[MEDIA];
};

static bool add_own(struct system *s, size_t i, struct error *error) {
    const struct section_conductor *c = &s->problem->conductors[i];
    double own[SECTION_MOST_OWN * SECTION_MOST_OWN];
    double h = s->problem->height;
    struct section_terms terms = s->orders->terms[i];
    size_t n = section_own(terms);
    struct kernel images = s->kernel;
    images.direct = false;
    struct body body;
    if (!place_body(s->problem, i, s->corner, terms, section_nodes(s->problem, s->orders, i, i),
                    &body, error))
        return false;
    double *block[MEDIA];
    for (size_t medium = 0; medium < MEDIA; medium++) {
        block[medium] = s->a[medium] + s->first[i] * (s->unknowns + 1);
        size_t corner = medium == VACUUM ? FACE_AIR_CORNER : s->corner;
        double mirrored = medium == VACUUM ? 0 : -s->kernel.reflection;
        if (!section_self(c->width / h, c->thickness / h, corner, terms, 1.0, mirrored, own, error))
            return false;
        for (size_t k = 0; k < n; k++)
            for (size_t l = 0; l < n; l++)
                block[medium][k * s->unknowns + l] = green_factor * own[k * n + l];
    }
    add_block(&images, &body, &body, green_factor, s->unknowns, block);
    return true;
}

static bool add_pair(struct system *s, size_t i, size_t j, struct error *error) {
    struct body one, two;
    if (!place_body(s->problem, i, s->corner, s->orders->terms[i],
                    section_nodes(s->problem, s->orders, i, j), &one, error) ||
        !place_body(s->problem, j, s->corner, s->orders->terms[j],
                    section_nodes(s->problem, s->orders, j, i), &two, error))
        return false;
    double *block[MEDIA];
    for (size_t medium = 0; medium < MEDIA; medium++)
        block[medium] = s->a[medium] + s->first[i] * s->unknowns + s->first[j];
    add_block(&s->kernel, &one, &two, green_factor, s->unknowns, block);
    return true;
}

static bool charges(const struct system *s, double *a, double *right, double *capacitance,
                    struct error *error) {
    size_t n = s->problem->count, unknowns = s->unknowns;
    memset(right, 0, unknowns * n * sizeof *right);
    size_t charge[SECTION_MOST_CONDUCTORS][FACES], faces[SECTION_MOST_CONDUCTORS];
    for (size_t i = 0; i < n; i++) {
        struct section_terms terms = s->orders->terms[i];
        faces[i] = terms.upright == 0 ? 1 : FACES;
        charge[i][0] = s->first[i];
        charge[i][1] = charge[i][0] + terms.level;
        charge[i][2] = charge[i][1] + terms.level;
        charge[i][3] = charge[i][2] + terms.upright;
        for (size_t f = 0; f < faces[i]; f++)
            right[i * unknowns + charge[i][f]] = 1;
    }
    /* Row-major upper is column-major lower: no transposition. */
    if (LAPACKE_dposv(LAPACK_COL_MAJOR, 'L', (lapack_int)unknowns, (lapack_int)n, a,
                      (lapack_int)unknowns, right, (lapack_int)unknowns) != 0)
        return error_set(error, ERROR_SINGULAR, "section: system of %zu unknowns is singular",
                         unknowns);
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j <= i; j++) {
            double sum = 0;
            for (size_t f = 0; f < faces[i]; f++)
                sum += right[j * unknowns + charge[i][f]];
            capacitance[i * n + j] = capacitance[j * n + i] = SECTION_EPSILON_0 * sum;
        }
    return true;
}

static bool assemble(struct system *s, struct error *error) {
    for (size_t i = 0; i < s->problem->count; i++) {
        if (!add_own(s, i, error))
            return false;
        for (size_t j = i + 1; j < s->problem->count; j++)
            if (!add_pair(s, i, j, error))
                return false;
    }
    return true;
}

bool section_fast(const struct section_problem *problem, const struct section_orders *orders,
                  struct section_solution *solution, struct error *error) {
    struct system s = {.problem = problem, .orders = orders};
    for (size_t i = 0; i < problem->count; i++)
        s.first[i + 1] = s.first[i] + section_own(orders->terms[i]);
    s.unknowns = s.first[problem->count];
    s.corner = face_foot_corner(problem->dk);
    s.kernel.direct = true;
    s.kernel.reflection = section_reflection(problem->dk);
    s.kernel.images = orders->images;
    section_image_weights(s.kernel.reflection, orders->images, s.kernel.weight);
    for (size_t k = 0; k < orders->images; k++)
        s.kernel.weight[k] *= 1 - s.kernel.reflection * s.kernel.reflection;

    struct arena *arena = arena_create(error);
    if (arena == NULL)
        return false;
    size_t n = s.unknowns;
    s.a[VACUUM] = arena_take(arena, n * n, sizeof(double), error);
    s.a[SLAB] = arena_take(arena, n * n, sizeof(double), error);
    double *right = arena_take(arena, n * problem->count, sizeof(double), error);
    struct section_solution result = {.count = problem->count, .error = NAN, .unknowns = n};
    bool ok =
        s.a[VACUUM] != NULL && s.a[SLAB] != NULL && right != NULL && assemble(&s, error) &&
        charges(&s, s.a[VACUUM], right, result.vacuum_capacitance, error) &&
        charges(&s, s.a[SLAB], right, result.capacitance, error) &&
        section_inductance(problem->count, result.vacuum_capacitance, result.inductance, error);
    arena_free(arena);
    if (ok)
        *solution = result;
    return ok;
}

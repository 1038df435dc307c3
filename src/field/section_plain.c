/* The plain section solver: first-kind Galerkin boundary elements.
 * 1. panels: every side split in the middle, graded geometrically to both ends, then split until no
 *    panel is longer than its distance to other copper or than twice the height.
 * 2. A = integrals of test, source and Green's function of the grounded slab over panel pairs:
 *    G = -(1/2pi) [ln r0 - K ln r1 - (1 - K^2) sum_(k>=0) (-K)^k ln rho_k], K = (dk-1)/(dk+1),
 *    r1 seen in the slab's face, rho_k at y + y' + 2k h (Silvester 1968); the sum ends where
 *    K^k < 1e-7 and the rest is put on the last two images, so that its charge and its dipole
 *    moment, on which distant conductors depend, are exact.
 * 3. A q = the conductors' unit potentials, by Cholesky; C = their charges. */

#include "groundrules/arena.h"
#include "logarithm.h"
#include "panel.h"
#include "section_parts.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

struct plain_orders {
    size_t terms;    /* per panel */
    double ratio;    /* of neighbouring panels */
    double smallest; /* end panel over the longer side */
};

static const struct plain_orders fine = {5, 0.2, 1e-5};
static const struct plain_orders coarse = {4, 0.2, 1e-4};

/* Two matrices of that size are 256 MB. */
enum { MOST_IMAGES = 1200, MOST_UNKNOWNS = 4000 };

struct plain {
    const struct section_problem *problem;
    struct plain_orders orders;
    struct panel_rules rules;
    struct panel *panels;
    size_t count, room;
    double reflection;
    size_t images;
    double weight[MOST_IMAGES];
    double *a, *a0; /* unknowns^2 */
};

static double rectangle_distance(const struct panel *panel, const struct section_problem *problem,
                                 size_t i) {
    double h = problem->height;
    const struct section_conductor *c = &problem->conductors[i];
    double reach_x = (panel->upright ? 0 : panel->half) + 0.5 * c->width / h;
    double dx = fabs(panel->x - (c->left + 0.5 * c->width) / h) - reach_x;
    double low = panel->y - (panel->upright ? panel->half : 0);
    double dy = low - (1 + c->thickness / h);
    return hypot(fmax(0, dx), fmax(0, dy));
}

static double longest_allowed(const struct plain *plain, const struct panel *panel) {
    double allowed = 2.0;
    for (size_t i = 0; i < plain->problem->count; i++)
        if (i != panel->conductor)
            allowed = fmin(allowed, rectangle_distance(panel, plain->problem, i));
    return allowed;
}

static bool add_panel(struct plain *plain, struct panel panel, struct arena *arena,
                      struct error *error) {
    if (2 * panel.half > longest_allowed(plain, &panel) && panel.half > 1e-9) {
        struct panel one = panel, two = panel;
        one.half = two.half = 0.5 * panel.half;
        *(panel.upright ? &one.y : &one.x) -= one.half;
        *(panel.upright ? &two.y : &two.x) += two.half;
        return add_panel(plain, one, arena, error) && add_panel(plain, two, arena, error);
    }
    if (plain->count == plain->room) {
        size_t room = plain->room == 0 ? 256 : 2 * plain->room;
        struct panel *panels = arena_new(arena, room, struct panel, error);
        if (panels == NULL)
            return false;
        if (plain->count > 0)
            memcpy(panels, plain->panels, plain->count * sizeof *panels);
        plain->panels = panels;
        plain->room = room;
    }
    plain->panels[plain->count++] = panel;
    return true;
}

static bool add_side(struct plain *plain, struct panel side, double smallest, struct arena *arena,
                     struct error *error) {
    double outer = side.half;
    while (outer > 0) {
        double inner = outer * plain->orders.ratio;
        if (inner < smallest)
            inner = 0;
        for (int sign = -1; sign <= 1; sign += 2) {
            struct panel panel = side;
            panel.half = 0.5 * (outer - inner);
            *(side.upright ? &panel.y : &panel.x) += sign * (side.half - 0.5 * (outer + inner));
            if (!add_panel(plain, panel, arena, error))
                return false;
        }
        outer = inner;
    }
    return true;
}

static bool make_panels(struct plain *plain, struct arena *arena, struct error *error) {
    double h = plain->problem->height;
    for (size_t i = 0; i < plain->problem->count; i++) {
        const struct section_conductor *c = &plain->problem->conductors[i];
        double w = c->width / h, t = c->thickness / h, middle = c->left / h + 0.5 * w;
        double smallest = plain->orders.smallest * fmax(w, t);
        if (t > 0)
            smallest = fmin(smallest, 1e-3 * fmin(w, t));
        struct panel foot = {middle, 1, 0.5 * w, false, i};
        struct panel top = {middle, 1 + t, 0.5 * w, false, i};
        struct panel left = {middle - 0.5 * w, 1 + 0.5 * t, 0.5 * t, true, i};
        struct panel right = {middle + 0.5 * w, 1 + 0.5 * t, 0.5 * t, true, i};
        if (!add_side(plain, foot, smallest, arena, error))
            return false;
        if (t > 0 && (!add_side(plain, top, smallest, arena, error) ||
                      !add_side(plain, left, smallest, arena, error) ||
                      !add_side(plain, right, smallest, arena, error)))
            return false;
    }
    return true;
}

static void make_weights(struct plain *plain) {
    double k = plain->reflection = section_reflection(plain->problem->dk);
    double weight = 1 - k * k;
    plain->images = 0;
    while (plain->images < MOST_IMAGES - 1 && fabs(weight) > 1e-7) {
        plain->weight[plain->images++] = weight;
        weight *= -k;
    }
    double rest = weight / (1 + k), shift = k / (1 + k);
    plain->weight[plain->images - 1] += shift * rest;
    plain->weight[plain->images++] = (1 - shift) * rest;
}

static void node_positions(const struct panel *panel, const double *t, double *x, double *y) {
    for (size_t a = 0; a < PANEL_IMAGE_NODES; a++) {
        x[a] = panel->x + (panel->upright ? 0 : panel->half * t[a]);
        y[a] = panel->y + (panel->upright ? panel->half * t[a] : 0);
    }
}

/* The images below the plane are at least two heights away and panels no longer than that. */
static void add_images(const struct plain *plain, const struct panel *target,
                       const struct panel *source, double *block, double *block0) {
    size_t terms = plain->orders.terms;
    double x[PANEL_IMAGE_NODES], y[PANEL_IMAGE_NODES], u[PANEL_IMAGE_NODES], v[PANEL_IMAGE_NODES];
    node_positions(target, plain->rules.image, x, y);
    node_positions(source, plain->rules.image, u, v);
    for (size_t a = 0; a < PANEL_IMAGE_NODES; a++) {
        double inner[PANEL_MOST_TERMS] = {0}, inner0[PANEL_MOST_TERMS] = {0};
        double sum[PANEL_IMAGE_NODES] = {0}, first[PANEL_IMAGE_NODES];
        for (size_t k = 0; k < plain->images; k++) {
            for (size_t b = 0; b < PANEL_IMAGE_NODES; b++) {
                double dx = x[a] - u[b], dy = y[a] + v[b] + 2.0 * (double)k;
                double value = 0.5 * logarithm(dx * dx + dy * dy);
                sum[b] += plain->weight[k] * value;
                if (k == 0)
                    first[b] = value;
            }
        }
        for (size_t b = 0; b < PANEL_IMAGE_NODES; b++)
            for (size_t n = 0; n < terms; n++) {
                inner[n] += plain->rules.image_test[b][n] * sum[b];
                inner0[n] += plain->rules.image_test[b][n] * first[b];
            }
        for (size_t m = 0; m < terms; m++)
            for (size_t n = 0; n < terms; n++) {
                block[m * terms + n] -= plain->rules.image_test[a][m] * inner[n];
                block0[m * terms + n] -= plain->rules.image_test[a][m] * inner0[n];
            }
    }
}

static void assemble_pair(struct plain *plain, size_t p, size_t q) {
    enum { BLOCK = PANEL_MOST_TERMS * PANEL_MOST_TERMS };
    const struct panel *target = &plain->panels[p], *source = &plain->panels[q];
    size_t terms = plain->orders.terms, unknowns = plain->count * terms;
    struct panel_image direct = {false, 0}, slab = {true, 2};
    double straight[BLOCK] = {0}, reflected[BLOCK] = {0}, block[BLOCK] = {0}, block0[BLOCK] = {0};
    panel_add_logarithm(&plain->rules, target, source, direct, terms, 1.0, straight);
    if (plain->reflection > 0)
        panel_add_logarithm(&plain->rules, target, source, slab, terms, plain->reflection,
                            reflected);
    add_images(plain, target, source, block, block0);
    const double factor = -1 / (2 * 3.14159265358979323846);
    for (size_t m = 0; m < terms; m++)
        for (size_t n = 0; n < terms; n++) {
            size_t i = m * terms + n, at = (p * terms + m) * unknowns + q * terms + n;
            plain->a[at] = factor * (straight[i] - reflected[i] + block[i]);
            plain->a0[at] = factor * (straight[i] + block0[i]);
        }
}

static bool charges(const struct plain *plain, double *a, double *capacitance, double *right,
                    struct error *error) {
    size_t n = plain->problem->count, terms = plain->orders.terms, unknowns = plain->count * terms;
    memset(right, 0, unknowns * n * sizeof *right);
    for (size_t p = 0; p < plain->count; p++)
        right[plain->panels[p].conductor * unknowns + p * terms] = 1.0;
    /* Row-major upper is column-major lower: no transposition. */
    if (LAPACKE_dposv(LAPACK_COL_MAJOR, 'L', (lapack_int)unknowns, (lapack_int)n, a,
                      (lapack_int)unknowns, right, (lapack_int)unknowns) != 0)
        return error_set(error, ERROR_SINGULAR, "section: system of %zu unknowns is singular",
                         unknowns);
    memset(capacitance, 0, n * n * sizeof *capacitance);
    for (size_t p = 0; p < plain->count; p++)
        for (size_t j = 0; j < n; j++)
            capacitance[plain->panels[p].conductor * n + j] +=
                SECTION_EPSILON_0 * right[j * unknowns + p * terms];
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < i; j++)
            capacitance[i * n + j] = capacitance[j * n + i] =
                0.5 * (capacitance[i * n + j] + capacitance[j * n + i]);
    return true;
}

static bool too_many(const struct plain *plain, size_t unknowns, struct error *error) {
    size_t panels[SECTION_MOST_CONDUCTORS] = {0}, worst = 0;
    for (size_t p = 0; p < plain->count; p++)
        panels[plain->panels[p].conductor]++;
    for (size_t i = 1; i < plain->problem->count; i++)
        if (panels[i] > panels[worst])
            worst = i;
    return error_set(error, ERROR_INPUT,
                     "conductor %zu: width %g m is too much beside the height %g m and the gaps: "
                     "%zu unknowns, at most %d",
                     worst + 1, plain->problem->conductors[worst].width, plain->problem->height,
                     unknowns, MOST_UNKNOWNS);
}

static bool solve(const struct section_problem *problem, struct plain_orders orders,
                  struct section_solution *solution, struct arena *arena, struct error *error) {
    struct plain *plain = arena_new(arena, 1, struct plain, error);
    if (plain == NULL)
        return false;
    plain->problem = problem;
    plain->orders = orders;
    panel_rules_make(&plain->rules);
    make_weights(plain);
    if (!make_panels(plain, arena, error))
        return false;
    size_t unknowns = plain->count * orders.terms;
    if (unknowns > MOST_UNKNOWNS)
        return too_many(plain, unknowns, error);
    plain->a = arena_take(arena, unknowns * unknowns, sizeof(double), error);
    plain->a0 = arena_take(arena, unknowns * unknowns, sizeof(double), error);
    double *right = arena_take(arena, unknowns * problem->count, sizeof(double), error);
    if (plain->a == NULL || plain->a0 == NULL || right == NULL)
        return false;
    for (size_t p = 0; p < plain->count; p++)
        for (size_t q = p; q < plain->count; q++)
            assemble_pair(plain, p, q);
    solution->count = problem->count;
    solution->unknowns = unknowns;
    return charges(plain, plain->a0, solution->vacuum_capacitance, right, error) &&
           charges(plain, plain->a, solution->capacitance, right, error) &&
           section_inductance(problem->count, solution->vacuum_capacitance, solution->inductance,
                              error);
}

bool section_plain(const struct section_problem *problem, struct section_solution *solution,
                   struct error *error) {
    struct arena *arena = arena_create(error);
    if (arena == NULL)
        return false;
    struct section_solution result = {0}, rough = {0};
    struct arena_mark start = arena_mark(arena);
    bool ok = solve(problem, coarse, &rough, arena, error);
    arena_rewind(arena, start);
    ok = ok && solve(problem, fine, &result, arena, error);
    arena_free(arena);
    if (!ok)
        return false;
    result.error = section_difference(&rough, &result);
    *solution = result;
    return true;
}

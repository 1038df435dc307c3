/* The general section solver by total charge, free and bound together, on conductors and on the
 * borders of dielectrics (Wei, Harrington, Mautz, Sarkar 1984), Galerkin.
 * 1. Faces are cut into pieces with one mapped expansion each (piece.h).
 * 2. Conductors: the potential is given.  Borders: normal flux is continuous,
 *    sigma + 2 K E = 0, K = (left - right)/(left + right), E the principal value along the normal.
 * 3. Free charge is dk times total charge; on a sheet between two dielectrics
 *    (left + right)/2 sigma + (left - right) E.
 * 4. Without a plane the potential's constant is an unknown and the sum of all charge is zero.
 * 5. Energy in air, by parts over its border: potentials times fluxes; the flux through a border to
 *    a dielectric dk is dk/(dk - 1) sigma. */

#include "outline_solve.h"

#include "vector.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

static const double half_turn = 3.14159265358979323846;

enum parity { EVEN, ODD, PARITIES }; /* without symmetry all is in EVEN */

struct system {
    const struct piece_rules *rules;
    struct plane_map map;
    const struct slab_kernel *slab; /* or NULL */
    struct piece *pieces;
    size_t count, terms, unknowns, order, heads, conductors;
    bool mirrored, share;
    double *a[PARITIES];                             /* [order][order], row = equation */
    double *border[PARITIES];                        /* potential on borders of air, same rows */
    double *charge[PARITIES], *air_charge[PARITIES]; /* [heads][order] */
    double *x[PARITIES];                             /* [heads][order] */
};

static size_t parities(const struct system *s) {
    return s->mirrored ? PARITIES : 1;
}

static bool is_sheet(const struct piece *piece) {
    return piece->left != OUTLINE_METAL && piece->right != OUTLINE_METAL;
}

static bool borders_air(const struct piece *piece) {
    return piece->conductor == OUTLINE_NOBODY && (piece->left == 1 || piece->right == 1);
}

static size_t head_of(const struct system *s, size_t conductor) {
    return s->mirrored && conductor >= s->heads ? s->conductors - 1 - conductor : conductor;
}

static bool make_system(struct system *s, struct arena *arena, struct error *error) {
    s->terms = s->rules->terms;
    s->unknowns = s->count * s->terms;
    s->order = s->unknowns + (s->map.kind == PLANE_NONE ? 1 : 0);
    s->heads = s->mirrored ? (s->conductors + 1) / 2 : s->conductors;
    for (size_t p = 0; p < parities(s); p++) {
        s->a[p] = arena_take(arena, s->order * s->order, sizeof(double), error);
        s->border[p] = arena_take(arena, s->share ? s->order * s->order : 1, sizeof(double), error);
        s->charge[p] = arena_take(arena, s->heads * s->order, sizeof(double), error);
        s->air_charge[p] = arena_take(arena, s->heads * s->order, sizeof(double), error);
        s->x[p] = arena_take(arena, s->heads * s->order, sizeof(double), error);
        if (s->a[p] == NULL || s->border[p] == NULL || s->charge[p] == NULL ||
            s->air_charge[p] == NULL || s->x[p] == NULL)
            return false;
    }
    return true;
}

/* What the nodes of one piece see of all charges: [parity][node][order]. */
struct view {
    size_t nodes;
    double *potential[PARITIES], *field[PARITIES];
    bool wants_potential, wants_field;
};

static void split_parities(double *even, double *odd, const double *mirrored, size_t terms) {
    for (size_t k = 0; k < terms; k++) {
        odd[k] = even[k] - mirrored[k];
        even[k] += mirrored[k];
    }
}

static void integrate(const struct system *s, const struct piece *piece,
                      const struct piece_target *target, double *potential, double *field) {
    if (s->slab != NULL)
        piece_integrate_slab(piece, s->rules, s->slab, target, potential);
    else
        piece_integrate(piece, s->rules, &s->map, target, potential, field);
}

static void look(const struct system *s, const struct piece *piece, size_t node,
                 const struct view *view) {
    double complex z = piece_position(piece, s->rules->test.s[node]), there = -conj(z);
    struct piece_target here = {z, plane_map_at(&s->map, z), piece->normal, piece,
                                s->rules->test.s[node]};
    struct piece_target mirror = {there, plane_map_at(&s->map, there), -conj(piece->normal), NULL,
                                  0};
    double room[2 * PIECE_MOST_TERMS];
    double *potential = view->wants_potential ? room : NULL;
    double *field = view->wants_field ? room + PIECE_MOST_TERMS : NULL;
    for (size_t j = 0; j < s->count; j++) {
        size_t at = node * s->order + j * s->terms;
        integrate(s, &s->pieces[j], &here, potential != NULL ? view->potential[EVEN] + at : NULL,
                  field != NULL ? view->field[EVEN] + at : NULL);
        if (!s->mirrored)
            continue;
        integrate(s, &s->pieces[j], &mirror, potential, field);
        if (potential != NULL)
            split_parities(view->potential[EVEN] + at, view->potential[ODD] + at, potential,
                           s->terms);
        if (field != NULL)
            split_parities(view->field[EVEN] + at, view->field[ODD] + at, field, s->terms);
    }
}

/* row += sum over nodes of weight times what they see */
VECTOR_CLONES
static void add_rows(double *restrict row, const double *restrict seen, const double *weight,
                     size_t nodes, size_t order, size_t n) {
    for (size_t q = 0; q < nodes; q++)
        for (size_t j = 0; j < n; j++)
            row[j] += weight[q] * seen[q * order + j];
}

/* The free charge of a sheet on its left less that on its right comes from the field. */
static void add_sheet_field(struct system *s, const struct piece *piece, const double *speed,
                            const struct view *view) {
    size_t head = head_of(s, piece->conductor);
    double all = (piece->left - piece->right) / (2 * half_turn);
    double air = ((piece->left == 1 ? 1 : 0) - (piece->right == 1 ? 1 : 0)) / (2 * half_turn);
    double all_weight[PIECE_MOST_NODES], air_weight[PIECE_MOST_NODES];
    for (size_t q = 0; q < view->nodes; q++) {
        all_weight[q] = all * speed[q] * s->rules->test.moment[q][0];
        air_weight[q] = air * speed[q] * s->rules->test.moment[q][0];
    }
    for (size_t p = 0; p < parities(s); p++) {
        add_rows(s->charge[p] + head * s->order, view->field[p], all_weight, view->nodes, s->order,
                 s->unknowns);
        add_rows(s->air_charge[p] + head * s->order, view->field[p], air_weight, view->nodes,
                 s->order, s->unknowns);
    }
}

static void add_equations(struct system *s, size_t i, const struct view *view) {
    const struct piece *piece = &s->pieces[i];
    const struct piece_rule *test = &s->rules->test;
    bool border = piece->conductor == OUTLINE_NOBODY;
    double reflection = (piece->left - piece->right) / (piece->left + piece->right);
    double speed[PIECE_MOST_NODES], for_field[PIECE_MOST_NODES], for_potential[PIECE_MOST_NODES];
    for (size_t q = 0; q < view->nodes; q++)
        speed[q] = cabs(piece_slope(piece, test->s[q]));
    for (size_t m = 0; m < s->terms; m++) {
        size_t at = (i * s->terms + m) * s->order;
        for (size_t q = 0; q < view->nodes; q++) {
            for_field[q] = test->moment[q][m] * speed[q] * reflection / half_turn;
            for_potential[q] = -test->moment[q][m] / (2 * half_turn);
        }
        for (size_t p = 0; p < parities(s); p++) {
            if (border)
                add_rows(s->a[p] + at, view->field[p], for_field, view->nodes, s->order,
                         s->unknowns);
            if (view->wants_potential)
                add_rows((border ? s->border[p] : s->a[p]) + at, view->potential[p], for_potential,
                         view->nodes, s->order, s->unknowns);
        }
    }
    if (!border && view->wants_field)
        add_sheet_field(s, piece, speed, view);
}

static void add_piece_charge(struct system *s, size_t i) {
    const struct piece *piece = &s->pieces[i];
    if (piece->conductor == OUTLINE_NOBODY)
        return;
    double free = piece->left + piece->right;
    double air = (piece->left == 1 ? 1 : 0) + (piece->right == 1 ? 1 : 0);
    double share = is_sheet(piece) ? 0.5 : 1;
    for (size_t p = 0; p < parities(s); p++) {
        size_t at = head_of(s, piece->conductor) * s->order + i * s->terms;
        s->charge[p][at] += share * free;
        s->air_charge[p][at] += share * air;
    }
}

static bool assemble(struct system *s, struct arena *arena, struct error *error) {
    struct view view = {.nodes = s->rules->test.count};
    size_t size = view.nodes * s->order;
    double *room = arena_new(arena, 4 * size, double, error);
    if (room == NULL)
        return false;
    for (size_t p = 0; p < PARITIES; p++) {
        view.potential[p] = room + p * size;
        view.field[p] = room + (2 + p) * size;
    }
    for (size_t i = 0; i < s->count; i++) {
        const struct piece *piece = &s->pieces[i];
        bool border = piece->conductor == OUTLINE_NOBODY;
        view.wants_potential = !border || (s->share && borders_air(piece));
        view.wants_field = border || (is_sheet(piece) && piece->left != piece->right);
        for (size_t q = 0; q < view.nodes; q++)
            look(s, piece, q, &view);
        add_equations(s, i, &view);
        for (size_t p = 0; border && p < parities(s); p++)
            for (size_t m = 0; m < s->terms; m++)
                s->a[p][(i * s->terms + m) * (s->order + 1)] += 1 / (2 * (double)m + 1);
        add_piece_charge(s, i);
    }
    return true;
}

/* The constant of the potential and the sum of all charges; odd potentials have no constant. */
static void close_free_space(struct system *s) {
    for (size_t p = 0; p < parities(s); p++) {
        double *a = s->a[p];
        size_t last = s->unknowns;
        if (p == ODD) {
            a[last * s->order + last] = 1;
            continue;
        }
        for (size_t i = 0; i < s->count; i++) {
            size_t n = i * s->terms;
            a[last * s->order + n] = 1;
            if (s->pieces[i].conductor != OUTLINE_NOBODY)
                a[n * s->order + last] = 1;
            else if (s->share)
                s->border[p][n * s->order + last] = 1;
        }
    }
}

static bool solve_parity(struct system *s, size_t p, lapack_int *pivots, struct error *error) {
    for (size_t i = 0; i < s->count; i++)
        if (s->pieces[i].conductor != OUTLINE_NOBODY)
            s->x[p][head_of(s, s->pieces[i].conductor) * s->order + i * s->terms] = 1;
    lapack_int n = (lapack_int)s->order;
    /* Row-major is the transpose of column-major. */
    if (LAPACKE_dgetrf_work(LAPACK_COL_MAJOR, n, n, s->a[p], n, pivots) != 0 ||
        LAPACKE_dgetrs_work(LAPACK_COL_MAJOR, 'T', n, (lapack_int)s->heads, s->a[p], n, pivots,
                            s->x[p], n) != 0)
        return error_set(error, ERROR_SINGULAR, "section: system of %zu unknowns is singular",
                         s->order);
    return true;
}

static double dot(const double *one, const double *other, size_t n) {
    double sum = 0;
    for (size_t i = 0; i < n; i++)
        sum += one[i] * other[i];
    return sum;
}

/* part[i * heads + j]: charge of head i, over the half that is there, for potentials of mode j. */
static void charges(const struct system *s, size_t p, double *part) {
    for (size_t i = 0; i < s->heads; i++)
        for (size_t j = 0; j < s->heads; j++)
            part[i * s->heads + j] =
                dot(s->charge[p] + i * s->order, s->x[p] + j * s->order, s->order);
}

static void air_energies(const struct system *s, size_t p, double *part) {
    for (size_t i = 0; i < s->heads; i++)
        for (size_t j = 0; j < s->heads; j++) {
            const double *xi = s->x[p] + i * s->order, *xj = s->x[p] + j * s->order;
            double sum = dot(s->air_charge[p] + i * s->order, xj, s->order);
            for (size_t k = 0; k < s->count; k++) {
                const struct piece *piece = &s->pieces[k];
                if (!borders_air(piece))
                    continue;
                double dk = piece->left == 1 ? piece->right : piece->left;
                for (size_t m = k * s->terms; m < (k + 1) * s->terms; m++)
                    sum += dk / (dk - 1) * xj[m] * dot(s->border[p] + m * s->order, xi, s->order);
            }
            part[i * s->heads + j] = sum;
        }
}

/* From charges of even and odd modes to conductors.  Of a conductor in the middle there is half. */
static void unpack(const struct system *s, double *const part[PARITIES], double *matrix) {
    size_t n = s->conductors, h = s->heads;
    for (size_t i = 0; i < h; i++)
        for (size_t j = 0; j < h; j++) {
            double even = SECTION_EPSILON_0 * 0.5 * (part[EVEN][i * h + j] + part[EVEN][j * h + i]);
            if (!s->mirrored) {
                matrix[i * n + j] = even;
                continue;
            }
            double odd = SECTION_EPSILON_0 * 0.5 * (part[ODD][i * h + j] + part[ODD][j * h + i]);
            size_t mi = n - 1 - i, mj = n - 1 - j;
            bool one = mi == i, two = mj == j;
            double same = one && two ? 2 * even : one || two ? even : 0.5 * (even + odd);
            double across = one || two ? same : 0.5 * (even - odd);
            matrix[i * n + j] = matrix[mi * n + mj] = same;
            matrix[i * n + mj] = matrix[mi * n + j] = across;
        }
}

static bool solve(struct system *s, struct arena *arena, struct outline_solution *solution,
                  struct error *error) {
    double room[2 * PARITIES][SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    lapack_int *pivots = arena_new(arena, s->order, lapack_int, error);
    if (pivots == NULL)
        return false;
    for (size_t p = 0; p < parities(s); p++) {
        if (!solve_parity(s, p, pivots, error))
            return false;
        charges(s, p, room[p]);
        if (s->share)
            air_energies(s, p, room[PARITIES + p]);
    }
    unpack(s, (double *const[]){room[EVEN], room[ODD]}, solution->capacitance);
    if (s->share)
        unpack(s, (double *const[]){room[PARITIES + EVEN], room[PARITIES + ODD]},
               solution->air_share);
    solution->unknowns = parities(s) * s->order;
    return true;
}

bool outline_solve(const struct outline *outline, bool mirrored, bool share,
                   const struct slab_kernel *slab, const struct piece_effort *effort,
                   struct outline_solution *solution, struct error *error) {
    struct arena *arena = arena_create(error);
    struct piece_rules *rules =
        arena == NULL ? NULL : arena_new(arena, 1, struct piece_rules, error);
    struct outline *half =
        rules == NULL || !mirrored ? NULL : arena_new(arena, 1, struct outline, error);
    bool ok = rules != NULL && (!mirrored || half != NULL);
    if (ok) {
        struct system s = {.rules = rules,
                           .map = outline->map,
                           .conductors = outline->conductors,
                           .mirrored = mirrored,
                           .slab = slab,
                           .share = share};
        piece_rules_make(effort, rules);
        if (mirrored)
            outline_left_half(outline, half);
        s.pieces = piece_cut(mirrored ? half : outline, effort, rules, &s.count, arena, error);
        ok = s.pieces != NULL && make_system(&s, arena, error) && assemble(&s, arena, error);
        if (ok && s.map.kind == PLANE_NONE)
            close_free_space(&s);
        ok = ok && solve(&s, arena, solution, error);
    }
    arena_free(arena);
    return ok;
}

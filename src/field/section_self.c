/* A rectangle's interaction with itself.
 * 1. Outright: the face functions are projected on graded Legendre panels (moments of every panel
 *    kept up to degree 5), whose exact interactions come from panel.h; S = B' A B is then a
 * Galerkin matrix of trial functions that differ from the face functions by next to nothing.
 * 2. Tables: with lengths in widths and the term ln(width) on charges taken out, the entries depend
 *    on thickness/width and the foot's corner only: Chebyshev interpolation in ln(thickness/width).
 */

#include "section_self.h"

#include "keep.h"
#include "panel.h"
#include "quadrature.h"

#include <math.h>
#include <string.h>

enum { FACES = 4, HALF_PANELS = 10, FACE_PANELS = 2 * HALF_PANELS, TERMS = PANEL_MOST_TERMS };
enum { PANELS = FACES * FACE_PANELS, PROJECTION_NODES = 16 };
enum { OWN = SECTION_MOST_OWN, COEFFICIENTS = 10, RANGES = 5 };

/* s = sin^2(theta/2): equal steps resolve the highest polynomials, the first ones the corner. */
static const double theta[HALF_PANELS + 1] = {
    0, 0.01, 0.03, 0.08, 0.2, 0.4, 0.63, 0.86, 1.1, 1.33, 1.57079632679489662};
static const double range_end[RANGES + 1] = {1e-4, 2e-3, 2e-2, 0.1, 0.35, 1.25};

struct own_matrices {
    double direct[OWN * OWN];
    double mirrored[OWN * OWN];
};

struct table {
    double middle, half;                                      /* of ln(thickness/width) */
    double coefficient[OWN * (OWN + 1) / 2][2][COEFFICIENTS]; /* packed upper rows */
};

/* Where functions of a face start among those of the largest conductor. */
static size_t face_start(size_t face) {
    static const size_t start[FACES] = {0, FACE_MOST_TERMS, 2 * FACE_MOST_TERMS,
                                        2 * FACE_MOST_TERMS + SECTION_MOST_UPRIGHT};
    return start[face];
}

static size_t face_terms(size_t face) {
    return face < 2 ? FACE_MOST_TERMS : SECTION_MOST_UPRIGHT;
}

struct workspace {
    size_t faces;
    struct panel_rules rules;
    struct panel panels[PANELS];
    double projection[PANELS][FACE_MOST_TERMS][TERMS];
    double half_way[FACE_MOST_TERMS][TERMS];
};

static double break_at(size_t i) {
    double half = i <= HALF_PANELS ? theta[i] : theta[FACE_PANELS - i];
    double s = sin(0.5 * half) * sin(0.5 * half);
    return i <= HALF_PANELS ? s : 1 - s;
}

/* s at a place x of the face, by bisection. */
static double parameter_at(enum face_kind kind, size_t corner, double x) {
    double low = 0, high = 1;
    for (int round = 0; round < 60; round++) {
        double middle = 0.5 * (low + high);
        *(face_position(kind, corner, middle) < x ? &low : &high) = middle;
    }
    return x <= 0 ? 0 : x >= 1 ? 1 : high;
}

static void project(enum face_kind kind, size_t corner, double s0, double s1, double x0, double x1,
                    double (*projection)[TERMS]) {
    double t[PROJECTION_NODES], weight[PROJECTION_NODES];
    double p[FACE_MOST_TERMS], legendre[TERMS];
    quadrature_gauss(PROJECTION_NODES, t, weight);
    memset(projection, 0, FACE_MOST_TERMS * sizeof *projection);
    for (size_t a = 0; a < PROJECTION_NODES; a++) {
        double s = 0.5 * (s0 + s1 + (s1 - s0) * t[a]);
        double x = face_position(kind, corner, s);
        quadrature_legendre(FACE_MOST_TERMS, 2 * s - 1, p);
        quadrature_legendre(TERMS, (2 * x - x0 - x1) / (x1 - x0), legendre);
        for (size_t k = 0; k < FACE_MOST_TERMS; k++)
            for (size_t m = 0; m < TERMS; m++)
                projection[k][m] +=
                    (2 * (double)m + 1) * 0.5 * (s1 - s0) * weight[a] * p[k] * legendre[m];
    }
}

static void make_panels(struct workspace *work, double thickness, size_t corner) {
    work->faces = thickness > 0 ? FACES : 1;
    for (size_t f = 0; f < work->faces; f++) {
        enum face_kind kind = f < 2 ? FACE_LEVEL : FACE_UPRIGHT;
        size_t end = f == 1 ? FACE_AIR_CORNER : corner;
        for (size_t i = 0; i < FACE_PANELS; i++) {
            size_t p = f * FACE_PANELS + i;
            /* Foot and top break at the same places: where a thin trace's foot panel ends, the
             * potential on its top has a kink, which must not fall inside a panel. */
            double x0 = face_position(FACE_LEVEL, FACE_AIR_CORNER, break_at(i));
            double x1 = face_position(FACE_LEVEL, FACE_AIR_CORNER, break_at(i + 1));
            double s0 = parameter_at(kind, end, x0), s1 = parameter_at(kind, end, x1);
            struct panel *panel = &work->panels[p];
            panel->upright = kind == FACE_UPRIGHT;
            double middle = 0.5 * (x0 + x1), length = panel->upright ? thickness : 1;
            panel->half = 0.5 * (x1 - x0) * length;
            panel->x = panel->upright ? (f == 2 ? 0 : 1) : middle;
            panel->y = panel->upright ? middle * thickness : (f == 1 ? thickness : 0);
            project(kind, end, s0, s1, x0, x1, work->projection[p]);
        }
    }
}

static void add_projected(struct workspace *work, size_t p, size_t q, const double *block,
                          double *own) {
    size_t f = p / FACE_PANELS, g = q / FACE_PANELS;
    for (size_t l = 0; l < face_terms(g); l++)
        for (size_t m = 0; m < TERMS; m++) {
            double sum = 0;
            for (size_t n = 0; n < TERMS; n++)
                sum += block[m * TERMS + n] * work->projection[q][l][n];
            work->half_way[l][m] = sum;
        }
    for (size_t k = 0; k < face_terms(f); k++)
        for (size_t l = 0; l < face_terms(g); l++) {
            double sum = 0;
            for (size_t m = 0; m < TERMS; m++)
                sum += work->projection[p][k][m] * work->half_way[l][m];
            size_t i = face_start(f) + k, j = face_start(g) + l;
            own[i * OWN + j] += sum;
            if (p != q)
                own[j * OWN + i] += sum;
        }
}

/* Width 1. */
static bool outright(double thickness, size_t corner, struct own_matrices *own, struct arena *arena,
                     struct error *error) {
    struct workspace *work = arena_new(arena, 1, struct workspace, error);
    if (work == NULL)
        return false;
    panel_rules_make(&work->rules);
    make_panels(work, thickness, corner);
    memset(own, 0, sizeof *own);
    struct panel_image straight = {false, 0}, mirror = {true, 0};
    size_t panels = work->faces * FACE_PANELS;
    for (size_t p = 0; p < panels; p++)
        for (size_t q = p; q < panels; q++) {
            double direct[TERMS * TERMS] = {0}, mirrored[TERMS * TERMS] = {0};
            const struct panel *target = &work->panels[p], *source = &work->panels[q];
            panel_add_logarithm(&work->rules, target, source, straight, TERMS, 1.0, direct);
            panel_add_logarithm(&work->rules, target, source, mirror, TERMS, 1.0, mirrored);
            add_projected(work, p, q, direct, own->direct);
            add_projected(work, p, q, mirrored, own->mirrored);
        }
    return true;
}

static size_t packed(size_t i, size_t j) {
    return i * OWN - i * (i + 1) / 2 + j;
}

struct table_key {
    size_t corner, range;
};

static void add_chebyshev(struct table *table, size_t node, const struct own_matrices *own) {
    for (size_t j = 0; j < COEFFICIENTS; j++) {
        double angle = 3.14159265358979323846 * ((double)node + 0.5) / COEFFICIENTS;
        double factor = (j == 0 ? 1.0 : 2.0) / COEFFICIENTS * cos((double)j * angle);
        for (size_t m = 0; m < OWN; m++)
            for (size_t n = m; n < OWN; n++) {
                double(*c)[COEFFICIENTS] = table->coefficient[packed(m, n)];
                c[0][j] += factor * own->direct[m * OWN + n];
                c[1][j] += factor * own->mirrored[m * OWN + n];
            }
    }
}

static bool fill_table(const struct table_key *key, struct table *table, struct arena *arena,
                       struct error *error) {
    struct own_matrices *own = arena_new(arena, 1, struct own_matrices, error);
    if (own == NULL)
        return false;
    double low = log(range_end[key->range]), high = log(range_end[key->range + 1]);
    table->middle = 0.5 * (low + high);
    table->half = 0.5 * (high - low);
    for (size_t node = 0; node < COEFFICIENTS; node++) {
        double angle = 3.14159265358979323846 * ((double)node + 0.5) / COEFFICIENTS;
        struct arena_mark mark = arena_mark(arena);
        if (!outright(exp(table->middle + table->half * cos(angle)), key->corner, own, arena,
                      error))
            return false;
        arena_rewind(arena, mark);
        add_chebyshev(table, node, own);
    }
    return true;
}

static void *make_table(const void *data, struct arena *arena, struct error *error) {
    struct table *table = arena_new(arena, 1, struct table, error);
    struct arena *scratch = table == NULL ? NULL : arena_create(error);
    bool ok = scratch != NULL && fill_table(data, table, scratch, error);
    arena_free(scratch);
    return ok ? table : NULL;
}

static void *make_sheet(const void *data, struct arena *arena, struct error *error) {
    (void)data;
    struct own_matrices *own = arena_new(arena, 1, struct own_matrices, error);
    struct arena *scratch = own == NULL ? NULL : arena_create(error);
    bool ok = scratch != NULL && outright(0, FACE_SHEET_EDGE, own, scratch, error);
    arena_free(scratch);
    return ok ? own : NULL;
}

/* The k-th function of a conductor with fewer terms, among those of the largest. */
static size_t place(struct section_terms terms, size_t k) {
    for (size_t f = 0; f < FACES; f++) {
        size_t count = f < 2 ? terms.level : terms.upright;
        if (k < count)
            return face_start(f) + k;
        k -= count;
    }
    return 0;
}

static bool is_charge(size_t place) {
    return place == face_start(0) || place == face_start(1) || place == face_start(2) ||
           place == face_start(3);
}

static void from_table(const struct table *table, double u, const size_t *at, size_t n,
                       double direct, double mirrored, double *own) {
    double chebyshev[2][COEFFICIENTS];
    double now = 1, next = u;
    for (size_t j = 0; j < COEFFICIENTS; j++) {
        chebyshev[0][j] = direct * now;
        chebyshev[1][j] = mirrored * now;
        double after = 2 * u * next - now;
        now = next;
        next = after;
    }
    for (size_t i = 0; i < n; i++)
        for (size_t j = i; j < n; j++) {
            const double(*c)[COEFFICIENTS] = table->coefficient[packed(at[i], at[j])];
            double sum = 0;
            for (size_t k = 0; k < COEFFICIENTS; k++)
                sum += c[0][k] * chebyshev[0][k] + c[1][k] * chebyshev[1][k];
            own[i * n + j] += sum;
            if (j > i)
                own[j * n + i] += sum;
        }
}

static void from_matrices(const struct own_matrices *matrices, const size_t *at, size_t n,
                          double direct, double mirrored, double *own) {
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++) {
            size_t k = at[i] * OWN + at[j];
            own[i * n + j] += direct * matrices->direct[k] + mirrored * matrices->mirrored[k];
        }
}

static bool outside_tables(double ratio, size_t corner, const size_t *at, size_t n, double direct,
                           double mirrored, double *own, struct error *error) {
    struct arena *scratch = arena_create(error);
    if (scratch == NULL)
        return false;
    struct own_matrices *matrices = arena_new(scratch, 1, struct own_matrices, error);
    bool ok = matrices != NULL && outright(ratio, corner, matrices, scratch, error);
    if (ok)
        from_matrices(matrices, at, n, direct, mirrored, own);
    arena_free(scratch);
    return ok;
}

bool section_self(double width, double thickness, size_t corner, struct section_terms terms,
                  double direct, double mirrored, double *own, struct error *error) {
    static void *_Atomic tables[FACE_CORNERS][RANGES];
    static void *_Atomic sheet;
    size_t n = section_own(terms), at[OWN], range = 0;
    for (size_t k = 0; k < n; k++)
        at[k] = place(terms, k);
    double ratio = thickness / width;
    while (range < RANGES && ratio > range_end[range + 1])
        range++;
    if (thickness == 0) {
        const struct own_matrices *matrices = keep_get(&sheet, make_sheet, NULL, error);
        if (matrices == NULL)
            return false;
        from_matrices(matrices, at, n, direct, mirrored, own);
    } else if (ratio < range_end[0] || range == RANGES) {
        if (!outside_tables(ratio, corner, at, n, direct, mirrored, own, error))
            return false;
    } else {
        struct table_key key = {corner, range};
        const struct table *table = keep_get(&tables[corner][range], make_table, &key, error);
        if (table == NULL)
            return false;
        from_table(table, (log(ratio) - table->middle) / table->half, at, n, direct, mirrored, own);
    }
    double scale = log(width) * (direct + mirrored);
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++)
            if (is_charge(at[i]) && is_charge(at[j]))
                own[i * n + j] += scale;
    return true;
}

/* Groups of equal upright barrels: net currents and azimuthal harmonics of each; the harmonics see
 * no voltage and are eliminated. */
#include "barrels.h"

#include "dense.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Blocks of the distances met so far: rows, rings and grids have few. */
struct blocks {
    size_t orders, count;
    double *distance;
    double *cosine, *sine; /* [count][orders * orders] */
};

/* Two circles: images at ratio exp(-arcosh(D/d)); the energy has its square. */
double inductance_barrel_convergence(double diameter, double spacing) {
    return exp(-2.0 * acosh(fmax(spacing / diameter, 1.0 + 1e-6)));
}

size_t inductance_barrel_harmonics(double diameter, double spacing) {
    double order = ceil(-7.4 / log(inductance_barrel_convergence(diameter, spacing)));
    return (size_t)fmin(order, INDUCTANCE_MOST_HARMONICS);
}

static const double *block_at(struct blocks *blocks, const struct barrel_kernel *kernel,
                              double radius, double distance) {
    size_t size = blocks->orders * blocks->orders;
    for (size_t i = 0; i < blocks->count; i++)
        if (fabs(blocks->distance[i] - distance) <= 1e-12 * distance)
            return blocks->cosine + i * size;
    double *cosine = blocks->cosine + blocks->count * size;
    blocks->distance[blocks->count] = distance;
    barrel_pair(kernel, radius, distance, blocks->orders, cosine,
                blocks->sine + blocks->count++ * size);
    return cosine;
}

/* Where harmonic `m`, cosine or sine, of barrel `i` stands: low harmonics of all barrels first, net
 * currents last, so that a leading part of the elimination is that of fewer harmonics. */
static size_t place(const struct inductance_barrels *barrels, size_t i, size_t m, bool sine) {
    if (m == 0)
        return 2 * barrels->count * barrels->harmonics + i;
    return ((m - 1) * barrels->count + i) * 2 + (sine ? 1 : 0);
}

struct system {
    size_t rows, width; /* harmonics; with the net currents */
    double *a;          /* width * width */
};

static void put(struct system *system, size_t i, size_t j, double value) {
    system->a[i * system->width + j] = system->a[j * system->width + i] = value;
}

static void put_pair(struct system *system, const struct inductance_barrels *barrels, size_t i,
                     size_t j, const double *cosine, const double *sine) {
    size_t orders = barrels->harmonics + 1;
    double turn = atan2(barrels->y[j] - barrels->y[i], barrels->x[j] - barrels->x[i]);
    double c[BARREL_ORDERS], s[BARREL_ORDERS];
    for (size_t m = 0; m < orders; m++) {
        c[m] = cos((double)m * turn);
        s[m] = sin((double)m * turn);
    }
    for (size_t m = 0; m < orders; m++)
        for (size_t n = 0; n < orders; n++) {
            double even = cosine[m * orders + n], odd = sine[m * orders + n];
            size_t row = place(barrels, i, m, false), column = place(barrels, j, n, false);
            put(system, row, column, c[m] * c[n] * even + s[m] * s[n] * odd);
            if (n > 0)
                put(system, row, column + 1, c[m] * s[n] * even - s[m] * c[n] * odd);
            if (m > 0)
                put(system, row + 1, column, s[m] * c[n] * even - c[m] * s[n] * odd);
            if (m > 0 && n > 0)
                put(system, row + 1, column + 1, s[m] * s[n] * even + c[m] * c[n] * odd);
        }
}

static void assemble(struct system *system, const struct inductance_barrels *barrels,
                     const struct barrel_kernel *kernel, struct blocks *blocks) {
    double self[BARREL_ORDERS], radius = barrels->diameter / 2.0;
    barrel_self(kernel, radius, blocks->orders, self);
    for (size_t i = 0; i < barrels->count; i++) {
        for (size_t m = 0; m < blocks->orders; m++)
            for (size_t part = 0; part < (m > 0 ? 2 : 1); part++) {
                size_t at = place(barrels, i, m, part == 1);
                put(system, at, at, self[m]);
            }
        for (size_t j = i + 1; j < barrels->count; j++) {
            double distance = hypot(barrels->x[j] - barrels->x[i], barrels->y[j] - barrels->y[i]);
            const double *cosine = block_at(blocks, kernel, radius, distance);
            put_pair(system, barrels, i, j, cosine, blocks->sine + (cosine - blocks->cosine));
        }
    }
}

/* What is left for the net currents once so many harmonics have found their size. */
static void reduce(const struct system *system, const struct inductance_barrels *barrels,
                   size_t harmonics, double factor, double *matrix) {
    size_t n = barrels->count, rows = 2 * n * harmonics;
    for (size_t i = 0; matrix != NULL && i < n; i++)
        for (size_t j = i; j < n; j++) {
            double value = system->a[(system->rows + i) * system->width + system->rows + j];
            for (size_t k = 0; k < rows; k++)
                value -= system->a[k * system->width + system->rows + i] *
                         system->a[k * system->width + system->rows + j];
            matrix[i * n + j] = matrix[j * n + i] = factor * INDUCTANCE_MU_0 / (2.0 * M_PI) * value;
        }
}

static bool check(const struct inductance_barrels *barrels, struct error *error) {
    if (barrels->count == 0 || barrels->harmonics > INDUCTANCE_MOST_HARMONICS)
        return error_set(error, ERROR_INPUT, "a group needs barrels and at most %d harmonics",
                         INDUCTANCE_MOST_HARMONICS);
    if (!(barrels->height > 0.0 && barrels->diameter > 0.0))
        return error_set(error, ERROR_INPUT, "barrels need a height and a diameter above 0");
    for (size_t i = 0; i < barrels->count; i++)
        for (size_t j = 0; j < i; j++)
            if (!(hypot(barrels->x[i] - barrels->x[j], barrels->y[i] - barrels->y[j]) >
                  1.001 * barrels->diameter))
                return error_set(error, ERROR_INPUT, "barrels %zu and %zu touch or overlap", j, i);
    return true;
}

/* Only currents that sum to zero matter between planes, but the matrix must be positive definite:
 * the reference is well beyond the group. */
static double reference_of(const struct inductance_barrels *barrels) {
    double extent = barrels->diameter;
    for (size_t i = 1; i < barrels->count; i++)
        extent = fmax(extent, hypot(barrels->x[i] - barrels->x[0], barrels->y[i] - barrels->y[0]));
    return 10.0 * extent;
}

bool inductance_barrels_solve(const struct inductance_barrels *barrels, double *matrix,
                              double *coarser, double *even, struct error *error) {
    if (!check(barrels, error))
        return false;
    size_t n = barrels->count, orders = barrels->harmonics + 1, pairs = n * (n - 1) / 2 + 1;
    struct system system = {.rows = 2 * n * barrels->harmonics};
    system.width = system.rows + n;
    size_t size = system.width * system.width;
    double *memory = calloc(size + pairs * (1 + 2 * orders * orders), sizeof *memory);
    if (memory == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    system.a = memory;
    struct blocks blocks = {.orders = orders, .distance = memory + size};
    blocks.cosine = blocks.distance + pairs;
    blocks.sine = blocks.cosine + pairs * orders * orders;
    struct barrel_kernel kernel =
        barrel_kernel(barrels->height, barrels->ends, reference_of(barrels));
    assemble(&system, barrels, &kernel, &blocks);
    size_t harmonics = barrels->harmonics;
    bool ok = harmonics == 0 || dense_eliminate(system.rows, n, system.width, system.a, NULL);
    if (ok) {
        reduce(&system, barrels, harmonics, kernel.factor, matrix);
        reduce(&system, barrels, harmonics > 2 ? harmonics - 2 : harmonics / 2, kernel.factor,
               coarser);
        reduce(&system, barrels, 0, kernel.factor, even);
    } else {
        error_set(error, ERROR_SINGULAR, "the currents around the barrels have no solution");
    }
    free(memory);
    return ok;
}

#include "coupled_set.h"

#include <math.h>
#include <string.h>

/* share[trace][combination] */
struct combinations {
    size_t count;
    double share[COUPLED_MOST][COUPLED_MOST];
};

static struct combinations combinations_of(const struct coupled_set *set) {
    struct combinations made = {.count = set->count};
    if (!set->mirrored || set->count == 2) {
        for (size_t i = 0; i < set->count; i++)
            made.share[i][i] = 1.0;
        return made;
    }
    made.count = (set->count + 1) / 2;
    made.share[0][0] = made.share[2][0] = sqrt(0.5);
    made.share[COUPLED_VICTIM][COUPLED_VICTIM] = 1.0;
    made.share[3][2] = made.share[4][2] = sqrt(0.5);
    return made;
}

/* Q' M Q */
static void transform(const struct combinations *combinations, size_t traces, const double *matrix,
                      double *folded) {
    size_t count = combinations->count;
    for (size_t a = 0; a < count; a++)
        for (size_t b = 0; b < count; b++) {
            double sum = 0.0;
            for (size_t i = 0; i < traces; i++)
                for (size_t j = 0; j < traces; j++)
                    sum += combinations->share[i][a] * matrix[i * traces + j] *
                           combinations->share[j][b];
            folded[a * count + b] = sum;
        }
}

struct coupled_fold coupled_fold(const struct coupled_set *set) {
    struct combinations combinations = combinations_of(set);
    struct coupled_fold fold = {
        .count = combinations.count, .df = set->df, .material_frequency = set->material_frequency};
    transform(&combinations, set->count, set->inductance, fold.inductance);
    transform(&combinations, set->count, set->capacitance, fold.capacitance);
    transform(&combinations, set->count, set->dc_resistance, fold.dc_resistance);
    transform(&combinations, set->count, set->skin_resistance, fold.skin_resistance);
    transform(&combinations, set->count, set->dielectric_capacitance, fold.dielectric_capacitance);
    for (size_t a = 0; a < fold.count; a++)
        for (size_t i = 0; i < set->count && a != COUPLED_VICTIM; i++)
            fold.emf[a] += combinations.share[i][a];
    return fold;
}

struct line_problem coupled_fold_line(const struct coupled_fold *fold, double length) {
    struct line_problem problem;
    memset(&problem, 0, sizeof problem); /* the worker compares bytes */
    problem.count = fold->count;
    problem.length = length;
    size_t bytes = fold->count * fold->count * sizeof *problem.inductance;
    memcpy(problem.inductance, fold->inductance, bytes);
    memcpy(problem.capacitance, fold->capacitance, bytes);
    memcpy(problem.dc_resistance, fold->dc_resistance, bytes);
    memcpy(problem.skin_resistance, fold->skin_resistance, bytes);
    memcpy(problem.dielectric_capacitance, fold->dielectric_capacitance, bytes);
    problem.df = fold->df;
    problem.material_frequency = fold->material_frequency;
    return problem;
}

bool coupled_fold_impedances(const struct coupled_fold *fold, double *even, double *odd,
                             struct error *error) {
    struct line_problem problem = coupled_fold_line(fold, 1.0);
    struct line_modes modes;
    if (!line_modes(&problem, &modes, error))
        return false;
    const double *row = modes.characteristic_admittance + COUPLED_VICTIM * fold->count;
    double others = 0.0;
    for (size_t a = 0; a < fold->count; a++)
        if (a != COUPLED_VICTIM)
            others += fold->emf[a] * row[a];
    *even = 1.0 / (row[COUPLED_VICTIM] + others);
    *odd = 1.0 / (row[COUPLED_VICTIM] - others);
    return true;
}

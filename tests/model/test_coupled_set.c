/* A victim among two and four aggressors, below the models: the reduction of mirrored sets, several
 * drivers, and independent switching. */
#include "check.h"
#include "coupled_response.h"
#include "worker.h"

#include <stdlib.h>
#include <string.h>

/* Thin strips as wide as the plane is deep, dk 4.3: image series of the grounded slab (Silvester
 * 1968) with an edge-singular basis, converged to 1e-7; from left to right, pF/m and nH/m. */
static const double three_c[] = {83.102996,  -8.4645196,  -0.66375376, -8.4645196, 84.225799,
                                 -8.4645196, -0.66375376, -8.4645196,  83.102996};
static const double three_l[] = {419.48182, 75.68844,  25.166192, 75.68844, 417.48897,
                                 75.68844,  25.166192, 75.68844,  419.48182};
static const double five_c[] = {86.462599,   -16.723573,  -0.90664229, -0.33947008, -0.21460022,
                                -16.723573,  90.867453,   -16.533131,  -0.84298208, -0.33947008,
                                -0.90664229, -16.533131,  90.875872,   -16.533131,  -0.90664229,
                                -0.33947008, -0.84298208, -16.533131,  90.867453,   -16.723573,
                                -0.21460022, -0.33947008, -0.90664229, -16.723573,  86.462599};
static const double five_l[] = {414.05265, 114.44149, 44.714887, 21.680984, 12.410981,
                                114.44149, 407.36142, 112.53619, 44.090461, 21.680984,
                                44.714887, 112.53619, 406.87646, 112.53619, 44.714887,
                                21.680984, 44.090461, 112.53619, 407.36142, 114.44149,
                                12.410981, 21.680984, 44.714887, 114.44149, 414.05265};

static struct coupled_set set_of(size_t count, bool mirrored) {
    static const size_t three[] = {0, 1, 2}, five[] = {1, 2, 3, 0, 4};
    const size_t *order = count == 3 ? three : five;
    struct coupled_set set = {.count = count, .mirrored = mirrored};
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < count; j++) {
            size_t from = order[i] * count + order[j], to = i * count + j;
            set.inductance[to] = 1e-9 * (count == 3 ? three_l[from] : five_l[from]);
            set.capacitance[to] = 1e-12 * (count == 3 ? three_c[from] : five_c[from]);
        }
    return set;
}

static struct coupled_drive drive_of(bool logic) {
    struct coupled_drive drive = {.length = 0.1,
                                  .swing = 1,
                                  .edge = 1e-9,
                                  .bit_time = 5e-9,
                                  .settling = 3e-9,
                                  .source = 30,
                                  .load = 70,
                                  .victim_source = 40,
                                  .victim_load = 90};
    if (logic) {
        drive.load = drive.victim_load = INFINITY;
        drive.load_capacitance = 5e-12;
        drive.victim_load_capacitance = 3e-12;
    }
    return drive;
}

static void respond(const struct coupled_set *set, const struct coupled_drive *drive,
                    double *outputs) {
    double errors[COUPLED_OUTPUT_COUNT];
    struct error error = {0};
    struct model_worker *worker = model_worker_create(&error);
    assert_ok(worker != NULL);
    assert_ok(coupled_respond(set, drive, worker, outputs, errors, &error));
    for (size_t i = 0; i < COUPLED_OUTPUT_COUNT; i++)
        assert_true(isfinite(errors[i]) && errors[i] >= 0);
    model_worker_free(worker);
}

/* Every output: the set with its mirror used, and all of its traces followed. */
static void test_the_reduction_of_a_mirrored_set_loses_nothing(void **state) {
    (void)state;
    for (size_t count = 3; count <= 5; count += 2)
        for (int variant = 0; variant < 8; variant++) {
            struct coupled_set mirrored = set_of(count, true), full = set_of(count, false);
            struct coupled_drive drive = drive_of((variant & 1) != 0);
            drive.independent = (variant & 2) != 0;
            drive.receiver_near = (variant & 4) != 0;
            double reduced[COUPLED_OUTPUT_COUNT], all[COUPLED_OUTPUT_COUNT];
            respond(&mirrored, &drive, reduced);
            respond(&full, &drive, all);
            for (size_t i = 0; i < COUPLED_OUTPUT_COUNT; i++)
                if (fabs(all[i]) > 0)
                    assert_close(reduced[i], all[i], (variant & 1) != 0 ? 1e-3 : 1e-5);
        }
}

/* An oracle that shares nothing with the line solver: leapfrog in space and time on staggered grids
 * (Yee 1966 for lines), all conductors as they are, ends by the trapezoidal rule; second order. */
enum { CELLS = 500, TRACES = COUPLED_MOST };

static bool invert(const double *matrix, size_t n, double *inverse) {
    double work[TRACES][2 * TRACES] = {{0}};
    for (size_t i = 0; i < n; i++) {
        memcpy(work[i], matrix + i * n, n * sizeof(double));
        work[i][n + i] = 1;
    }
    for (size_t c = 0; c < n; c++) {
        double pivot = work[c][c];
        if (pivot == 0)
            return false;
        for (size_t j = 0; j < 2 * n; j++)
            work[c][j] /= pivot;
        for (size_t i = 0; i < n; i++) {
            double factor = work[i][c];
            for (size_t j = 0; j < 2 * n && i != c; j++)
                work[i][j] -= factor * work[c][j];
        }
    }
    for (size_t i = 0; i < n; i++)
        memcpy(inverse + i * n, work[i] + n, n * sizeof(double));
    return true;
}

struct leapfrog_end {
    double keep[TRACES * TRACES], gain[TRACES * TRACES]; /* V' = keep V + gain current */
};

/* Half a cell of line, the end's capacitance and conductance. */
static struct leapfrog_end end_of(const struct coupled_set *set, double cell, double step,
                                  const double *conductance, const double *capacitance) {
    struct leapfrog_end end;
    size_t n = set->count;
    double left[TRACES * TRACES] = {0}, right[TRACES * TRACES] = {0}, inverse[TRACES * TRACES];
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++) {
            double c = set->capacitance[i * n + j] * cell / 2 + (i == j ? capacitance[i] : 0);
            double g = i == j ? conductance[i] / 2 : 0;
            left[i * n + j] = c / step + g;
            right[i * n + j] = c / step - g;
        }
    assert_true(invert(left, n, inverse));
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++) {
            end.keep[i * n + j] = 0;
            end.gain[i * n + j] = inverse[i * n + j];
            for (size_t k = 0; k < n; k++)
                end.keep[i * n + j] += inverse[i * n + k] * right[k * n + j];
        }
    return end;
}

static void advance_end(const struct leapfrog_end *end, size_t n, const double *current,
                        double *voltage) {
    double next[TRACES] = {0};
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++)
            next[i] += end->keep[i * n + j] * voltage[j] + end->gain[i * n + j] * current[j];
    memcpy(voltage, next, n * sizeof *next);
}

struct leapfrog_setup {
    double near_conductance[TRACES], far_conductance[TRACES];
    double near_capacitance[TRACES], far_capacitance[TRACES];
};

static struct leapfrog_setup setup_of(const struct coupled_drive *drive) {
    struct leapfrog_setup setup = {0};
    for (size_t i = 0; i < TRACES; i++) {
        bool victim = i == COUPLED_VICTIM;
        setup.near_conductance[i] = 1 / (victim ? drive->victim_source : drive->source);
        setup.far_conductance[i] = 1 / (victim ? drive->victim_load : drive->load);
        setup.far_capacitance[i] =
            victim ? drive->victim_load_capacitance : drive->load_capacitance;
    }
    return setup;
}

/* Largest voltages of the victim, all aggressors driven; `cells` up to CELLS. */
static void leapfrog_peaks(const struct coupled_set *set, const struct coupled_drive *drive,
                           size_t cells, double *near, double *far) {
    static double voltage[CELLS + 1][TRACES], current[CELLS][TRACES];
    size_t n = set->count;
    double cell = drive->length / (double)cells,
           step = cell * 3.2e-9; /* under the fastest mode's delay */
    double inverse_l[TRACES * TRACES], inverse_c[TRACES * TRACES];
    struct leapfrog_setup setup = setup_of(drive);
    struct leapfrog_end first =
        end_of(set, cell, step, setup.near_conductance, setup.near_capacitance);
    struct leapfrog_end last =
        end_of(set, cell, step, setup.far_conductance, setup.far_capacitance);
    assert_true(invert(set->inductance, n, inverse_l) && invert(set->capacitance, n, inverse_c));
    memset(voltage, 0, sizeof voltage);
    memset(current, 0, sizeof current);
    *near = *far = 0;
    for (size_t t = 0; (double)t * step < 30e-9; t++) {
        double into[TRACES], emf = fmin(((double)t + 0.5) * step / drive->edge, 1);
        for (size_t x = 0; x < cells; x++)
            for (size_t i = 0; i < n; i++)
                for (size_t j = 0; j < n; j++)
                    current[x][i] -=
                        step / cell * inverse_l[i * n + j] * (voltage[x + 1][j] - voltage[x][j]);
        for (size_t x = 1; x < cells; x++)
            for (size_t i = 0; i < n; i++)
                for (size_t j = 0; j < n; j++)
                    voltage[x][i] -=
                        step / cell * inverse_c[i * n + j] * (current[x][j] - current[x - 1][j]);
        for (size_t i = 0; i < n; i++)
            into[i] = (i == COUPLED_VICTIM ? 0 : emf * setup.near_conductance[i]) - current[0][i];
        advance_end(&first, n, into, voltage[0]);
        advance_end(&last, n, current[cells - 1], voltage[cells]);
        *near = fmax(*near, fabs(voltage[0][COUPLED_VICTIM]));
        *far = fmax(*far, fabs(voltage[cells][COUPLED_VICTIM]));
    }
}

static void test_peaks_among_several_aggressors_agree_with_leapfrog(void **state) {
    (void)state;
    for (size_t count = 3; count <= 5; count += 2)
        for (int logic = 0; logic < 2; logic++) {
            struct coupled_set set = set_of(count, true);
            struct coupled_drive drive = drive_of(logic != 0);
            double outputs[COUPLED_OUTPUT_COUNT], near[2], far[2];
            respond(&set, &drive, outputs);
            for (size_t k = 0; k < 2; k++)
                leapfrog_peaks(&set, &drive, k == 0 ? CELLS / 2 : CELLS, &near[k], &far[k]);
            double allowed_near = 3e-4 + 2 * fabs(near[1] / near[0] - 1);
            double allowed_far = 3e-4 + 2 * fabs(far[1] / far[0] - 1);
            assert_true(allowed_near < 5e-3 && allowed_far < 5e-3);
            assert_close(outputs[COUPLED_NEAR_END_PEAK], near[1], allowed_near);
            assert_close(outputs[COUPLED_FAR_END_PEAK], far[1], allowed_far);
        }
}

static double draw(uint64_t *seed) {
    *seed = *seed * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
    return (double)(*seed >> 11) / 9007199254740992.0;
}

/* What aggressor `driven` alone sends to the victim's far end. */
enum { SAMPLES = 10000 };
static const double STEP = 2e-12;

static void alone(const struct coupled_set *set, const struct coupled_drive *drive, size_t driven,
                  double *far) {
    static double near[SAMPLES];
    struct coupled_fold fold = coupled_fold(set);
    struct line_problem problem = coupled_fold_line(&fold, drive->length);
    for (size_t i = 0; i < set->count; i++) {
        bool victim = i == COUPLED_VICTIM;
        problem.near[i] = (struct line_end){victim ? drive->victim_source : drive->source, 0,
                                            i == driven ? 1 : 0};
        problem.far[i] =
            (struct line_end){victim ? drive->victim_load : drive->load,
                              victim ? drive->victim_load_capacitance : drive->load_capacitance, 0};
    }
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    struct line_response *response = line_response_create(&problem, drive->edge, arena, &error);
    assert_ok(response != NULL);
    assert_ok(line_response_samples(response, COUPLED_VICTIM, drive->edge, STEP, SAMPLES, near, far,
                                    &error));
    arena_free(arena);
}

/* Superposition: no choice of switching times and directions of four aggressors passes the bound
 * for independent ones, the best choice reaches it, and switching together is one of the choices.
 */
static void test_independent_aggressors_reach_and_never_pass_the_sum(void **state) {
    (void)state;
    static double far[COUPLED_MOST][SAMPLES];
    struct coupled_set set = set_of(5, false);
    struct coupled_drive drive = drive_of(false);
    drive.bit_time = drive.settling = 0;
    double together[COUPLED_OUTPUT_COUNT], independent[COUPLED_OUTPUT_COUNT];
    respond(&set, &drive, together);
    drive.independent = true;
    respond(&set, &drive, independent);
    double bound = independent[COUPLED_FAR_END_PEAK], best = 0, aligned = 0;
    size_t worst_at[COUPLED_MOST] = {0};
    for (size_t a = 0; a < set.count; a++) {
        if (a == COUPLED_VICTIM)
            continue;
        alone(&set, &drive, a, far[a]);
        for (size_t k = 0; k < SAMPLES; k++)
            if (fabs(far[a][k]) > fabs(far[a][worst_at[a]]))
                worst_at[a] = k;
        aligned += fabs(far[a][worst_at[a]]);
    }
    uint64_t seed = 17;
    for (int trial = 0; trial < 20000; trial++) {
        double sum = 0;
        for (size_t a = 0; a < set.count; a++) {
            size_t at = (size_t)(draw(&seed) * 3000);
            if (a != COUPLED_VICTIM)
                sum += draw(&seed) < 0.5 ? far[a][at] : -far[a][at];
        }
        best = fmax(best, fabs(sum));
    }
    assert_true(best <= bound * (1 + 1e-6));
    assert_true(best > 0.4 * bound);
    assert_close(aligned, bound, 2e-3);
    assert_true(together[COUPLED_FAR_END_PEAK] <= bound * (1 + 1e-6));
    assert_true(together[COUPLED_FAR_END_PEAK] > 0.5 * bound);
}

/* Characteristic admittance of the sets above by inv(L) sqrt(L C), the root by Denman and Beavers'
 * iteration in another language. */
static void test_impedances_of_the_victim_among_its_neighbours(void **state) {
    (void)state;
    static const double want[2][2] = {{93.82569, 53.67688}, {116.1228, 42.43399}};
    for (size_t k = 0; k < 2; k++)
        for (int mirrored = 0; mirrored < 2; mirrored++) {
            struct coupled_set set = set_of(k == 0 ? 3 : 5, mirrored != 0);
            struct coupled_fold fold = coupled_fold(&set);
            struct error error = {0};
            double even, odd;
            assert_ok(coupled_fold_impedances(&fold, &even, &odd, &error));
            assert_close(even, want[k][0], 1e-6);
            assert_close(odd, want[k][1], 1e-6);
        }
}

/* One response for one edge after the other, several kept: as fresh ones. */
static void test_a_worker_answers_as_a_fresh_one(void **state) {
    (void)state;
    struct error error = {0};
    struct model_worker *worker = model_worker_create(&error);
    assert_ok(worker != NULL);
    for (int k = 0; k < 24; k++) {
        struct coupled_set set = set_of(k % 2 == 0 ? 3 : 5, k % 3 == 0);
        struct coupled_drive drive = drive_of(k % 4 < 2);
        drive.independent = k % 5 < 3;
        drive.edge = (1 + k % 3) * 1e-9;
        drive.bit_time = k % 6 < 2 ? 0 : drive.bit_time;
        drive.settling = k % 6 < 3 ? 0 : drive.settling;
        double kept[COUPLED_OUTPUT_COUNT], fresh[COUPLED_OUTPUT_COUNT];
        double errors[COUPLED_OUTPUT_COUNT];
        assert_ok(coupled_respond(&set, &drive, worker, kept, errors, &error));
        respond(&set, &drive, fresh);
        for (size_t i = 0; i < COUPLED_OUTPUT_COUNT; i++)
            assert_true(kept[i] == fresh[i] || (isnan(kept[i]) && isnan(fresh[i])));
    }
    model_worker_free(worker);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_the_reduction_of_a_mirrored_set_loses_nothing),
        cmocka_unit_test(test_peaks_among_several_aggressors_agree_with_leapfrog),
        cmocka_unit_test(test_independent_aggressors_reach_and_never_pass_the_sum),
        cmocka_unit_test(test_impedances_of_the_victim_among_its_neighbours),
        cmocka_unit_test(test_a_worker_answers_as_a_fresh_one),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

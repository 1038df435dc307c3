#include "check.h"
#include "groundrules/line.h"

#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS };

static double draw(uint64_t *seed) {
    *seed = *seed * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
    return (double)(*seed >> 11) / 9007199254740992.0;
}

/* A chain of conductors with couplings that fall off, positive definite by diagonal dominance. */
static struct line_problem chain(size_t count, uint64_t seed) {
    struct line_problem problem = {.count = count, .length = 0.02 + 0.2 * draw(&seed)};
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j <= i; j++) {
            double l = i == j ? (4 + 2 * draw(&seed)) * 1e-7
                              : 1.5e-7 * draw(&seed) / (double)((i - j) * (i - j));
            double c = i == j ? (8 + 4 * draw(&seed)) * 1e-11
                              : -2e-11 * draw(&seed) / (double)((i - j) * (i - j));
            problem.inductance[i * count + j] = problem.inductance[j * count + i] = l;
            problem.capacitance[i * count + j] = problem.capacitance[j * count + i] = c;
        }
    for (size_t i = 0; i < count; i++) {
        problem.near[i] = (struct line_end){10 + 90 * draw(&seed), 0, i == 0};
        problem.far[i] = (struct line_end){10 + 90 * draw(&seed), 10e-12 * draw(&seed), 0};
    }
    return problem;
}

/* S^H S = I and S = S^T: nothing is lost and both directions are alike. */
static void test_scattering_is_unitary_and_symmetric(void **state) {
    (void)state;
    for (size_t count = 1; count <= MOST; count++)
        for (int k = 0; k < 8; k++) {
            struct line_problem problem = chain(count, 77 * count + (uint64_t)k);
            double complex s[4 * MOST * MOST];
            struct error error = {0};
            double frequency = 1e6 * pow(10, 0.5 * k);
            assert_ok(line_scattering(&problem, 50, frequency, s, &error));
            size_t ports = 2 * count;
            for (size_t i = 0; i < ports; i++)
                for (size_t j = 0; j < ports; j++) {
                    double complex sum = 0;
                    for (size_t m = 0; m < ports; m++)
                        sum += conj(s[m * ports + i]) * s[m * ports + j];
                    assert_near(cabs(sum - (i == j)), 0, 1e-9);
                    assert_near(cabs(s[i * ports + j] - s[j * ports + i]), 0, 1e-9);
                }
        }
}

/* What the EMF gives is what the resistances take. */
static void test_power_balances(void **state) {
    (void)state;
    for (size_t count = 1; count <= MOST; count++)
        for (int k = 0; k < 8; k++) {
            struct line_problem problem = chain(count, 1000 + 31 * count + (uint64_t)k);
            double complex near[MOST], far[MOST];
            struct error error = {0};
            assert_ok(
                line_frequency_response(&problem, 1e6 * pow(10, 0.45 * k), near, far, &error));
            double given = creal(1 - near[0]) / problem.near[0].resistance, taken = 0;
            for (size_t i = 0; i < count; i++) {
                double complex across = i == 0 ? 1 - near[i] : near[i];
                taken += creal(across * conj(across)) / problem.near[i].resistance +
                         creal(far[i] * conj(far[i])) / problem.far[i].resistance;
            }
            assert_close(taken, given, 1e-9);
        }
}

static struct line_problem homogeneous(double even, double odd, double slowness, double length) {
    double l = slowness * (even + odd) / 2, m = slowness * (even - odd) / 2;
    double c = slowness * (1 / even + 1 / odd) / 2, cm = slowness * (1 / odd - 1 / even) / 2;
    struct line_problem problem = {
        .count = 2, .length = length, .inductance = {l, m, m, l}, .capacitance = {c, -cm, -cm, c}};
    for (size_t i = 0; i < 2; i++)
        problem.near[i] = problem.far[i] = (struct line_end){sqrt(even * odd), 0, 0};
    problem.near[0].emf = 1;
    return problem;
}

static void peaks_of(const struct line_problem *problem, double edge, struct line_peak *near,
                     struct line_peak *far) {
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    struct line_response *response = line_response_create(problem, edge, arena, &error);
    assert_ok(response != NULL);
    assert_ok(line_response_peaks(response, 1, edge, near, far, &error));
    arena_free(arena);
}

/* Step response of the victim's near end after `trips` to and fro, by the bounces of both modes. */
static double near_level(double even, double odd, int trips) {
    double matched = sqrt(even * odd), level = 0;
    for (int m = 0; m < 2; m++) {
        double z = m == 0 ? even : odd, reflection = (matched - z) / (matched + z);
        double wave = 0.5 * z / (matched + z), mode = wave;
        for (int n = 0; n < trips; n++) {
            mode += wave * reflection * (1 + reflection);
            wave *= reflection * reflection;
        }
        level += m == 0 ? mode : -mode;
    }
    return level;
}

/* Exact: a homogeneous pair that ends in sqrt(Ze Zo) has no far end crosstalk, and the near end
 * settles at (sqrt Ze - sqrt Zo) / (sqrt Ze + sqrt Zo) of the wave sent. */
static void test_homogeneous_pair_with_matched_ends(void **state) {
    (void)state;
    static const double pairs[][2] = {{60, 40}, {51, 49}, {150, 60}};
    for (size_t k = 0; k < 3; k++) {
        double even = pairs[k][0], odd = pairs[k][1];
        struct line_problem problem = homogeneous(even, odd, 6e-9, 0.1);
        struct line_peak near, far;
        peaks_of(&problem, 1e-9, &near, &far);
        double want = (sqrt(even) - sqrt(odd)) / (sqrt(even) + sqrt(odd));
        assert_close(2 * near.highest, want, 1e-9);
        assert_near(far.highest, 0, 1e-12);
        /* An edge of twice to and fro: the mean of the first two levels of the near end. */
        peaks_of(&problem, 2.4e-9, &near, &far);
        assert_close(near.highest, (near_level(even, odd, 0) + near_level(even, odd, 1)) / 2, 1e-9);
    }
}

/* Weak coupling, matched: far end peak = |tau_e - tau_o| length / (2 edge) of the wave sent. */
static void test_far_end_of_a_weak_inhomogeneous_pair(void **state) {
    (void)state;
    double l = 3.5e-7, c = 1.2e-10, lm = 0.01 * l, cm = 0.004 * c, length = 0.1, edge = 1e-9;
    struct line_problem problem = {.count = 2,
                                   .length = length,
                                   .inductance = {l, lm, lm, l},
                                   .capacitance = {c, -cm, -cm, c}};
    for (size_t i = 0; i < 2; i++)
        problem.near[i] = problem.far[i] = (struct line_end){sqrt(l / c), 0, 0};
    problem.near[0].emf = 1;
    struct line_peak near, far;
    peaks_of(&problem, edge, &near, &far);
    double even = sqrt((l + lm) * (c - cm)), odd = sqrt((l - lm) * (c + cm));
    assert_close(2 * far.highest, (even - odd) * length / (2 * edge), 2e-3);
    assert_close(2 * near.highest, (lm / l + cm / c) / 4, 2e-3);
}

/* Open line: the near end is a short where the line is a quarter wave long. */
static void test_quarter_wave_of_an_open_line(void **state) {
    (void)state;
    struct line_problem problem = {.count = 1,
                                   .length = 0.15,
                                   .inductance = {2.5e-7},
                                   .capacitance = {1e-10},
                                   .near = {{50, 0, 1}},
                                   .far = {{INFINITY, 0, 0}}};
    double velocity = 2e8;
    double complex near[1], far[1];
    struct error error = {0};
    assert_ok(line_frequency_response(&problem, velocity / (4 * 0.15), near, far, &error));
    assert_near(cabs(near[0]), 0, 1e-9);
    assert_close(cabs(far[0]), 1, 1e-9);
    assert_ok(line_frequency_response(&problem, velocity / (2 * 0.15), near, far, &error));
    assert_close(cabs(near[0]), 1, 1e-9);
}

/* Exact: a matched source and a capacitance at the far end, V = 1 - exp(-(t - T) / (Z0 C)) for a
 * step, its running mean over the edge for a ramp. */
static double ramp_into(double time, double edge, double constant) {
    double risen = time > 0 ? time - constant * -expm1(-time / constant) : 0;
    double later = time - edge;
    return (risen - (later > 0 ? later - constant * -expm1(-later / constant) : 0)) / edge;
}

static void test_capacitance_at_the_end_of_a_matched_line(void **state) {
    (void)state;
    static const double capacitances[] = {0.5e-12, 5e-12, 50e-12};
    for (size_t k = 0; k < 3; k++) {
        struct line_problem problem = {.count = 1,
                                       .length = 0.12,
                                       .inductance = {2.5e-7},
                                       .capacitance = {1e-10},
                                       .near = {{50, 0, 1}},
                                       .far = {{INFINITY, capacitances[k], 0}}};
        double edge = 0.7e-9, step = 0.05e-9, delay = 0.6e-9;
        struct error error = {0};
        struct arena *arena = arena_create(&error);
        assert_ok(arena != NULL);
        struct line_response *response = line_response_create(&problem, edge, arena, &error);
        assert_ok(response != NULL);
        double near[200], far[200];
        assert_ok(line_response_samples(response, 0, edge, step, 200, near, far, &error));
        for (size_t i = 0; i < 200; i++) {
            double time = (double)i * step;
            assert_near(far[i], ramp_into(time - delay, edge, 50 * capacitances[k]), 1e-6);
            /* At the source: half the EMF and what comes back, V_far's wave less the incident. */
            double back = ramp_into(time - 2 * delay, edge, 50 * capacitances[k]);
            double direct = 0.5 * fmin(time / edge, 1);
            double passed = time - 2 * delay > 0 ? 0.5 * fmin((time - 2 * delay) / edge, 1) : 0;
            assert_near(near[i], direct + back - passed, 1e-6);
        }
        arena_free(arena);
    }
}

/* Driving one and listening at the other, or the other way round: the same between equal ends. */
static void test_two_conductors_may_swap_roles(void **state) {
    (void)state;
    struct line_problem problem = chain(2, 5);
    for (size_t i = 0; i < 2; i++) {
        problem.near[i] = (struct line_end){40, 0, 0};
        problem.far[i] = (struct line_end){INFINITY, 5e-12, 0};
    }
    struct line_peak near[2], far[2];
    for (size_t driven = 0; driven < 2; driven++) {
        problem.near[driven].emf = 1;
        problem.near[1 - driven].emf = 0;
        struct error error = {0};
        struct arena *arena = arena_create(&error);
        assert_ok(arena != NULL);
        struct line_response *response = line_response_create(&problem, 1e-9, arena, &error);
        assert_ok(response != NULL);
        assert_ok(
            line_response_peaks(response, 1 - driven, 1e-9, &near[driven], &far[driven], &error));
        arena_free(arena);
    }
    assert_close(near[0].highest, near[1].highest, 1e-3);
}

enum { SAMPLES = 400 };

static void samples_of(const struct line_problem *problem, size_t victim, double *near,
                       double *far) {
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    struct line_response *response = line_response_create(problem, 1e-9, arena, &error);
    assert_ok(response != NULL);
    assert_ok(line_response_samples(response, victim, 1e-9, 0.05e-9, SAMPLES, near, far, &error));
    arena_free(arena);
}

/* Linear: driven together is the sum of driven one by one, in frequency and in time, with resistive
 * ends (exact) and capacitive ones. */
static void test_several_emfs_superpose(void **state) {
    (void)state;
    static const double emf[3] = {1, -0.4, 1.7};
    for (int capacitive = 0; capacitive < 2; capacitive++) {
        struct line_problem problem = chain(3, 91);
        double near[2][SAMPLES], far[2][SAMPLES], sum[2][SAMPLES] = {{0}};
        double complex at_near[3], at_far[3], sum_near = 0, sum_far = 0;
        struct error error = {0};
        for (size_t i = 0; i < 3 && !capacitive; i++)
            problem.far[i].capacitance = 0;
        for (size_t driven = 0; driven < 3; driven++) {
            for (size_t i = 0; i < 3; i++)
                problem.near[i].emf = i == driven ? emf[i] : 0;
            samples_of(&problem, 1, near[0], far[0]);
            for (size_t k = 0; k < SAMPLES; k++) {
                sum[0][k] += near[0][k];
                sum[1][k] += far[0][k];
            }
            assert_ok(line_frequency_response(&problem, 2e8, at_near, at_far, &error));
            sum_near += at_near[1];
            sum_far += at_far[1];
        }
        for (size_t i = 0; i < 3; i++)
            problem.near[i].emf = emf[i];
        samples_of(&problem, 1, near[1], far[1]);
        for (size_t k = 0; k < SAMPLES; k++) {
            assert_near(near[1][k], sum[0][k], capacitive ? 5e-5 : 1e-7);
            assert_near(far[1][k], sum[1][k], capacitive ? 5e-5 : 1e-7);
        }
        assert_ok(line_frequency_response(&problem, 2e8, at_near, at_far, &error));
        assert_near(cabs(at_near[1] - sum_near), 0, 1e-12);
        assert_near(cabs(at_far[1] - sum_far), 0, 1e-12);
    }
}

/* Common and differential drive of an equal pair reach one mode each: a lone line of its impedance
 * and delay (any textbook on coupled lines). */
static void test_equal_and_opposite_emfs_see_one_mode(void **state) {
    (void)state;
    struct line_problem pair = homogeneous(60, 40, 6e-9, 0.1);
    for (size_t i = 0; i < 2; i++) {
        pair.near[i] = (struct line_end){30, 0, 1};
        pair.far[i] = (struct line_end){200, 0, 0};
    }
    for (int mode = 0; mode < 2; mode++) {
        double impedance = mode == 0 ? 60 : 40, near[2][SAMPLES], far[2][SAMPLES];
        struct line_problem lone = {.count = 1,
                                    .length = 0.1,
                                    .inductance = {6e-9 * impedance},
                                    .capacitance = {6e-9 / impedance},
                                    .near = {{30, 0, 1}},
                                    .far = {{200, 0, 0}}};
        pair.near[0].emf = mode == 0 ? 1 : -1;
        samples_of(&pair, 1, near[0], far[0]);
        samples_of(&lone, 0, near[1], far[1]);
        for (size_t k = 0; k < SAMPLES; k++) {
            assert_near(near[0][k], near[1][k], 1e-9);
            assert_near(far[0][k], far[1][k], 1e-9);
        }
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_scattering_is_unitary_and_symmetric),
        cmocka_unit_test(test_power_balances),
        cmocka_unit_test(test_homogeneous_pair_with_matched_ends),
        cmocka_unit_test(test_far_end_of_a_weak_inhomogeneous_pair),
        cmocka_unit_test(test_quarter_wave_of_an_open_line),
        cmocka_unit_test(test_capacitance_at_the_end_of_a_matched_line),
        cmocka_unit_test(test_two_conductors_may_swap_roles),
        cmocka_unit_test(test_several_emfs_superpose),
        cmocka_unit_test(test_equal_and_opposite_emfs_see_one_mode),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

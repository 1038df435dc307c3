#include "check.h"
#include "groundrules/line.h"
#include "lossy_reference.h"

#include <stdlib.h>

static const double pi = 3.14159265358979323846;

struct prepared {
    struct arena *arena;
    struct line_response *response;
};

static struct prepared prepare(const struct line_problem *problem, double edge) {
    struct error error = {0};
    struct prepared prepared = {.arena = arena_create(&error)};
    assert_ok(prepared.arena != NULL);
    prepared.response = line_response_create(problem, edge, prepared.arena, &error);
    assert_ok(prepared.response != NULL);
    return prepared;
}

/* Half a percent is the job, and what is claimed must cover what is off; the reference carries its
 * own doubt. */
static void test_eighty_pairs_agree_with_the_laplace_transform(void **state) {
    (void)state;
    const double swing = 3.3e3, digits = 2e-6;
    for (size_t k = 0; k < LOSSY_REFERENCES; k++) {
        const struct lossy_reference *reference = &lossy_references[k];
        struct line_problem problem = lossy_problem_of(reference);
        struct prepared prepared = prepare(&problem, reference->peak[0].edge);
        for (size_t p = 0; p < reference->peaks; p++) {
            const struct lossy_peak *want = &reference->peak[p];
            struct error error = {0};
            struct line_peak near, far;
            assert_ok(line_response_peaks(prepared.response, 1, want->edge, &near, &far, &error));
            assert_close(near.highest * swing, want->near, 5e-3);
            assert_close(far.highest * swing, want->far, 5e-3);
            assert_true(near.error < 5e-3 && far.error < 5e-3);
            assert_close(near.highest * swing, want->near, near.error + want->doubt[0] + digits);
            assert_close(far.highest * swing, want->far, far.error + want->doubt[1] + digits);
        }
        arena_free(prepared.arena);
    }
}

/* The same, prepared for an edge four times shorter than any that is asked for. */
static void test_one_response_serves_every_edge(void **state) {
    (void)state;
    for (size_t k = 0; k < LOSSY_REFERENCES; k += 3) {
        const struct lossy_reference *reference = &lossy_references[k];
        struct line_problem problem = lossy_problem_of(reference);
        struct prepared fine = prepare(&problem, reference->peak[0].edge / 4);
        for (size_t p = 0; p < reference->peaks; p++) {
            const struct lossy_peak *want = &reference->peak[p];
            struct error error = {0};
            struct line_peak near, far;
            assert_ok(line_response_peaks(fine.response, 1, want->edge, &near, &far, &error));
            assert_close(near.highest * 3.3e3, want->near, near.error + want->doubt[0] + 2e-6);
            assert_close(far.highest * 3.3e3, want->far, far.error + want->doubt[1] + 2e-6);
        }
        arena_free(fine.arena);
    }
}

/* A line of resistance and capacitance alone between an EMF and an open end: the diffusion
 * equation, exact as a sum of images (H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids,
 * 2nd ed. 1959, sec. 12.5; for cables Lord Kelvin 1855):
 *     V = 2 sum (-1)^n erfc((2 n + 1) / (2 sqrt(t / (R C l^2)))). */
static double diffused(double t, double constant) {
    double sum = 0;
    for (int n = 0; t > 0 && n < 12; n++)
        sum += (n % 2 == 0 ? 2 : -2) * erfc((2 * n + 1) / (2 * sqrt(t / constant)));
    return sum;
}

static void test_an_open_cable_of_resistance_and_capacitance_diffuses(void **state) {
    (void)state;
    struct line_problem problem = {.count = 1,
                                   .length = 0.1,
                                   .inductance = {1e-12},
                                   .capacitance = {1e-10},
                                   .dc_resistance = {1e5}};
    problem.near[0].emf = 1;
    problem.far[0].resistance = INFINITY;
    const double constant = 1e5 * 1e-10 * 0.01, edge = 0.2 * constant;
    struct prepared prepared = prepare(&problem, edge);
    struct error error = {0};
    enum { SAMPLES = 60 };
    double near[SAMPLES], far[SAMPLES], step = 0.05 * constant;
    assert_ok(line_response_samples(prepared.response, 0, edge, step, SAMPLES, near, far, &error));
    for (size_t i = 0; i < SAMPLES; i++) {
        enum { PARTS = 200 };
        double t = (double)i * step, mean = 0; /* of the step response over the last edge */
        for (int k = 0; k < PARTS; k++)
            mean += diffused(t - edge * (k + 0.5) / PARTS, constant) / PARTS;
        assert_near(far[i], mean, 5e-4);
        assert_near(near[i], fmin(t / edge, 1), 2e-3);
    }
    arena_free(prepared.arena);
}

/* R. L. Wigington, N. S. Nahman, Proc. IRE 45, 1957, 166-174 (from memory): a long line with skin
 * effect alone, Z = K sqrt(s) + s L, answers a step with erfc(K l/(4 Z0 sqrt(t - T))); the next
 * term of sqrt(Z Y) is the factor exp(T (K/L)^2/8), here 1.003, the one after it 3e-5.  The ends in
 * Z0 instead of the line's own impedance count in second order, (K/L)^2 t/16. */
static void test_skin_effect_rounds_a_step_to_the_error_function(void **state) {
    (void)state;
    const double z = 50, delay = 5e-9, length = 10, skin = 3e-4;
    struct line_problem problem = {.count = 1,
                                   .length = 10,
                                   .inductance = {z * delay},
                                   .capacitance = {delay / z},
                                   .skin_resistance = {skin}};
    problem.near[0].resistance = problem.far[0].resistance = z;
    problem.near[0].emf = 1;
    const double edge = 0.1e-9, root = skin / sqrt(pi), k = root * length / (2 * z);
    const double gain = exp(delay * length * pow(root / (z * delay), 2) / 8);
    struct prepared prepared = prepare(&problem, edge);
    struct error error = {0};
    enum { SAMPLES = 520 };
    static double near[SAMPLES], far[SAMPLES];
    const double step = 0.1e-9;
    assert_ok(line_response_samples(prepared.response, 0, edge, step, SAMPLES, near, far, &error));
    for (size_t i = 502; i < SAMPLES; i++) {
        enum { PARTS = 400 };
        double t = (double)i * step - delay * length, mean = 0;
        for (int part = 0; part < PARTS; part++) {
            double after = t - edge * (part + 0.5) / PARTS;
            mean += after > 0 ? 0.5 * gain * erfc(k / (2 * sqrt(after))) / PARTS : 0;
        }
        assert_near(far[i], mean, 3e-4);
        assert_true(far[i] < 0.5);
    }
    arena_free(prepared.arena);
}

/* Another way to the same numbers: a slow square wave with the same edges as a Fourier series of
 * harmonics through line_frequency_response.  Three unequal conductors, mixed ends. */
static struct line_problem three_lossy_conductors(void) {
    struct line_problem problem = {
        .count = 3,
        .length = 0.08,
        .inductance = {4e-7, 1e-7, 4e-8, 1e-7, 4.5e-7, 1.2e-7, 4e-8, 1.2e-7, 5e-7},
        .capacitance = {1e-10, -1e-11, -2e-12, -1e-11, 9e-11, -1.2e-11, -2e-12, -1.2e-11, 8e-11},
        .dc_resistance = {3, 0, 0, 0, 2, 0, 0, 0, 1.5},
        .skin_resistance = {1.2e-3, 1e-4, 2e-5, 1e-4, 9e-4, 8e-5, 2e-5, 8e-5, 7e-4},
        .dielectric_capacitance = {8e-11, -7e-12, -1e-12, -7e-12, 7e-11, -8e-12, -1e-12, -8e-12,
                                   6e-11},
        .df = 0.018,
        .material_frequency = 1e9};
    problem.near[0] = (struct line_end){25, 0, 1};
    problem.far[0] = (struct line_end){INFINITY, 4e-12, 0};
    problem.near[1] = (struct line_end){1000, 3e-12, 0};
    problem.far[1] = (struct line_end){40, 0, 0};
    problem.near[2] = (struct line_end){60, 0, 0};
    problem.far[2] = (struct line_end){2000, 2e-12, 0};
    return problem;
}

static void test_three_conductors_agree_with_a_fourier_series(void **state) {
    (void)state;
    enum { HARMONICS = 12000, SAMPLES = 240, STRIDE = 5 };
    const double edge = 0.4e-9, period = 400e-9, step = 0.05e-9;
    struct line_problem problem = three_lossy_conductors();
    static double want[2][3][SAMPLES];
    struct error error = {0};
    for (size_t h = 1; h < HARMONICS; h += 2) {
        double w = 2 * pi * (double)h / period;
        double complex near[3], far[3];
        assert_ok(line_frequency_response(&problem, w / (2 * pi), near, far, &error));
        /* Of a square wave between -1/2 and 1/2 with ramps that start at 0 and at half a period. */
        double complex emf = 2 / (I * w * period) * (1 - cexp(-I * w * edge)) / (I * w * edge);
        for (size_t i = 0; i < SAMPLES; i++) {
            double complex turn = 2 * emf * cexp(I * w * step * STRIDE * (double)i);
            for (size_t c = 0; c < 3; c++) {
                want[0][c][i] += creal(turn * near[c]);
                want[1][c][i] += creal(turn * far[c]);
            }
        }
    }
    struct prepared prepared = prepare(&problem, edge);
    static double near[SAMPLES * STRIDE], far[SAMPLES * STRIDE];
    for (size_t c = 1; c < 3; c++) {
        struct line_peak peak[2];
        assert_ok(line_response_samples(prepared.response, c, edge, step, SAMPLES * STRIDE, near,
                                        far, &error));
        assert_ok(line_response_peaks(prepared.response, c, edge, &peak[0], &peak[1], &error));
        for (size_t i = 0; i < SAMPLES; i++) {
            assert_near(near[i * STRIDE], want[0][c][i], 2e-3 * peak[0].highest);
            assert_near(far[i * STRIDE], want[1][c][i], 2e-3 * peak[1].highest);
        }
    }
    arena_free(prepared.arena);
}

/* As loss goes to nothing its response goes over into the lossless solvers', which are exact for
 * resistive ends and of fourth order for capacitive ones. */
static void test_vanishing_loss_is_no_loss(void **state) {
    (void)state;
    for (size_t k = 0; k < LOSSY_REFERENCES; k++) {
        struct line_problem lossy = lossy_problem_of(&lossy_references[k]), lossless = lossy;
        lossless.df = lossy.df = 1e-9;
        for (size_t i = 0; i < 4; i++) {
            lossy.dc_resistance[i] *= 1e-7;
            lossy.skin_resistance[i] *= 1e-7;
            lossless.dc_resistance[i] = lossless.skin_resistance[i] = 0;
            lossless.dielectric_capacitance[i] = 0;
        }
        const double edge = 0.5e-9;
        struct prepared one = prepare(&lossless, edge), other = prepare(&lossy, edge);
        static const double edges[] = {0.5e-9, 0.73e-9, 1e-9, 2.2e-9};
        for (size_t e = 0; e < 4; e++) {
            struct error error = {0};
            struct line_peak want[2], got[2];
            assert_ok(line_response_peaks(one.response, 1, edges[e], &want[0], &want[1], &error));
            assert_ok(line_response_peaks(other.response, 1, edges[e], &got[0], &got[1], &error));
            for (size_t end = 0; end < 2; end++) {
                if (!(fabs(got[end].highest / want[end].highest - 1) <=
                      got[end].error + want[end].error))
                    print_error("%s, edge %g, end %zu: claimed %g, %g\n", lossy_references[k].name,
                                edges[e], end, got[end].error, want[end].error);
                assert_close(got[end].highest, want[end].highest, got[end].error + want[end].error);
                assert_true(got[end].error < 2e-2);
            }
        }
        arena_free(one.arena);
        arena_free(other.arena);
    }
}

/* Passive ends settle: the aggressor to the divider of its resistances and its copper, the victim
 * to nothing; on the way nothing exceeds what a lossless open line could double. */
static void test_everything_comes_to_rest(void **state) {
    (void)state;
    enum { SAMPLES = 4000 };
    static double near[SAMPLES], far[SAMPLES];
    for (size_t k = 0; k < LOSSY_REFERENCES; k += 5) {
        struct line_problem problem = lossy_problem_of(&lossy_references[k]);
        struct prepared prepared = prepare(&problem, 0.5e-9);
        for (size_t victim = 0; victim < 2; victim++) {
            struct error error = {0};
            assert_ok(line_response_samples(prepared.response, victim, 0.5e-9, 0.1e-9, SAMPLES,
                                            near, far, &error));
            double copper = problem.dc_resistance[0] * problem.length;
            double load = problem.far[0].resistance;
            double rest = victim != 0 ? 0 : isinf(load) ? 1 : load / (50 + load + copper);
            assert_near(far[SAMPLES - 1], rest, 2e-3);
            for (size_t i = 0; i < SAMPLES; i++)
                assert_true(fabs(near[i]) < 2 && fabs(far[i]) < 2);
        }
        arena_free(prepared.arena);
    }
}

/* Every sequence is worth at least its single edge, and the clocked one no more than the free one.
 */
static void test_sequences_on_a_lossy_line(void **state) {
    (void)state;
    for (size_t k = 41; k < LOSSY_REFERENCES; k += 8) {
        struct line_problem problem = lossy_problem_of(&lossy_references[k]);
        struct prepared prepared = prepare(&problem, 0.5e-9);
        struct error error = {0};
        struct line_peak peak[2];
        struct line_sequence sequence[2];
        assert_ok(line_response_peaks(prepared.response, 1, 0.5e-9, &peak[0], &peak[1], &error));
        for (size_t b = 1; b < 12; b += 3) {
            double bit = 0.7e-9 * (double)b;
            assert_ok(line_response_sequences(prepared.response, 1, 0.5e-9, bit, &sequence[0],
                                              &sequence[1], &error));
            for (size_t end = 0; end < 2; end++) {
                assert_true(sequence[end].free >= peak[end].highest * (1 - 5e-3));
                assert_true(sequence[end].clocked <= sequence[end].free * (1 + 1e-9));
                assert_true(sequence[end].error < 2e-2);
            }
        }
        arena_free(prepared.arena);
    }
}

/* Pairs that nobody chose: the peaks of a response prepared for `edge` and of one for a quarter of
 * it, whose bands, windows and contours all differ, agree within what both claim. */
static double next_random(unsigned *seed) {
    *seed = *seed * 1664525u + 1013904223u;
    return (double)(*seed >> 8) / 16777216.0;
}

static double pick(unsigned *seed, const double *from, size_t count) {
    return from[(size_t)(next_random(seed) * (double)count)];
}

static struct line_problem random_pair(unsigned *seed, double *edge) {
    static const double resistances[] = {5, 15, 25, 50, 75, 120, 300, 1000, INFINITY};
    static const double capacitances[] = {0, 0, 1e-12, 5e-12, 22e-12, 100e-12};
    static const double lengths[] = {1e-3, 5e-3, 20e-3, 0.1, 0.3};
    static const double edges[] = {0.1e-9, 0.5e-9, 2e-9, 20e-9};
    double z = 30 + 120 * next_random(seed), speed = 1.5e8 + 1.3e8 * next_random(seed);
    double inductive = 0.02 + 0.5 * next_random(seed);
    double capacitive = inductive * (0.3 + 0.7 * next_random(seed));
    double l = z / speed, c = 1 / (z * speed), uneven = 0.8 + 0.5 * next_random(seed);
    double m = inductive * l * sqrt(uneven), n = -capacitive * c / sqrt(uneven);
    double skin = 2e-3 * next_random(seed);
    struct line_problem problem = {
        .count = 2,
        .length = pick(seed, lengths, 5),
        .inductance = {l, m, m, l * uneven},
        .capacitance = {c, n, n, c / uneven},
        .dc_resistance = {5 * next_random(seed), 0, 0, 5 * next_random(seed)},
        .skin_resistance = {skin, 0.1 * skin, 0.1 * skin, skin * uneven},
        .dielectric_capacitance = {0.8 * c, 0.8 * n, 0.8 * n, 0.8 * c / uneven},
        .df = 0.03 * next_random(seed),
        .material_frequency = 1e9};
    for (size_t i = 0; i < 2; i++) {
        problem.near[i] =
            (struct line_end){pick(seed, resistances, 8), pick(seed, capacitances, 6), 0};
        problem.far[i] =
            (struct line_end){pick(seed, resistances, 9), pick(seed, capacitances, 6), 0};
    }
    problem.near[0].emf = 1;
    *edge = fmax(pick(seed, edges, 4), problem.length / speed / 50);
    return problem;
}

static void test_random_pairs_agree_with_finer_ones(void **state) {
    (void)state;
    unsigned seed = 5;
    for (size_t k = 0; k < 60; k++) {
        double edge;
        struct line_problem problem = random_pair(&seed, &edge);
        struct prepared one = prepare(&problem, edge), finer = prepare(&problem, edge / 4);
        static const double factors[] = {1, 3.3, 40};
        for (size_t e = 0; e < 3; e++) {
            struct error error = {0};
            struct line_peak got[2], want[2];
            assert_ok(
                line_response_peaks(one.response, 1, factors[e] * edge, &got[0], &got[1], &error));
            assert_ok(line_response_peaks(finer.response, 1, factors[e] * edge, &want[0], &want[1],
                                          &error));
            for (size_t end = 0; end < 2; end++)
                assert_near(got[end].highest, want[end].highest,
                            got[end].error * got[end].highest +
                                want[end].error * want[end].highest + 1e-8);
        }
        arena_free(one.arena);
        arena_free(finer.arena);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_eighty_pairs_agree_with_the_laplace_transform),
        cmocka_unit_test(test_one_response_serves_every_edge),
        cmocka_unit_test(test_an_open_cable_of_resistance_and_capacitance_diffuses),
        cmocka_unit_test(test_skin_effect_rounds_a_step_to_the_error_function),
        cmocka_unit_test(test_three_conductors_agree_with_a_fourier_series),
        cmocka_unit_test(test_vanishing_loss_is_no_loss),
        cmocka_unit_test(test_everything_comes_to_rest),
        cmocka_unit_test(test_sequences_on_a_lossy_line),
        cmocka_unit_test(test_random_pairs_agree_with_finer_ones),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

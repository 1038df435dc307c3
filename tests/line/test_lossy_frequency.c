#include "check.h"
#include "groundrules/line.h"
#include "lossy_reference.h"

#include <string.h>

static const double pi = 3.14159265358979323846;

/* 0.05 dB is 6e-3; both are exact for the same circuit. */
static void test_eighty_pairs_agree_with_nodal_admittances(void **state) {
    (void)state;
    for (size_t k = 0; k < LOSSY_REFERENCES; k++) {
        const struct lossy_reference *reference = &lossy_references[k];
        struct line_problem problem = lossy_problem_of(reference);
        struct error error = {0};
        for (size_t f = 0; f < 5; f++) {
            const struct lossy_frequency *want = &reference->frequency[f];
            double complex near[2], far[2];
            assert_ok(line_frequency_response(&problem, want->frequency, near, far, &error));
            const double complex got[4] = {near[0], near[1], far[0], far[1]};
            for (size_t i = 0; i < 4; i++) {
                double complex value = want->real[i] + I * want->imaginary[i];
                if (!(cabs(got[i] - value) <= 2e-7 * (cabs(value) + 1e-3)))
                    print_error("%s at %g Hz, end %zu\n", reference->name, want->frequency, i);
                assert_true(cabs(got[i] - value) <= 2e-7 * (cabs(value) + 1e-3));
            }
        }
    }
}

/* A. R. Djordjevic et al., IEEE Trans. EMC 43, 2001, eq. (3) with corners at 1 kHz and 1 THz; the
 * permittivity that a lossless line would need follows from its propagation constant:
 * er tan d = -Im (gamma/w)^2 ..., here checked against the formula evaluated in decades. */
static void test_a_homogeneous_line_shows_the_permittivity_of_djordjevic(void **state) {
    (void)state;
    const double l = 4e-7, c = 1.2e-10, df = 0.02, at = 1e9, lower = 1e3, upper = 1e12;
    struct line_problem problem = {.count = 1,
                                   .length = 0.1,
                                   .inductance = {l},
                                   .capacitance = {c},
                                   .dielectric_capacitance = {c},
                                   .df = df,
                                   .material_frequency = at};
    /* In decades: de/(m2 - m1) from the loss at 1 GHz, er' by the logarithm's real part. */
    double slope = df / (atan(at / lower) - atan(at / upper)) * log(10);
    static const double frequencies[] = {1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11};
    for (size_t k = 0; k < sizeof frequencies / sizeof *frequencies; k++) {
        double f = frequencies[k];
        struct error error = {0};
        double complex gamma;
        assert_ok(line_propagation(&problem, f, &gamma, &error));
        double complex relative = -(gamma / (2 * pi * f)) * (gamma / (2 * pi * f)) / (l * c);
        double real = 1 + slope * 0.5 *
                              (log10((upper * upper + f * f) / (lower * lower + f * f)) -
                               log10((upper * upper + at * at) / (lower * lower + at * at)));
        double loss = slope / log(10) * (atan(f / lower) - atan(f / upper));
        assert_close(creal(relative), real, 1e-12);
        assert_close(-cimag(relative), loss, 1e-12);
    }
    /* Their FR-4: dk falls by 0.129 a decade for dk 4.4, df 0.02 (recomputed, from memory); the
     * lower corner at 1 instead of 10 kHz changes that by less than a thousandth. */
    assert_close(4.4 * slope, 0.12908, 2e-3);
}

/* D. M. Pozar, Microwave Engineering, 4th ed., sec. 2.7 and example 3.7: alpha = R/(2 Z) for small
 * loss; with R = 2.609e-7 sqrt(f)/w at 10 GHz, w = 0.483 mm, Z = 49.9 ohm: 1.0819 Np/m. */
static void test_small_conductor_loss_is_resistance_over_twice_the_impedance(void **state) {
    (void)state;
    const double c = 1.7193e-10, z = 49.9;
    struct line_problem problem = {.count = 1,
                                   .length = 0.1,
                                   .inductance = {z * z * c},
                                   .capacitance = {c},
                                   .skin_resistance = {2.6089e-7 / 0.483e-3}};
    struct error error = {0};
    double complex gamma;
    assert_ok(line_propagation(&problem, 1e10, &gamma, &error));
    assert_close(creal(gamma), 2.6089e-7 * 1e5 / 0.483e-3 / (2 * z), 5e-3);
}

/* By symmetry: the even and the odd mode of equal conductors are single lines. */
static void test_equal_conductors_fall_into_even_and_odd(void **state) {
    (void)state;
    for (size_t k = 0; k < LOSSY_REFERENCES; k += 7) {
        struct line_problem pair = lossy_problem_of(&lossy_references[k]);
        for (size_t f = 0; f < 8; f++) {
            double frequency = 1e6 * pow(7.3, (double)f / 2);
            struct error error = {0};
            double complex near[2], far[2], mode_near[2], mode_far[2], constants[2];
            assert_ok(line_frequency_response(&pair, frequency, near, far, &error));
            assert_ok(line_propagation(&pair, frequency, constants, &error));
            for (size_t m = 0; m < 2; m++) {
                double sign = m == 0 ? 1 : -1;
                struct line_problem single = pair;
                single.count = 1;
                single.inductance[0] += sign * pair.inductance[1];
                single.capacitance[0] += sign * pair.capacitance[1];
                single.skin_resistance[0] += sign * pair.skin_resistance[1];
                single.dielectric_capacitance[0] += sign * pair.dielectric_capacitance[1];
                double complex constant;
                assert_ok(line_frequency_response(&single, frequency, &mode_near[m], &mode_far[m],
                                                  &error));
                assert_ok(line_propagation(&single, frequency, &constant, &error));
                assert_true(cabs(constant - constants[0]) < 1e-11 * cabs(constant) ||
                            cabs(constant - constants[1]) < 1e-11 * cabs(constant));
            }
            assert_true(cabs(near[0] - (mode_near[0] + mode_near[1]) / 2) < 1e-11);
            assert_true(cabs(near[1] - (mode_near[0] - mode_near[1]) / 2) < 1e-11);
            assert_true(cabs(far[0] - (mode_far[0] + mode_far[1]) / 2) < 1e-11);
            assert_true(cabs(far[1] - (mode_far[0] - mode_far[1]) / 2) < 1e-11);
        }
    }
}

/* Conductors that do not couple to the pair change nothing; four conductors go another way through
 * the matrix functions than two. */
static void test_far_conductors_do_not_matter(void **state) {
    (void)state;
    struct line_problem pair = lossy_problem_of(&lossy_references[45]), four = pair;
    four.count = 4;
    double *matrices[][2] = {{pair.inductance, four.inductance},
                             {pair.capacitance, four.capacitance},
                             {pair.dc_resistance, four.dc_resistance},
                             {pair.skin_resistance, four.skin_resistance},
                             {pair.dielectric_capacitance, four.dielectric_capacitance}};
    for (size_t k = 0; k < 5; k++) {
        memset(matrices[k][1], 0, 16 * sizeof(double));
        for (size_t i = 0; i < 4; i++)
            for (size_t j = 0; j < 4; j++)
                if (i / 2 == j / 2)
                    matrices[k][1][i * 4 + j] =
                        matrices[k][0][i % 2 * 2 + j % 2] * (i / 2 == 1 ? 1.3 : 1);
    }
    for (size_t i = 2; i < 4; i++) {
        four.near[i] = pair.near[1];
        four.far[i] = pair.far[0];
    }
    for (size_t f = 0; f < 12; f++) {
        double frequency = 1e3 * pow(10, (double)f * 0.6);
        struct error error = {0};
        double complex near[2], far[2], four_near[4], four_far[4];
        assert_ok(line_frequency_response(&pair, frequency, near, far, &error));
        assert_ok(line_frequency_response(&four, frequency, four_near, four_far, &error));
        for (size_t i = 0; i < 2; i++) {
            assert_true(cabs(near[i] - four_near[i]) < 1e-10);
            assert_true(cabs(far[i] - four_far[i]) < 1e-10);
            assert_true(cabs(four_near[2 + i]) < 1e-12);
        }
    }
}

/* A homogeneous line has equal modes, and loss that does not commute makes them meet and part: the
 * matrix functions have no trouble there. */
static void test_equal_modes_are_no_special_case(void **state) {
    (void)state;
    const double square = 4.3 / 299792458.0 / 299792458.0;
    struct line_problem problem = {.count = 2,
                                   .length = 0.1,
                                   .inductance = {3e-7, 0.7e-7, 0.7e-7, 5e-7},
                                   .skin_resistance = {1e-3, 2e-4, 2e-4, 6e-4},
                                   .material_frequency = 1e9};
    double det = 3e-7 * 5e-7 - 0.7e-7 * 0.7e-7;
    const double inverse[4] = {5e-7 / det, -0.7e-7 / det, -0.7e-7 / det, 3e-7 / det};
    for (size_t k = 0; k < 4; k++)
        problem.dielectric_capacitance[k] = problem.capacitance[k] = square * inverse[k];
    for (size_t i = 0; i < 2; i++) {
        problem.near[i] = (struct line_end){50, 0, i == 0 ? 1 : 0};
        problem.far[i] = (struct line_end){50, 0, 0};
    }
    double complex before = 0;
    for (size_t k = 0; k < 13; k++) {
        double scale = k < 12 ? pow(10, -(double)k) : 0;
        struct line_problem part = problem;
        struct error error = {0};
        double complex near[2], far[2];
        for (size_t i = 0; i < 4; i++)
            part.skin_resistance[i] *= scale;
        part.df = 0.02 * scale;
        assert_ok(line_frequency_response(&part, 7.7e8, near, far, &error));
        assert_true(isfinite(cabs(far[1])));
        if (k > 1)
            assert_true(cabs(far[1] - before) < 0.1 * pow(10, -(double)k + 1));
        before = far[1];
    }
}

/* Scattering of a passive network: no more power out than in, and reciprocal. */
static void test_scattering_is_passive_and_reciprocal(void **state) {
    (void)state;
    for (size_t k = 0; k < LOSSY_REFERENCES; k += 9)
        for (size_t f = 0; f < 10; f++) {
            struct line_problem problem = lossy_problem_of(&lossy_references[k]);
            struct error error = {0};
            double complex s[16];
            assert_ok(line_scattering(&problem, 50, 1e5 * pow(10, (double)f / 2), s, &error));
            for (size_t i = 0; i < 4; i++) {
                double out = 0;
                for (size_t j = 0; j < 4; j++) {
                    out += creal(s[j * 4 + i] * conj(s[j * 4 + i]));
                    assert_true(cabs(s[i * 4 + j] - s[j * 4 + i]) < 1e-12);
                }
                assert_true(out < 1);
            }
        }
}

static void test_loss_that_would_make_power_is_refused(void **state) {
    (void)state;
    struct line_problem good = lossy_problem_of(&lossy_references[0]);
    double complex near[2], far[2];
    for (size_t k = 0; k < 6; k++) {
        struct line_problem bad = good;
        struct error error = {0};
        if (k == 0)
            bad.dc_resistance[0] = -1;
        if (k == 1)
            bad.skin_resistance[1] = bad.skin_resistance[2] = 1;
        if (k == 2)
            bad.skin_resistance[1] *= 1.1;
        if (k == 3)
            bad.dielectric_capacitance[0] = 2 * bad.capacitance[0];
        if (k == 4)
            bad.df = NAN;
        if (k == 5)
            bad.material_frequency = 0;
        assert_false(line_frequency_response(&bad, 1e9, near, far, &error));
        assert_int_equal(error.kind, ERROR_INPUT);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_eighty_pairs_agree_with_nodal_admittances),
        cmocka_unit_test(test_a_homogeneous_line_shows_the_permittivity_of_djordjevic),
        cmocka_unit_test(test_small_conductor_loss_is_resistance_over_twice_the_impedance),
        cmocka_unit_test(test_equal_conductors_fall_into_even_and_odd),
        cmocka_unit_test(test_far_conductors_do_not_matter),
        cmocka_unit_test(test_equal_modes_are_no_special_case),
        cmocka_unit_test(test_scattering_is_passive_and_reciprocal),
        cmocka_unit_test(test_loss_that_would_make_power_is_refused),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

#include "point.h"

/* Independent reference values: boundary elements and finite elements agree to 1e-6 on every entry.
 */
static void test_thick_traces_agree_with_independent_solutions(void **state) {
    (void)state;
    static const struct {
        double height, width, impedance, effective_dk;
    } cases[] = {
        {1.6e-3, 0.3e-3, 127.4306, 2.819418},
        {1.6e-3, 3e-3, 50.6771, 3.23569},
        {0.19e-3, 0.35e-3, 49.2202, 3.13421},
    };
    for (size_t i = 0; i < 3; i++) {
        struct error error = {0};
        struct answer answer;
        struct named_value values[] = {{"height", cases[i].height},
                                       {"width", cases[i].width},
                                       {"thickness", 35e-6},
                                       {"dk", 4.3}};
        assert_ok(try_point("trace", values, 4, &answer, &error));
        assert_close(output_of("trace", &answer, "impedance"), cases[i].impedance, 1e-4);
        assert_close(output_of("trace", &answer, "effective_dk"), cases[i].effective_dk, 1e-4);
    }
}

/* E. Hammerstad, O. Jensen, MTT-S Digest 1980, eqs (1)-(5), values from memory and recomputed:
 * their formula is within 0.11 % in Z0 of the exact solution; thickness 0. */
static void test_thin_traces_agree_with_hammerstad_and_jensen(void **state) {
    (void)state;
    static const struct {
        double ratio, dk, impedance;
    } cases[] = {{0.5, 4.3, 96.40401}, {1, 4.3, 71.7514}, {1, 9.8, 49.2888}, {2, 4.3, 49.19181},
                 {3, 2.2, 50.91722},   {1, 1, 126.4239},  {5, 4.3, 26.16693}};
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        struct error error = {0};
        struct answer answer;
        struct named_value values[] = {{"height", 1e-3},
                                       {"width", cases[i].ratio * 1e-3},
                                       {"thickness", 0},
                                       {"dk", cases[i].dk}};
        assert_ok(try_point("trace", values, 4, &answer, &error));
        assert_close(output_of("trace", &answer, "impedance"), cases[i].impedance, 1.5e-3);
        assert_true((answer.flags & 1u) != 0); /* thin-sheet */
    }
}

/* D. M. Pozar, Microwave Engineering, 4th ed., example 3.7 (from memory): dk 9.9, h 0.5 mm, w 0.483
 * mm, df 0.001, 10 GHz: dielectric 0.022 dB/cm; copper Rs/(Z0 w) = 0.094 dB/cm is that of two
 * plates, of which a microstrip has about half (Pucel, Masse, Hartwig 1968). */
static void test_loss_of_pozars_microstrip(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {{"height", 0.5e-3},   {"width", 0.483e-3},
                                   {"thickness", 18e-6}, {"dk", 9.9},
                                   {"df", 0.001},        {"material_frequency", 10e9},
                                   {"frequency", 10e9},  {"copper_resistivity", 0}};
    assert_ok(try_point("trace", values, 8, &answer, &error));
    assert_close(output_of("trace", &answer, "attenuation"), 2.2, 2e-2);
    assert_true(output_of("trace", &answer, "resistance") == 0);
    values[4].value = 0;
    values[7].value = 1 / 5.813e7;
    assert_ok(try_point("trace", values, 8, &answer, &error));
    double copper = output_of("trace", &answer, "attenuation");
    assert_true(copper > 0.45 * 9.4 && copper < 0.6 * 9.4);
    assert_close(output_of("trace", &answer, "attenuation"),
                 8.6859 * output_of("trace", &answer, "resistance") /
                     (2 * output_of("trace", &answer, "impedance")),
                 5e-3);
}

/* At low frequency what a bar has: rho over width times thickness; a thousand times higher the
 * root of the frequency. */
static void test_resistance_from_dc_to_the_skin_effect(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {
        {"height", 0.2e-3}, {"width", 0.4e-3}, {"thickness", 35e-6}, {"frequency", 1e3}};
    assert_ok(try_point("trace", values, 4, &answer, &error));
    assert_close(output_of("trace", &answer, "resistance"), 1.72e-8 / (0.4e-3 * 35e-6), 1e-3);
    values[3].value = 1e10;
    assert_ok(try_point("trace", values, 4, &answer, &error));
    double high = output_of("trace", &answer, "resistance");
    values[3].value = 4e10;
    assert_ok(try_point("trace", values, 4, &answer, &error));
    assert_close(output_of("trace", &answer, "resistance"), 2 * high, 1e-3);
}

static void test_a_sheet_has_no_resistance_to_tell(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {{"height", 0.2e-3}, {"width", 0.4e-3}, {"thickness", 0}};
    assert_ok(try_point("trace", values, 3, &answer, &error));
    assert_true(isnan(output_of("trace", &answer, "resistance")));
    assert_true(isnan(output_of("trace", &answer, "attenuation")));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_thick_traces_agree_with_independent_solutions),
        cmocka_unit_test(test_thin_traces_agree_with_hammerstad_and_jensen),
        cmocka_unit_test(test_loss_of_pozars_microstrip),
        cmocka_unit_test(test_resistance_from_dc_to_the_skin_effect),
        cmocka_unit_test(test_a_sheet_has_no_resistance_to_tell),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

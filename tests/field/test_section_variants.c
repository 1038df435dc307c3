/* What any right answer obeys, with everything that can be added to a board. */
#include "check.h"
#include "groundrules/section.h"

#include <lapacke.h>
#include <string.h>

static const struct section_problem board = {.height = 0.5e-3,
                                             .dk = 4.3,
                                             .count = 3,
                                             .conductors = {{-0.9e-3, 0.3e-3, 35e-6, 0},
                                                            {-0.2e-3, 0.4e-3, 35e-6, 0},
                                                            {0.6e-3, 0.3e-3, 35e-6, 0}}};

enum { COATED, FLAT, COVERED, ENDING, WITHOUT, ETCHED, ALL, VARIANTS };

static struct section_problem variant(size_t which) {
    struct section_problem p = board;
    if (which == COATED || which == FLAT || which == ALL) {
        p.mask = 25e-6;
        p.mask_dk = 3.5;
        p.mask_flat = which == FLAT;
    }
    if (which == COVERED || which == ALL) {
        p.cover = 0.7e-3;
        p.cover_dk = 2.5;
    }
    if (which == ENDING) {
        p.plane = SECTION_PLANE_ENDS;
        p.plane_end = 1.3e-3;
    }
    if (which == WITHOUT)
        p.plane = SECTION_NO_PLANE;
    if (which == ETCHED || which == ALL)
        for (size_t i = 0; i < p.count; i++)
            p.conductors[i].etch = 12e-6;
    return p;
}

static struct section_solution solved(const struct section_problem *problem) {
    struct error error = {0};
    struct section_solution solution;
    assert_ok(section_solve(problem, &solution, &error));
    return solution;
}

static void test_signs_symmetry_and_row_sums(void **state) {
    (void)state;
    for (size_t k = 0; k < VARIANTS; k++) {
        struct section_problem problem = variant(k);
        struct section_solution s = solved(&problem);
        size_t n = s.count;
        assert_int_equal(n, k == WITHOUT ? 2 : 3);
        for (size_t i = 0; i < n; i++) {
            double sum = 0;
            for (size_t j = 0; j < n; j++) {
                double c = s.capacitance[i * n + j];
                assert_true(i == j ? c > 0 : c < 0);
                assert_true(c == s.capacitance[j * n + i]);
                assert_true(s.inductance[i * n + j] > 0);
                assert_true(s.inductance[i * n + j] == s.inductance[j * n + i]);
                sum += c;
            }
            assert_true(sum > 0);
        }
        assert_true(s.error < 1e-3);
    }
}

/* C v = lambda C0 v */
static void test_modes_lie_between_the_least_and_the_greatest_permittivity(void **state) {
    (void)state;
    for (size_t k = 0; k < VARIANTS; k++) {
        struct section_problem problem = variant(k);
        struct section_solution s = solved(&problem);
        double a[9], b[9], lambda[3];
        lapack_int n = (lapack_int)s.count;
        memcpy(a, s.capacitance, sizeof a);
        memcpy(b, s.vacuum_capacitance, sizeof b);
        assert_int_equal(LAPACKE_dsygv(LAPACK_ROW_MAJOR, 1, 'N', 'U', n, a, n, b, n, lambda), 0);
        assert_true(lambda[0] > (k == COVERED || k == ALL ? 2.5 : 1));
        assert_true(lambda[n - 1] < problem.dk);
    }
}

static void scale(struct section_problem *p, double factor) {
    p->height *= factor;
    p->mask *= factor;
    p->cover *= factor;
    p->plane_end *= factor;
    for (size_t i = 0; i < p->count; i++) {
        p->conductors[i].left *= factor;
        p->conductors[i].width *= factor;
        p->conductors[i].thickness *= factor;
        p->conductors[i].etch *= factor;
    }
}

/* Per metre only ratios of lengths count, also where a logarithm has no plane to refer to. */
static void test_the_unit_of_length_changes_nothing(void **state) {
    (void)state;
    for (size_t k = 0; k < VARIANTS; k++) {
        struct section_problem small = variant(k), large = small;
        scale(&large, 1e4);
        struct section_solution a = solved(&small), b = solved(&large);
        for (size_t i = 0; i < a.count * a.count; i++) {
            assert_close(a.capacitance[i], b.capacitance[i], 2e-7);
            assert_close(a.inductance[i], b.inductance[i], 2e-7);
        }
    }
}

/* The mirrored section is solved in halves; shifted by a nanometre it is solved whole. */
static void test_halves_and_whole_agree(void **state) {
    (void)state;
    for (size_t k = 0; k < VARIANTS; k++) {
        struct section_problem whole = variant(k), halves = whole;
        whole.conductors[0].width += 1e-12;
        struct section_solution a = solved(&halves), b = solved(&whole);
        for (size_t i = 0; i < a.count * a.count; i++) {
            assert_close(a.capacitance[i], b.capacitance[i], 2e-4);
            assert_close(a.inductance[i], b.inductance[i], 1e-5);
        }
    }
}

static void test_a_section_and_its_mirror_image_agree(void **state) {
    (void)state;
    struct section_problem one = variant(ALL), other = one;
    one.conductors[2].width = other.conductors[0].width = 0.8e-3;
    other.conductors[0].left = -(one.conductors[2].left + one.conductors[2].width);
    struct section_solution a = solved(&one), b = solved(&other);
    for (size_t i = 0; i < 3; i++)
        for (size_t j = 0; j < 3; j++)
            assert_close(a.capacitance[i * 3 + j], b.capacitance[(2 - i) * 3 + 2 - j], 1e-6);
}

/* The odd mode of the outer two is blind to how the middle one is tied. */
static void test_the_odd_mode_is_blind_to_the_strip_between(void **state) {
    (void)state;
    static const enum section_tie middle[] = {SECTION_TIED, SECTION_FLOATING, SECTION_TIED_ONE_END};
    static const size_t kinds[] = {COATED, FLAT, COVERED, ETCHED, ALL};
    for (size_t k = 0; k < 5; k++) {
        struct section_problem problem = variant(kinds[k]);
        struct section_solution s = solved(&problem), reduced;
        struct error error = {0};
        assert_ok(section_dielectric_capacitance(&problem, &s, &error));
        double want[3] = {0};
        for (size_t t = 0; t < 3; t++) {
            enum section_tie ties[] = {SECTION_SIGNAL, middle[t], SECTION_SIGNAL};
            assert_ok(section_reduce(&s, ties, &reduced, &error));
            double got[] = {reduced.capacitance[0] - reduced.capacitance[1],
                            reduced.inductance[0] - reduced.inductance[1],
                            reduced.dielectric_capacitance[0] - reduced.dielectric_capacitance[1]};
            for (size_t i = 0; i < 3; i++) {
                if (t > 0)
                    assert_close(got[i], want[i], 1e-9);
                want[i] = got[i];
            }
        }
    }
}

/* Conductor loss is a small difference of inductances: no steps, second differences of the size
 * that curvature has. */
static void test_inductance_is_smooth_in_the_thickness(void **state) {
    (void)state;
    static const size_t kinds[] = {COVERED, ENDING, WITHOUT, ETCHED};
    for (size_t k = 0; k < 4; k++) {
        double inductance[5];
        for (size_t i = 0; i < 5; i++) {
            struct section_problem problem = variant(kinds[k]);
            for (size_t c = 0; c < problem.count; c++)
                problem.conductors[c].thickness *= 1 + 2e-3 * (double)i;
            inductance[i] = solved(&problem).inductance[0];
        }
        for (size_t i = 1; i < 4; i++)
            assert_near((inductance[i + 1] - 2 * inductance[i] + inductance[i - 1]) / inductance[i],
                        0, 1e-6);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_signs_symmetry_and_row_sums),
        cmocka_unit_test(test_modes_lie_between_the_least_and_the_greatest_permittivity),
        cmocka_unit_test(test_the_unit_of_length_changes_nothing),
        cmocka_unit_test(test_halves_and_whole_agree),
        cmocka_unit_test(test_a_section_and_its_mirror_image_agree),
        cmocka_unit_test(test_the_odd_mode_is_blind_to_the_strip_between),
        cmocka_unit_test(test_inductance_is_smooth_in_the_thickness),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

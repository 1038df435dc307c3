/* C. R. Paul, Analysis of Multiconductor Transmission Lines, 2nd ed., Wiley 2008; figures from
 * secondary copies, recomputed. */
#include "check.h"
#include "groundrules/line.h"
#include "stepping.h"

#include <string.h>

static struct line_problem pair(const double *l, const double *c, double length, size_t driven) {
    struct line_problem problem = {.count = 2, .length = length};
    memcpy(problem.inductance, l, 4 * sizeof *l);
    memcpy(problem.capacitance, c, 4 * sizeof *c);
    for (size_t i = 0; i < 2; i++)
        problem.near[i] = problem.far[i] = (struct line_end){50, 0, 0};
    problem.near[driven].emf = 1;
    return problem;
}

static void peaks_of(const struct line_problem *problem, size_t victim, double edge,
                     struct line_peak *near, struct line_peak *far) {
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    struct line_response *response = line_response_create(problem, edge, arena, &error);
    assert_ok(response != NULL);
    assert_ok(line_response_peaks(response, victim, edge, near, far, &error));
    arena_free(arena);
}

/* Sec. 9.3.1: three wires of a ribbon cable, an outer one as reference, centre wire the victim,
 * 2 m, 50 ohm, 20 ns: "around 110 mV"; a Fourier series of 1500
 * harmonics, which rounds the corner of the ramp, gives 112.92 at 20.1 ns and -108.93 mV at 28.7
 * ns; the job's half percent. */
static void test_ribbon_cable(void **state) {
    (void)state;
    static const double l[] = {0.7485e-6, 0.5077e-6, 0.5077e-6, 1.0154e-6};
    static const double c[] = {37.432e-12, -18.716e-12, -18.716e-12, 24.982e-12};
    struct line_problem problem = pair(l, c, 2, 1);
    struct line_peak near, far;
    peaks_of(&problem, 0, 20e-9, &near, &far);
    assert_close(near.highest, 112.92e-3, 5e-3);
    assert_close(far.highest, 108.93e-3, 5e-3);
    assert_near(near.time, 20.1e-9, 0.2e-9);
    assert_near(far.time, 28.7e-9, 0.2e-9);
}

/* Sec. 9.3.2: three lands on a bare board, 0.254 m, 50 ohm, 6.25 ns; the set-up is the book's, the
 * frequency response was recomputed, the peaks too, as a Fourier series that rounds corners. */
static void test_lands_of_a_bare_board(void **state) {
    (void)state;
    static const double l[] = {1.10515e-6, 0.690613e-6, 0.690613e-6, 1.38123e-6};
    static const double c[] = {40.5985e-12, -20.2992e-12, -20.2992e-12, 29.7378e-12};
    struct line_problem problem = pair(l, c, 0.254, 1);
    struct line_peak near, far;
    peaks_of(&problem, 0, 6.25e-9, &near, &far);
    assert_close(near.highest, 95.64e-3, 5e-3);
    assert_close(far.highest, 88.77e-3, 5e-3);
    static const struct {
        double frequency, near, far;
    } values[] = {{1e5, 0.0005915767, 0.000510587},
                  {1e6, 0.005912711, 0.005103359},
                  {1e7, 0.05626937, 0.04868733},
                  {1e8, 0.125351, 0.1376426}};
    for (size_t k = 0; k < sizeof values / sizeof *values; k++) {
        struct error error = {0};
        double complex at_near[2], at_far[2];
        assert_ok(line_frequency_response(&problem, values[k].frequency, at_near, at_far, &error));
        assert_close(cabs(at_near[0]), values[k].near, 1e-5);
        assert_close(cabs(at_far[0]), values[k].far, 1e-5);
    }
}

/* Both once more by fine stepping, which rounds nothing; stepping drives conductor 0. */
static void test_both_by_fine_stepping(void **state) {
    (void)state;
    static const struct {
        double l[4], c[4], length, edge, step;
    } cases[] = {{{1.0154e-6, 0.5077e-6, 0.5077e-6, 0.7485e-6},
                  {24.982e-12, -18.716e-12, -18.716e-12, 37.432e-12},
                  2,
                  20e-9,
                  2e-12},
                 {{1.38123e-6, 0.690613e-6, 0.690613e-6, 1.10515e-6},
                  {29.7378e-12, -20.2992e-12, -20.2992e-12, 40.5985e-12},
                  0.254,
                  6.25e-9,
                  2e-12}};
    for (size_t k = 0; k < 2; k++) {
        struct line_problem problem = pair(cases[k].l, cases[k].c, cases[k].length, 0);
        struct line_peak near, far;
        peaks_of(&problem, 1, cases[k].edge, &near, &far);
        struct stepping_peak want = stepping_peaks(&problem, cases[k].edge, cases[k].step,
                                                   (size_t)(100e-9 / cases[k].step));
        assert_close(near.highest, want.near, 2e-4);
        assert_close(far.highest, want.far, 2e-4);
    }
}

/* Ch. 9's inductive-capacitive model, exact for a short line and weak coupling:
 * V_NE = j w l (Lm / (4 R) + R Cm / 4) for four equal ends R. */
static void test_low_frequencies_follow_the_inductive_capacitive_model(void **state) {
    (void)state;
    static const double l[] = {1.10418e-6, 0.690094e-6, 0.690094e-6, 1.38019e-6};
    static const double c[] = {40.628e-12, -20.314e-12, -20.314e-12, 29.7632e-12};
    struct line_problem problem = pair(l, c, 0.254, 1);
    double inductive = l[1] * 0.254 / (4 * 50), capacitive = 50 * -c[1] * 0.254 / 4;
    double frequency = 1e4, omega = 2 * 3.14159265358979323846 * frequency;
    double complex near[2], far[2];
    struct error error = {0};
    assert_ok(line_frequency_response(&problem, frequency, near, far, &error));
    assert_close(cimag(near[0]), omega * (inductive + capacitive), 1e-5);
    assert_close(cimag(far[0]), -omega * (inductive - capacitive), 1e-5);
}

/* Ch. 8: 50 ohm, 2 us, source 150 ohm, far end shorted, 100 V pulse of 6 us: the bounce diagram at
 * the source, reflections +1/2 and -1: 25, 25 - 25 - 12.5 ... V. */
static void test_bounces_of_a_shorted_line(void **state) {
    (void)state;
    struct line_problem problem = {.count = 1,
                                   .length = 400,
                                   .inductance = {0.25e-6},
                                   .capacitance = {100e-12},
                                   .near = {{150, 0, 1}},
                                   .far = {{0, 0, 0}}};
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    const double edge = 1e-9;
    struct line_response *response = line_response_create(&problem, edge, arena, &error);
    assert_ok(response != NULL);
    double near[21], far[21]; /* every us */
    assert_ok(line_response_samples(response, 0, edge, 1e-6, 21, near, far, &error));
    double step[21], incident = 0.25, level = 0;
    for (int t = 0; t <= 20; t++) { /* the wave comes back every 4 us */
        if (t % 4 == 0) {
            level += t == 0 ? incident : -incident * 1.5;
            incident *= t == 0 ? 1 : -0.5;
        }
        step[t] = level;
    }
    for (int t = 1; t <= 19; t++) {
        if (t % 4 == 0 || (t - 6) % 4 == 0)
            continue; /* an edge is passing */
        double got = 100 * (near[t] - (t >= 6 ? near[t - 6] : 0));
        double want = 100 * (step[t] - (t >= 6 ? step[t - 6] : 0));
        assert_near(got, want, 1e-6);
    }
    assert_near(100 * near[1], 25, 1e-9);
    assert_near(100 * near[5], -12.5, 1e-9);
    arena_free(arena);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_ribbon_cable),
        cmocka_unit_test(test_lands_of_a_bare_board),
        cmocka_unit_test(test_both_by_fine_stepping),
        cmocka_unit_test(test_low_frequencies_follow_the_inductive_capacitive_model),
        cmocka_unit_test(test_bounces_of_a_shorted_line),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

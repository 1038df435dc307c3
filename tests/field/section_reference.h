#ifndef TESTS_FIELD_SECTION_REFERENCE_H
#define TESTS_FIELD_SECTION_REFERENCE_H

#include "check.h"
#include "groundrules/section.h"

#include <string.h>

/* Independent reference values for ten cross-sections and their variants: a Galerkin
 * boundary-element code and an hp finite-element code, sharing nothing but the case list, agree to
 * 4e-6 on every entry (stated 1e-5).  Lengths mm, C pF/m, L nH/m; constants of CODATA 2018. */

struct section_reference {
    const char *name;
    double height, dk, thickness; /* mm */
    size_t count;
    double left[4], width[4];
    double capacitance[16], vacuum_capacitance[16], inductance[16]; /* all conductors */
};

/* The same with the guards eliminated. */
struct section_reduced_reference {
    const char *name;
    enum section_tie ties[4];
    double capacitance[4], inductance[4];
};

static const struct section_reference references[] = {
    {"P1", 1.6, 4.3, 0.035, 1, {-0.15}, {0.3}, {43.952675}, {15.589272}, {713.72802}},
    {"P2", 1.6, 4.3, 0.035, 1, {-1.5}, {3.0}, {118.39987}, {36.591813}, {304.07076}},
    {"P3", 0.19, 4.3, 0.035, 1, {-0.175}, {0.35}, {119.9774}, {38.279984}, {290.66105}},
    {"P4",
     1.6,
     4.3,
     0.035,
     2,
     {-0.45, 0.15},
     {0.3, 0.3},
     {54.429552, -23.321349, -23.321349, 54.429552},
     {20.889601, -10.32863, -10.32863, 20.889601},
     {704.97971, 348.56937, 348.56937, 704.97971}},
    {"P5",
     0.19,
     4.3,
     0.035,
     2,
     {-0.45, 0.15},
     {0.3, 0.3},
     {109.94971, -6.1474984, -6.1474984, 109.94971},
     {36.392357, -5.0942358, -5.0942358, 36.392357},
     {311.84784, 43.652749, 43.652749, 311.84784}},
    {"P6",
     1.6,
     4.3,
     0.035,
     2,
     {-0.8, 0.5},
     {0.3, 0.3},
     {46.029711, -9.6189071, -9.6189071, 46.029711},
     {16.939874, -4.7303243, -4.7303243, 16.939874},
     {712.37103, 198.92392, 198.92392, 712.37103}},
    {"P7",
     0.19,
     4.3,
     0.035,
     2,
     {-0.8, 0.5},
     {0.3, 0.3},
     {109.41698, -0.71310608, -0.71310608, 109.41698},
     {35.52905, -1.0992112, -1.0992112, 35.52905},
     {313.46633, 9.6981396, 9.6981396, 313.46633}},
    {"P8nomask",
     0.8,
     4.6,
     0.035,
     2,
     {-0.3, 0.1},
     {0.2, 0.2},
     {60.823266, -23.316095, -23.316095, 60.823266},
     {22.373125, -10.41975, -10.41975, 22.373125},
     {635.06067, 295.76439, 295.76439, 635.06067}},
    {"P9",
     1.6,
     4.3,
     0.035,
     3,
     {-0.85, -0.25, 0.55},
     {0.3, 0.5, 0.3},
     {54.824735, -23.680496, -2.6405185, -23.680496, 73.775156, -23.680496, -2.6405185, -23.680496,
      54.824735},
     {21.134612, -10.27632, -1.4372568, -10.27632, 28.915947, -10.27632, -1.4372568, -10.27632,
      21.134612},
     {695.36237, 319.06124, 202.42575, 319.06124, 611.56743, 319.06124, 202.42575, 319.06124,
      695.36237}},
    {"P9noguard",
     1.6,
     4.3,
     0.035,
     2,
     {-0.85, 0.55},
     {0.3, 0.3},
     {45.674613, -8.7280996, -8.7280996, 45.674613},
     {16.756233, -4.3753157, -4.3753157, 16.756233},
     {712.60822, 186.0732, 186.0732, 712.60822}},
    {"P10",
     0.19,
     4.3,
     0.035,
     3,
     {-0.85, -0.25, 0.55},
     {0.3, 0.5, 0.3},
     {109.95865, -6.4846388, -0.43271901, -6.4846388, 152.55933, -6.4846388, -0.43271901,
      -6.4846388, 109.95865},
     {36.416999, -5.3888421, -0.53682556, -5.3888421, 48.444259, -5.3888421, -0.53682556,
      -5.3888421, 36.416999},
     {310.95672, 35.687535, 9.8647339, 35.687535, 237.61597, 35.687535, 9.8647339, 35.687535,
      310.95672}},
    {"P10noguard",
     0.19,
     4.3,
     0.035,
     2,
     {-0.85, 0.55},
     {0.3, 0.3},
     {109.41498, -0.60008017, -0.60008017, 109.41498},
     {35.519096, -0.94853133, -0.94853133, 35.519096},
     {313.47761, 8.3713655, 8.3713655, 313.47761}},
    {"P11",
     1.6,
     4.3,
     0.035,
     4,
     {-10.9, -0.6, 0.3, 0.9},
     {10.0, 0.3, 0.3, 10.0},
     {305.55099, -26.381468, -4.0450935, -5.2338869, -26.381468, 58.917381, -12.257273, -4.0450935,
      -4.0450935, -12.257273, 58.917381, -26.381468, -5.2338869, -4.0450935, -26.381468, 305.55099},
     {88.823254, -11.703878, -2.247148, -4.7047289, -11.703878, 23.294125, -5.2645425, -2.247148,
      -2.247148, -5.2645425, 23.294125, -11.703878, -4.7047289, -2.247148, -11.703878, 88.823254},
     {137.41549, 79.088076, 38.330363, 14.330021, 79.088076, 555.53956, 152.44179, 38.330363,
      38.330363, 152.44179, 555.53956, 79.088076, 14.330021, 38.330363, 79.088076, 137.41549}},
    {"P11nopour",
     1.6,
     4.3,
     0.035,
     2,
     {-0.6, 0.3},
     {0.3, 0.3},
     {48.695052, -14.908967, -14.908967, 48.695052},
     {18.233895, -6.8471215, -6.8471215, 18.233895},
     {710.38248, 266.76008, 266.76008, 710.38248}},
    {"P13",
     1.6,
     4.3,
     0.035,
     2,
     {-0.8, -0.2},
     {0.2, 1.0},
     {46.835509, -21.067587, -21.067587, 76.10561},
     {18.11976, -9.4921068, -9.4921068, 27.32416},
     {750.65909, 260.77055, 260.77055, 497.79253}},
};

static const struct section_reduced_reference reduced_references[] = {
    {"P9",
     {SECTION_SIGNAL, SECTION_TIED, SECTION_SIGNAL},
     {54.824735, -2.6405185, -2.6405185, 54.824735},
     {528.90472, 35.968104, 35.968104, 528.90472}},
    {"P9",
     {SECTION_SIGNAL, SECTION_FLOATING, SECTION_SIGNAL},
     {47.223722, -10.241531, -10.241531, 47.223722},
     {695.36237, 202.42575, 202.42575, 695.36237}},
    {"P9",
     {SECTION_SIGNAL, SECTION_TIED_ONE_END, SECTION_SIGNAL},
     {54.824735, -2.6405185, -2.6405185, 54.824735},
     {695.36237, 202.42575, 202.42575, 695.36237}},
    {"P10",
     {SECTION_SIGNAL, SECTION_TIED, SECTION_SIGNAL},
     {109.95865, -0.43271901, -0.43271901, 109.95865},
     {305.59681, 4.5048242, 4.5048242, 305.59681}},
    {"P10",
     {SECTION_SIGNAL, SECTION_FLOATING, SECTION_SIGNAL},
     {109.68302, -0.70835302, -0.70835302, 109.68302},
     {310.95672, 9.8647339, 9.8647339, 310.95672}},
    {"P10",
     {SECTION_SIGNAL, SECTION_TIED_ONE_END, SECTION_SIGNAL},
     {109.95865, -0.43271901, -0.43271901, 109.95865},
     {310.95672, 9.8647339, 9.8647339, 310.95672}},
    {"P11",
     {SECTION_TIED, SECTION_SIGNAL, SECTION_SIGNAL, SECTION_TIED},
     {58.917381, -12.257273, -12.257273, 58.917381},
     {503.36311, 113.76158, 113.76158, 503.36311}},
    {"P11",
     {SECTION_FLOATING, SECTION_SIGNAL, SECTION_SIGNAL, SECTION_FLOATING},
     {56.573384, -12.995936, -12.995936, 56.573384},
     {555.53956, 152.44179, 152.44179, 555.53956}},
    {"P11",
     {SECTION_TIED_ONE_END, SECTION_SIGNAL, SECTION_SIGNAL, SECTION_TIED_ONE_END},
     {58.917381, -12.257273, -12.257273, 58.917381},
     {555.53956, 152.44179, 152.44179, 555.53956}},
};

static inline struct section_problem reference_problem(const struct section_reference *reference) {
    struct section_problem problem = {
        .height = reference->height * 1e-3, .dk = reference->dk, .count = reference->count};
    for (size_t i = 0; i < reference->count; i++)
        problem.conductors[i] = (struct section_conductor){
            reference->left[i] * 1e-3, reference->width[i] * 1e-3, reference->thickness * 1e-3, 0};
    return problem;
}

typedef bool section_solver(const struct section_problem *, struct section_solution *,
                            struct error *);

static inline void assert_entries(const double *got, const double *want, size_t n, double unit,
                                  double relative) {
    for (size_t i = 0; i < n; i++)
        assert_close(got[i], want[i] * unit, relative);
}

static inline void assert_references(section_solver *solver, double relative) {
    struct error error = {0};
    for (size_t i = 0; i < sizeof references / sizeof *references; i++) {
        const struct section_reference *r = &references[i];
        struct section_problem problem = reference_problem(r);
        struct section_solution solution;
        assert_ok(solver(&problem, &solution, &error));
        size_t n = r->count * r->count;
        assert_entries(solution.capacitance, r->capacitance, n, 1e-12, relative);
        assert_entries(solution.vacuum_capacitance, r->vacuum_capacitance, n, 1e-12, relative);
        assert_entries(solution.inductance, r->inductance, n, 1e-9, relative);
        if (!isnan(solution.error))
            assert_true(solution.error <= 1e-3);
    }
}

static inline const struct section_reference *reference_named(const char *name) {
    for (size_t i = 0; i < sizeof references / sizeof *references; i++)
        if (strcmp(references[i].name, name) == 0)
            return &references[i];
    return NULL;
}

static inline void assert_reduced_references(section_solver *solver, double relative) {
    struct error error = {0};
    for (size_t i = 0; i < sizeof reduced_references / sizeof *reduced_references; i++) {
        const struct section_reduced_reference *r = &reduced_references[i];
        struct section_problem problem = reference_problem(reference_named(r->name));
        struct section_solution solution;
        assert_ok(solver(&problem, &solution, &error));
        assert_ok(section_reduce(&solution, r->ties, &solution, &error));
        assert_int_equal(solution.count, 2);
        assert_entries(solution.capacitance, r->capacitance, 4, 1e-12, relative);
        assert_entries(solution.inductance, r->inductance, 4, 1e-9, relative);
    }
}

/* A. E. H. Love 1923, thin strip over a plane in air, exact: w/(2h) = (2/pi) [K E(phi,k) - E
 * F(phi,k)], sin^2 phi = (K - E)/(k^2 K), C = 2 eps0 K(k)/K(k'). */
static inline void assert_love(section_solver *solver, double relative) {
    static const double love[][2] = {
        {0.1, 12.6947057628}, {0.1875, 14.8174993187}, {0.5, 20.0098678978},
        {1.0, 26.3845823182}, {1.875, 36.1372987525},  {3.0, 47.8022662687},
        {6.0, 77.2076595191}, {10.0, 114.939324266},
    };
    struct error error = {0};
    for (size_t i = 0; i < sizeof love / sizeof *love; i++) {
        struct section_problem problem = {
            .height = 1e-3, .dk = 1, .count = 1, .conductors = {{0, love[i][0] * 1e-3, 0, 0}}};
        struct section_solution solution;
        assert_ok(solver(&problem, &solution, &error));
        assert_close(solution.capacitance[0], love[i][1] * 1e-12, relative);
        assert_close(solution.inductance[0],
                     SECTION_MU_0 * SECTION_EPSILON_0 / (love[i][1] * 1e-12), relative);
        assert_true(solution.error < 1e-4);
    }
}

/* The reference has eight printed digits. */
static inline void assert_error_covers(section_solver *solver, double most) {
    struct error error = {0};
    for (size_t i = 0; i < sizeof references / sizeof *references; i++) {
        const struct section_reference *r = &references[i];
        struct section_problem problem = reference_problem(r);
        struct section_solution solution;
        assert_ok(solver(&problem, &solution, &error));
        for (size_t j = 0; j < r->count * r->count; j++)
            assert_close(solution.capacitance[j], r->capacitance[j] * 1e-12, solution.error + 5e-8);
        assert_true(solution.error < most);
    }
}

#endif

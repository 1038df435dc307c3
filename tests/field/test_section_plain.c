#include "check.h"
#include "section_reference.h"

#include <string.h>

static struct section_problem problem_of(const struct section_reference *r) {
    struct section_problem problem = {
        .height = r->height * 1e-3, .dk = r->dk, .count = r->count};
    for (size_t i = 0; i < r->count; i++)
        problem.conductors[i] = (struct section_conductor){r->left[i] * 1e-3, r->width[i] * 1e-3,
                                                           r->thickness * 1e-3};
    return problem;
}

static double worst_of(const double *got, const double *want, size_t n, double unit) {
    double worst = 0;
    for (size_t i = 0; i < n; i++)
        worst = fmax(worst, fabs(got[i] / (want[i] * unit) - 1));
    return worst;
}

static void test_all(void **state) {
    (void)state;
    struct error error = {0};
    for (size_t i = 0; i < sizeof references / sizeof *references; i++) {
        const struct section_reference *r = &references[i];
        struct section_problem problem = problem_of(r);
        struct section_solution s;
        assert_ok(section_solve_plain(&problem, &s, &error));
        size_t n = r->count * r->count;
        printf("# %s %zu error %.1e: C %.1e C0 %.1e L %.1e\n", r->name, s.unknowns, s.error,
               worst_of(s.capacitance, r->capacitance, n, 1e-12),
               worst_of(s.vacuum_capacitance, r->vacuum_capacitance, n, 1e-12),
               worst_of(s.inductance, r->inductance, n, 1e-9));
    }
    for (size_t i = 0; i < sizeof reduced_references / sizeof *reduced_references; i++) {
        const struct section_reduced_reference *r = &reduced_references[i];
        for (size_t j = 0; j < sizeof references / sizeof *references; j++) {
            if (strcmp(references[j].name, r->name) != 0)
                continue;
            struct section_problem problem = problem_of(&references[j]);
            struct section_solution s;
            assert_ok(section_solve_plain(&problem, &s, &error));
            assert_ok(section_reduce(&s, r->ties, &s, &error));
            printf("# %s %d: C %.1e L %.1e\n", r->name, r->ties[2],
                   worst_of(s.capacitance, r->capacitance, 4, 1e-12),
                   worst_of(s.inductance, r->inductance, 4, 1e-9));
        }
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_all)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}

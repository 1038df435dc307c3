#include "check.h"
#include "groundrules/line.h"
#include "pair_reference.h"

static struct line_problem problem_of(const struct pair_reference *reference) {
    const double *l = reference->inductance, *c = reference->capacitance;
    struct line_problem problem = {.count = 2,
                                   .length = reference->length,
                                   .inductance = {l[0], l[1], l[1], l[0]},
                                   .capacitance = {c[0], c[1], c[1], c[0]}};
    for (size_t i = 0; i < 2; i++) {
        problem.near[i] = (struct line_end){reference->logic ? 30 : 50, 0, i == 0};
        problem.far[i] =
            reference->logic ? (struct line_end){INFINITY, 5e-12, 0} : (struct line_end){50, 0, 0};
    }
    return problem;
}

static void test_frequency_responses_agree_with_nodal_admittances(void **state) {
    (void)state;
    for (size_t k = 0; k < sizeof pair_references / sizeof *pair_references; k++) {
        const struct pair_reference *reference = &pair_references[k];
        struct line_problem problem = problem_of(reference);
        struct error error = {0};
        for (size_t f = 0; f < 5; f++) {
            const struct pair_frequency *want = &reference->frequency[f];
            double complex near[2], far[2];
            assert_ok(line_frequency_response(&problem, want->frequency, near, far, &error));
            const double complex got[4] = {near[0], near[1], far[0], far[1]};
            for (size_t i = 0; i < 4; i++) {
                double complex value = want->real[i] + I * want->imaginary[i];
                if (cabs(got[i] - value) > 2e-6 * cabs(value) + 1e-9)
                    print_error("%s at %g Hz, end %zu\n", reference->name, want->frequency, i);
                assert_true(cabs(got[i] - value) <= 2e-6 * cabs(value) + 1e-9);
            }
        }
    }
}

/* Half a percent is the job; the stored values of the transform carry up to 0.1 % themselves. */
static void test_peaks_agree_with_exact_bounces_and_with_the_laplace_transform(void **state) {
    (void)state;
    const double swing = 3.3e3;
    for (size_t k = 0; k < sizeof pair_references / sizeof *pair_references; k++) {
        const struct pair_reference *reference = &pair_references[k];
        struct line_problem problem = problem_of(reference);
        struct error error = {0};
        struct arena *arena = arena_create(&error);
        assert_ok(arena != NULL);
        struct line_response *response =
            line_response_create(&problem, reference->peak[0].edge, arena, &error);
        assert_ok(response != NULL);
        for (size_t p = 0; p < reference->peaks; p++) {
            const struct pair_peak *want = &reference->peak[p];
            struct line_peak near, far;
            assert_ok(line_response_peaks(response, 1, want->edge, &near, &far, &error));
            double allowed = reference->logic ? 5e-3 : 2e-5;
            if (fabs(near.highest * swing - want->near) > allowed * want->near ||
                fabs(far.highest * swing - want->far) > allowed * want->far)
                print_error("%s, edge %g s: error claimed %g %g\n", reference->name, want->edge,
                            near.error, far.error);
            assert_close(near.highest * swing, want->near, allowed);
            assert_close(far.highest * swing, want->far, allowed);
            assert_true(near.error < allowed && far.error < allowed);
        }
        arena_free(arena);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_frequency_responses_agree_with_nodal_admittances),
        cmocka_unit_test(test_peaks_agree_with_exact_bounces_and_with_the_laplace_transform),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

#include "check.h"
#include "report/axis.h"

#include <string.h>

static struct axis made(double low, double high, enum dimension dimension, bool logarithmic) {
    struct axis axis;
    struct error error = {0};
    struct axis_request request = {
        .lowest = low, .highest = high, .dimension = dimension, .logarithmic = logarithmic};
    assert_ok(axis_make(&request, &axis, &error));
    return axis;
}

static size_t majors(const struct axis *axis) {
    size_t count = 0;
    for (size_t i = 0; i < axis->count; i++)
        count += axis->ticks[i].major;
    return count;
}

/* Ends hold what is to be shown, labelled ticks ascend, lie within the ends and are not too many;
 * for ranges over eighteen decades. */
static void test_every_range_gets_sensible_ticks(void **state) {
    (void)state;
    static const double spans[] = {1.0001, 1.3, 2, 7, 30, 900, 1e5};
    for (int decade = -12; decade <= 6; decade++)
        for (size_t s = 0; s < sizeof spans / sizeof *spans; s++)
            for (int logarithmic = 0; logarithmic < 2; logarithmic++) {
                double low = 1.7 * pow(10, decade), high = low * spans[s];
                struct axis axis = made(low, high, DIMENSION_VOLTAGE, logarithmic);
                assert_true(axis.low <= low * (1 + 1e-9) && axis.high >= high * (1 - 1e-9));
                assert_true(majors(&axis) >= 2 && majors(&axis) <= 10);
                const struct axis_tick *before = NULL;
                for (size_t i = 0; i < axis.count; i++) {
                    if (!axis.ticks[i].major)
                        continue;
                    double place = axis_position(&axis, axis.ticks[i].value);
                    assert_true(place >= -1e-9 && place <= 1 + 1e-9);
                    assert_true(axis.ticks[i].label[0] != '\0');
                    if (before != NULL) {
                        assert_true(axis.ticks[i].value > before->value);
                        assert_string_not_equal(axis.ticks[i].label, before->label);
                    }
                    before = &axis.ticks[i];
                }
            }
}

static void test_labels_are_in_one_engineering_unit(void **state) {
    (void)state;
    struct axis axis = made(0, 0.35, DIMENSION_VOLTAGE, false);
    assert_string_equal(axis.unit, "mV");
    assert_near(axis.scale, 1e3, 1e-9);
    axis = made(0.15e-3, 12e-3, DIMENSION_LENGTH, true);
    assert_string_equal(axis.unit, "mm");
}

static void test_a_logarithmic_axis_refuses_zero(void **state) {
    (void)state;
    struct axis axis;
    struct error error = {0};
    struct axis_request request = {
        .lowest = 0, .highest = 1, .dimension = DIMENSION_VOLTAGE, .logarithmic = true};
    assert_false(axis_make(&request, &axis, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    error = (struct error){0};
    request.logarithmic = false;
    request.highest = NAN;
    assert_false(axis_make(&request, &axis, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_every_range_gets_sensible_ticks),
        cmocka_unit_test(test_labels_are_in_one_engineering_unit),
        cmocka_unit_test(test_a_logarithmic_axis_refuses_zero),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

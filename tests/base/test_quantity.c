#include "check.h"
#include "groundrules/quantity.h"

#include <locale.h>
#include <stdlib.h>
#include <string.h>

static double value_of(const char *text, enum dimension dimension) {
    struct error error = {0};
    struct quantity quantity = {0};
    assert_ok(quantity_parse(text, dimension, &quantity, &error));
    assert_true(quantity.dimension == dimension);
    assert_true(quantity.minus == 0.0 && quantity.plus == 0.0);
    return quantity.value;
}

/* Bitwise: the decimal value as the compiler reads it. */
#define assert_same(text, dimension, want) assert_true(value_of((text), (dimension)) == (want))

static void test_a_length_is_exactly_its_decimal_value_in_metres(void **state) {
    (void)state;
    assert_same("0.35 mm", DIMENSION_LENGTH, 0.35e-3);
    assert_same("0.35mm", DIMENSION_LENGTH, 0.35e-3);
    assert_same("  0.35   mm ", DIMENSION_LENGTH, 0.35e-3);
    assert_same("1.6 mm", DIMENSION_LENGTH, 1.6e-3);
    assert_same("35 um", DIMENSION_LENGTH, 35e-6);
    assert_same("35e-3 mm", DIMENSION_LENGTH, 35e-6);
    assert_same("14 mil", DIMENSION_LENGTH, 355.6e-6);
    assert_same("0.1 in", DIMENSION_LENGTH, 2.54e-3);
    assert_same("12 cm", DIMENSION_LENGTH, 0.12);
    assert_same("500 nm", DIMENSION_LENGTH, 500e-9);
    assert_same("0 mm", DIMENSION_LENGTH, 0.0);
    assert_same("-0.2 mm", DIMENSION_LENGTH, -0.2e-3);
    for (int i = 1; i < 10000; i++) {
        char text[40];
        char exponent[40];
        snprintf(text, sizeof text, "%d.%03d mm", i / 1000, i % 1000);
        snprintf(exponent, sizeof exponent, "%de-6", i);
        assert_same(text, DIMENSION_LENGTH, strtod(exponent, NULL));
    }
}

static void test_signs_of_micro_and_ohm_are_read_in_every_form(void **state) {
    (void)state;
    assert_same("35 \xC2\xB5m", DIMENSION_LENGTH, 35e-6);
    assert_same("35 \xCE\xBCm", DIMENSION_LENGTH, 35e-6);
    assert_same("50 \xCE\xA9", DIMENSION_RESISTANCE, 50.0);
    assert_same("50 \xE2\x84\xA6", DIMENSION_RESISTANCE, 50.0);
    assert_same("50ohm", DIMENSION_RESISTANCE, 50.0);
    assert_same("50 Ohm", DIMENSION_RESISTANCE, 50.0);
    assert_same("4.7 k\xCE\xA9", DIMENSION_RESISTANCE, 4700.0);
    assert_same("4.7 kohm", DIMENSION_RESISTANCE, 4700.0);
    assert_same("1 Mohm", DIMENSION_RESISTANCE, 1e6);
    assert_same("3 mohm", DIMENSION_RESISTANCE, 3e-3);
    assert_same("\xE2\x88\x92"
                "3.2\xE2\x80\x89"
                "dB",
                DIMENSION_LEVEL, -3.2);
    assert_same("3\xC2\xA0V", DIMENSION_VOLTAGE, 3.0);
}

static void test_every_dimension_reads_its_own_example(void **state) {
    (void)state;
    for (int i = 0; i < (int)DIMENSION_WORD; i++)
        value_of(dimension_example((enum dimension)i), (enum dimension)i);
    assert_same("1.2 ns", DIMENSION_TIME, 1.2e-9);
    assert_same("5 pF", DIMENSION_CAPACITANCE, 5e-12);
    assert_same("3.3 V", DIMENSION_VOLTAGE, 3.3);
    assert_same("800 mV", DIMENSION_VOLTAGE, 0.8);
    assert_same("25 %", DIMENSION_RATIO, 0.25);
    assert_same("0.25", DIMENSION_RATIO, 0.25);
    assert_same("100 MHz", DIMENSION_FREQUENCY, 1e8);
    assert_same("1.72e-8 ohm m", DIMENSION_RESISTIVITY, 1.72e-8);
    assert_same("1.72e-8 \xCE\xA9\xC2\xB7m", DIMENSION_RESISTIVITY, 1.72e-8);
    assert_same("350 nH/m", DIMENSION_INDUCTANCE_PER_LENGTH, 350e-9);
    assert_same("3.5 nH/cm", DIMENSION_INDUCTANCE_PER_LENGTH, 350e-9);
    assert_same("2 m\xCE\xA9/m/\xE2\x88\x9AHz", DIMENSION_SKIN_RESISTANCE, 2e-3);
    assert_close(value_of("150 ps/in", DIMENSION_SLOWNESS), 150e-12 / 0.0254, 1e-15);
    assert_same("4", DIMENSION_COUNT, 4.0);
}

static void test_open_is_an_infinite_resistance(void **state) {
    (void)state;
    assert_true(isinf(value_of("open", DIMENSION_RESISTANCE)));
    struct quantity quantity;
    assert_false(quantity_parse("open", DIMENSION_LENGTH, &quantity, NULL));
}

static void check_tolerance(const char *text, enum dimension dimension, double value, double minus,
                            double plus) {
    struct error error = {0};
    struct quantity quantity = {0};
    assert_ok(quantity_parse(text, dimension, &quantity, &error));
    assert_close(quantity.value, value, 1e-15);
    assert_close(quantity.minus, minus, 1e-14);
    assert_close(quantity.plus, plus, 1e-14);
}

static void test_tolerances_are_read_in_percent_and_in_units(void **state) {
    (void)state;
    check_tolerance("1.51 mm \xC2\xB1 10 %", DIMENSION_LENGTH, 1.51e-3, 0.151e-3, 0.151e-3);
    check_tolerance("1.51 mm +/- 10%", DIMENSION_LENGTH, 1.51e-3, 0.151e-3, 0.151e-3);
    check_tolerance("1.51mm+/-0.15mm", DIMENSION_LENGTH, 1.51e-3, 0.15e-3, 0.15e-3);
    check_tolerance("1.51 \xC2\xB1 0.15 mm", DIMENSION_LENGTH, 1.51e-3, 0.15e-3, 0.15e-3);
    check_tolerance("4.3 +/- 0.2", DIMENSION_NUMBER, 4.3, 0.2, 0.2);
    check_tolerance("0.2 mm +15 % -5 %", DIMENSION_LENGTH, 0.2e-3, 0.01e-3, 0.03e-3);
    check_tolerance("0.2 mm -5 % +15 %", DIMENSION_LENGTH, 0.2e-3, 0.01e-3, 0.03e-3);
    check_tolerance("35 um +10 um -5 um", DIMENSION_LENGTH, 35e-6, 5e-6, 10e-6);
    check_tolerance("-40 dB +/- 50 dB", DIMENSION_LEVEL, -40.0, 50.0, 50.0);
}

static const struct {
    const char *text;
    enum dimension dimension;
    const char *reason;
} refused[] = {
    {"", DIMENSION_LENGTH, "nothing is written"},
    {"   ", DIMENSION_LENGTH, "nothing is written"},
    {"35", DIMENSION_LENGTH, "\"35\": the unit is missing; expected a length, such as \"0.35 mm\""},
    {"35 V", DIMENSION_LENGTH, "\"V\" is the unit of a voltage"},
    {"35 mm", DIMENSION_VOLTAGE, "\"mm\" is the unit of a length"},
    {"35 furlong", DIMENSION_LENGTH, "\"furlong\" is not a known unit"},
    {"35 MM", DIMENSION_LENGTH, "\"MM\" is not a known unit"},
    {"4.3 mm", DIMENSION_NUMBER, "no unit is expected, found \"mm\""},
    {"mm", DIMENSION_LENGTH, "no number found"},
    {".5 mm", DIMENSION_LENGTH, "a digit is missing before the point"},
    {"5. mm", DIMENSION_LENGTH, "a digit is missing after the point"},
    {"0,35 mm", DIMENSION_LENGTH, "a decimal comma is not accepted"},
    {"0x10 mm", DIMENSION_LENGTH, "hexadecimal"},
    {"nan mm", DIMENSION_LENGTH, "no number found"},
    {"inf mm", DIMENSION_LENGTH, "no number found"},
    {"infinity ohm", DIMENSION_RESISTANCE, "no number found"},
    {"1e999 mm", DIMENSION_LENGTH, "the number is too large"},
    {"1e99999999999999999999 mm", DIMENSION_LENGTH, "the number is too large"},
    {"1e35 mm", DIMENSION_LENGTH, "the number is too large"},
    {"1e-99 mm", DIMENSION_LENGTH, "the number is too small"},
    {"1e mm", DIMENSION_LENGTH, "\"e mm\" is not a known unit"},
    {"0.35 mm wide", DIMENSION_LENGTH, "\"mm wide\" is not a known unit"},
    {"0.35 mm 0.4 mm", DIMENSION_LENGTH, "not a known unit"},
    {"1 mm +/- -10 %", DIMENSION_LENGTH, "must not be negative"},
    {"1 mm +/- 100 %", DIMENSION_LENGTH, "the tolerance reaches zero"},
    {"0 mm +/- 1 um", DIMENSION_LENGTH, "the tolerance reaches zero"},
    {"1 mm +/- 0.1", DIMENSION_LENGTH, "the unit is missing"},
    {"1 mm +/-", DIMENSION_LENGTH, "no number found"},
    {"1 mm +10 %", DIMENSION_LENGTH, "the other side of the tolerance is missing"},
    {"1 mm +10 % +5 %", DIMENSION_LENGTH, "given twice"},
    {"2 +/- 10 %", DIMENSION_COUNT, "no tolerance is accepted here"},
    {"2.5", DIMENSION_COUNT, "not a whole number"},
    {"1 mm .. 2 mm", DIMENSION_LENGTH, "a range is not accepted here"},
    {"1.2.3 mm", DIMENSION_LENGTH, "not a known unit"},
    {"11111111111111111111111111111111111111111111111 mm", DIMENSION_LENGTH, "too many digits"},
};

static void test_what_is_no_value_is_refused_with_its_reason(void **state) {
    (void)state;
    for (size_t i = 0; i < sizeof refused / sizeof refused[0]; i++) {
        struct error error = {0};
        struct quantity quantity = {-7.0, -7.0, -7.0, DIMENSION_WORD};
        if (quantity_parse(refused[i].text, refused[i].dimension, &quantity, &error) ||
            strstr(error.message, refused[i].reason) == NULL) {
            print_error("\"%s\": got \"%s\", want \"%s\"\n", refused[i].text, error.message,
                        refused[i].reason);
            fail();
        }
        assert_true(error.kind == ERROR_INPUT);
        assert_true(quantity.value == -7.0 && quantity.dimension == DIMENSION_WORD);
    }
}

static void test_a_text_that_is_too_long_is_refused(void **state) {
    (void)state;
    char text[1000];
    memset(text, '1', sizeof text);
    text[sizeof text - 1] = '\0';
    struct error error = {0};
    struct quantity quantity;
    assert_false(quantity_parse(text, DIMENSION_LENGTH, &quantity, &error));
    assert_non_null(strstr(error.message, "too long"));
}

static void check_range(const char *text, double from, double to, bool is_range) {
    struct error error = {0};
    struct quantity quantity = {0};
    struct interval range = {0};
    bool got = !is_range;
    assert_ok(quantity_parse_range(text, DIMENSION_RESISTANCE, 1.0, 1e3, &quantity, &range, &got,
                                   &error));
    assert_true(got == is_range);
    assert_true(range.from == from && range.to == to);
    if (is_range)
        assert_close(quantity.value, (from + to) / 2, 1e-15);
}

static void test_ranges_are_read_with_the_unit_at_either_end(void **state) {
    (void)state;
    check_range("10 ohm .. 40 ohm", 10.0, 40.0, true);
    check_range("10 .. 40 ohm", 10.0, 40.0, true);
    check_range("10..40 ohm", 10.0, 40.0, true);
    check_range("0.1 kohm..400ohm", 100.0, 400.0, true);
    check_range("10 ohm \xE2\x80\xA6 40 ohm", 10.0, 40.0, true);
    check_range("up to 40 ohm", 1.0, 40.0, true);
    check_range("at least 10 ohm", 10.0, 1e3, true);
    check_range("25 ohm", 25.0, 25.0, false);
}

static void test_impossible_ranges_are_refused(void **state) {
    (void)state;
    static const char *const texts[][2] = {
        {"40 ohm .. 10 ohm", "the smaller value must come first"},
        {"10 ohm .. 40", "the unit is missing"},
        {"10 ohm ..", "no number found"},
        {".. 10 ohm", "no number found"},
        {"10 ohm .. 20 ohm .. 30 ohm", "was not expected"},
        {"10 ohm .. 40 ohm +/- 5 %", "a range takes no tolerance"},
        {"10 ohm +/- 5 % .. 40 ohm", "a range takes no tolerance"},
        {"up to 40 ohm +/- 5 %", "a range takes no tolerance"},
        {"10 ohm .. open", "a range cannot end in \"open\""},
        {"up to 0.5 ohm", "the lowest value accepted is 1 ohm"},
        {"at least 2 kohm", "the highest value accepted is 1 kohm"},
        {"10 ohm .. 40 V", "\"V\" is the unit of a voltage"},
        {"10 ohm .. 40 ohm in 5 points", "was not expected"},
    };
    for (size_t i = 0; i < sizeof texts / sizeof texts[0]; i++) {
        struct error error = {0};
        struct quantity quantity = {0};
        struct interval range = {0};
        bool is_range = false;
        if (quantity_parse_range(texts[i][0], DIMENSION_RESISTANCE, 1.0, 1e3, &quantity, &range,
                                 &is_range, &error) ||
            strstr(error.message, texts[i][1]) == NULL) {
            print_error("\"%s\": got \"%s\"\n", texts[i][0], error.message);
            fail();
        }
    }
}

static void test_points_of_a_sweep_run_from_end_to_end(void **state) {
    (void)state;
    struct error error = {0};
    double points[QUANTITY_MOST_POINTS];
    size_t count = 0;
    bool logarithmic = true;
    assert_ok(quantity_parse_points("0.1 mm .. 0.5 mm in 5 points", DIMENSION_LENGTH, points,
                                    QUANTITY_MOST_POINTS, &count, &logarithmic, &error));
    assert_int_equal(count, 5);
    assert_false(logarithmic);
    for (size_t i = 0; i < 5; i++)
        assert_close(points[i], 1e-4 * (double)(i + 1), 1e-14);
    assert_true(points[4] == 0.5e-3);
    assert_ok(quantity_parse_points("1 .. 100 mm in 3 points log", DIMENSION_LENGTH, points,
                                    QUANTITY_MOST_POINTS, &count, &logarithmic, &error));
    assert_true(logarithmic);
    assert_close(points[1], 10e-3, 1e-14);
}

static void test_sweeps_without_end_or_sense_are_refused(void **state) {
    (void)state;
    static const char *const texts[][2] = {
        {"1 mm .. 2 mm in 1001 points", "1001 points, 2 to 1000 are accepted"},
        {"1 mm .. 2 mm in 99999999999999999999999999 points", "2 to 1000 are accepted"},
        {"1 mm .. 2 mm in 1 points", "1 points, 2 to 1000"},
        {"1 mm .. 2 mm in 0 points", "0 points, 2 to 1000"},
        {"1 mm .. 2 mm in points", "the number of points is missing"},
        {"1 mm .. 2 mm in 10", "the word \"points\" is missing"},
        {"1 mm .. 2 mm", "the number of points is missing"},
        {"1 mm .. 1 mm in 10 points", "the range is empty"},
        {"0 mm .. 1 mm in 10 points log", "must start above zero"},
        {"1 mm .. 2 mm in 10 points linear", "was not expected"},
        {"1 mm", "\"..\" was expected"},
    };
    for (size_t i = 0; i < sizeof texts / sizeof texts[0]; i++) {
        struct error error = {0};
        double points[QUANTITY_MOST_POINTS];
        size_t count = 0;
        bool logarithmic = false;
        if (quantity_parse_points(texts[i][0], DIMENSION_LENGTH, points, QUANTITY_MOST_POINTS,
                                  &count, &logarithmic, &error) ||
            strstr(error.message, texts[i][1]) == NULL) {
            print_error("\"%s\": got \"%s\"\n", texts[i][0], error.message);
            fail();
        }
    }
}

static void test_garbage_is_refused_without_harm(void **state) {
    (void)state;
    static const char *const pieces[] = {
        "1",          "0",      ".",   "..",   "-",    "+",        "+/-",    "\xC2\xB1",
        " ",          "mm",     "ohm", "e",    "e9",   "%",        "up to ", "at least ",
        " in ",       "points", "log", "open", "\xC2", "\xCE\xA9", "\xFF",   "\n",
        "9999999999", "/m",     "0x",  "mil",  "1e-5", "\t",
    };
    uint32_t random = 12345;
    for (int round = 0; round < 200000; round++) {
        char text[400] = "";
        for (int n = (int)(random >> 28); n >= 0; n--) {
            random = random * 1664525u + 1013904223u;
            const char *piece = pieces[(random >> 8) % (sizeof pieces / sizeof pieces[0])];
            memcpy(text + strlen(text), piece, strlen(piece) + 1);
        }
        random = random * 1664525u + 1013904223u;
        enum dimension dimension = (enum dimension)((random >> 8) % (uint32_t)DIMENSION_WORD);
        struct error error = {0};
        struct quantity quantity = {0};
        struct interval range = {0};
        bool flag = false;
        size_t count = 0;
        double points[50];
        if (quantity_parse_range(text, dimension, 0.0, 1e3, &quantity, &range, &flag, &error)) {
            assert_true(range.from <= range.to);
            assert_true(quantity.value == quantity.value);
        } else {
            assert_true(error.kind == ERROR_INPUT);
        }
        if (quantity_parse_points(text, dimension, points, 50, &count, &flag, NULL))
            assert_true(count >= 2 && count <= 50);
    }
}

static void check_print(double value, enum dimension dimension, int digits, const char *ascii,
                        const char *typographic) {
    char buffer[64];
    assert_string_equal(quantity_print(buffer, sizeof buffer, value, dimension, digits,
                                       QUANTITY_ASCII, QUANTITY_MILLIMETRES),
                        ascii);
    if (typographic != NULL)
        assert_string_equal(quantity_print(buffer, sizeof buffer, value, dimension, digits,
                                           QUANTITY_TYPOGRAPHIC, QUANTITY_MILLIMETRES),
                            typographic);
}

static void test_values_are_written_with_engineering_prefixes(void **state) {
    (void)state;
    check_print(0.35e-3, DIMENSION_LENGTH, -3, "0.35 mm", "0.35\xE2\x80\x89mm");
    check_print(0.35e-3, DIMENSION_LENGTH, 3, "0.350 mm", NULL);
    check_print(1.6e-3, DIMENSION_LENGTH, -4, "1.6 mm", NULL);
    check_print(35e-6, DIMENSION_LENGTH, -3, "35 um", "35\xE2\x80\x89\xC2\xB5m");
    check_print(0.1e-3, DIMENSION_LENGTH, -3, "0.1 mm", NULL);
    check_print(99.99e-6, DIMENSION_LENGTH, -3, "0.1 mm", NULL);
    check_print(1.0, DIMENSION_LENGTH, -3, "1000 mm", NULL);
    check_print(0.0, DIMENSION_LENGTH, -3, "0 mm", NULL);
    check_print(50.0, DIMENSION_RESISTANCE, -3, "50 ohm", "50\xE2\x80\x89\xCE\xA9");
    check_print(4700.0, DIMENSION_RESISTANCE, -3, "4.7 kohm", NULL);
    check_print(INFINITY, DIMENSION_RESISTANCE, 3, "open", "open");
    check_print(999.96, DIMENSION_RESISTANCE, 4, "1.000 kohm", NULL);
    check_print(-3.2, DIMENSION_LEVEL, -3, "-3.2 dB",
                "\xE2\x88\x92"
                "3.2\xE2\x80\x89"
                "dB");
    check_print(0.1234, DIMENSION_VOLTAGE, 3, "123 mV", NULL);
    check_print(1.2e-9, DIMENSION_TIME, 3, "1.20 ns", NULL);
    check_print(5e-12, DIMENSION_CAPACITANCE, -3, "5 pF", NULL);
    check_print(0.25, DIMENSION_RATIO, -3, "25 %", NULL);
    check_print(4.3, DIMENSION_NUMBER, -3, "4.3", "4.3");
    check_print(1.72e-8, DIMENSION_RESISTIVITY, -3, "1.72e-8 ohm m",
                "1.72\xC3\x97"
                "10\xE2\x81\xBB\xE2\x81\xB8\xE2\x80\x89\xCE\xA9\xC2\xB7m");
    check_print(2.0, DIMENSION_COUNT, 1, "2", NULL);
    check_print(12345.0, DIMENSION_COUNT, 2, "12345", NULL);
    check_print(123.4, DIMENSION_VOLTAGE, 2, "120 V", NULL);
    check_print((double)NAN, DIMENSION_VOLTAGE, 2, "not defined", NULL);
    char buffer[64];
    assert_string_equal(quantity_print(buffer, sizeof buffer, 355.6e-6, DIMENSION_LENGTH, -4,
                                       QUANTITY_ASCII, QUANTITY_MILS),
                        "14 mil");
}

static void test_what_is_written_reads_back_as_the_same_value(void **state) {
    (void)state;
    uint32_t random = 99;
    for (int i = 0; i < 20000; i++) {
        random = random * 1664525u + 1013904223u;
        enum dimension dimension = (enum dimension)((random >> 8) % (uint32_t)DIMENSION_WORD);
        if (dimension == DIMENSION_COUNT)
            continue;
        random = random * 1664525u + 1013904223u;
        double value = ((double)(random >> 4) + 1) * pow(10.0, -(double)(random >> 28) - 4);
        enum quantity_style style = i % 2 == 0 ? QUANTITY_ASCII : QUANTITY_TYPOGRAPHIC;
        if (style == QUANTITY_TYPOGRAPHIC && fabs(log10(value)) > 5)
            continue; /* powers in superscript are for reading only */
        char buffer[64];
        quantity_print(buffer, sizeof buffer, value, dimension, 17, style, QUANTITY_MILLIMETRES);
        if (strstr(buffer, "\xC3\x97") == NULL)
            assert_close(value_of(buffer, dimension), value, 1e-15);
    }
}

static void test_a_short_buffer_cuts_the_end(void **state) {
    (void)state;
    char buffer[4];
    assert_string_equal(quantity_print(buffer, sizeof buffer, 0.35e-3, DIMENSION_LENGTH, 3,
                                       QUANTITY_ASCII, QUANTITY_MILLIMETRES),
                        "0.3");
}

static void test_an_axis_has_one_scale_and_unit(void **state) {
    (void)state;
    double scale = 0;
    assert_string_equal(
        quantity_axis_unit(0.33, DIMENSION_VOLTAGE, QUANTITY_ASCII, QUANTITY_MILLIMETRES, &scale),
        "mV");
    assert_true(scale == 1e3);
    assert_string_equal(
        quantity_axis_unit(6e-3, DIMENSION_LENGTH, QUANTITY_ASCII, QUANTITY_MILLIMETRES, &scale),
        "mm");
    assert_true(scale == 1e3);
    assert_string_equal(
        quantity_axis_unit(6e-3, DIMENSION_LENGTH, QUANTITY_ASCII, QUANTITY_MILS, &scale), "mil");
    assert_close(scale * 25.4e-6, 1.0, 1e-15);
    assert_string_equal(quantity_axis_unit(300e-12, DIMENSION_CAPACITANCE_PER_LENGTH,
                                           QUANTITY_TYPOGRAPHIC, QUANTITY_MILLIMETRES, &scale),
                        "pF/m");
    assert_true(scale == 1e12);
    assert_string_equal(
        quantity_axis_unit(0.0, DIMENSION_VOLTAGE, QUANTITY_ASCII, QUANTITY_MILLIMETRES, &scale),
        "V");
    assert_string_equal(
        quantity_axis_unit(-40.0, DIMENSION_LEVEL, QUANTITY_ASCII, QUANTITY_MILLIMETRES, &scale),
        "dB");
    assert_true(scale == 1.0);
}

static void test_values_on_the_grid_stay_where_they_are(void **state) {
    (void)state;
    for (long n = 1; n < 2000; n++) {
        assert_int_equal(quantity_grid_up((double)n * 0.05e-3, 0.05e-3), n);
        assert_int_equal(quantity_grid_down((double)n * 0.05e-3, 0.05e-3), n);
    }
    assert_int_equal(quantity_grid_up(0.351e-3, 0.05e-3), 8);
    assert_int_equal(quantity_grid_down(0.399e-3, 0.05e-3), 7);
    assert_int_equal(quantity_grid_up(0.0, 0.05e-3), 0);
}

static void test_a_locale_with_a_decimal_comma_changes_nothing(void **state) {
    (void)state;
    static const char *const names[] = {"de_DE.UTF-8", "de_DE.utf8", "fr_FR.UTF-8"};
    bool found = false;
    for (size_t i = 0; i < 3 && !found; i++)
        found = setlocale(LC_ALL, names[i]) != NULL;
    assert_same("0.35 mm", DIMENSION_LENGTH, 0.35e-3);
    check_print(0.35e-3, DIMENSION_LENGTH, 3, "0.350 mm", NULL);
    setlocale(LC_ALL, "C");
    if (!found)
        print_message("# no locale with a decimal comma here: tried in the C locale only\n");
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_length_is_exactly_its_decimal_value_in_metres),
        cmocka_unit_test(test_signs_of_micro_and_ohm_are_read_in_every_form),
        cmocka_unit_test(test_every_dimension_reads_its_own_example),
        cmocka_unit_test(test_open_is_an_infinite_resistance),
        cmocka_unit_test(test_tolerances_are_read_in_percent_and_in_units),
        cmocka_unit_test(test_what_is_no_value_is_refused_with_its_reason),
        cmocka_unit_test(test_a_text_that_is_too_long_is_refused),
        cmocka_unit_test(test_ranges_are_read_with_the_unit_at_either_end),
        cmocka_unit_test(test_impossible_ranges_are_refused),
        cmocka_unit_test(test_points_of_a_sweep_run_from_end_to_end),
        cmocka_unit_test(test_sweeps_without_end_or_sense_are_refused),
        cmocka_unit_test(test_garbage_is_refused_without_harm),
        cmocka_unit_test(test_values_are_written_with_engineering_prefixes),
        cmocka_unit_test(test_what_is_written_reads_back_as_the_same_value),
        cmocka_unit_test(test_a_short_buffer_cuts_the_end),
        cmocka_unit_test(test_an_axis_has_one_scale_and_unit),
        cmocka_unit_test(test_values_on_the_grid_stay_where_they_are),
        cmocka_unit_test(test_a_locale_with_a_decimal_comma_changes_nothing),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}

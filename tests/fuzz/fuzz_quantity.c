/* Any bytes as a value, a range and a sweep of any dimension.  What is accepted is finite, ordered
 * and the same again when it is printed with all its digits and read back. */

#include "fuzz.h"

#include "groundrules/quantity.h"

#include <math.h>
#include <string.h>

static void print_and_read_again(double value, enum dimension dimension) {
    char printed[64];
    struct quantity again;
    struct error error = {0};
    quantity_print(printed, sizeof printed, value, dimension, -12, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    promise(strlen(printed) < sizeof printed);
    bool back = quantity_parse(printed, dimension, &again, &error);
    promise(back ? fabs(again.value - value) <= 1e-11 * fabs(value) : fabs(value) > 0.999e30);
}

static void look_at_value(const char *text, enum dimension dimension) {
    struct error error = {0};
    struct quantity quantity;
    if (!quantity_parse(text, dimension, &quantity, &error)) {
        promise(error.kind == ERROR_INPUT);
        return;
    }
    promise(isfinite(quantity.value) || (isinf(quantity.value) && strstr(text, "open") != NULL));
    promise(quantity.minus >= 0 && quantity.plus >= 0);
    promise(quantity.dimension == dimension);
    if (isfinite(quantity.value) && (quantity.value == 0 || fabs(quantity.value) > 1e-30))
        print_and_read_again(quantity.value, dimension);
}

static void look_at_range(const char *text, enum dimension dimension) {
    struct error error = {0};
    struct quantity quantity;
    struct interval range;
    bool is_range;
    if (quantity_parse_range(text, dimension, 1e-6, 1e6, &quantity, &range, &is_range, &error))
        promise(range.from <= range.to && (is_range || range.from == range.to));
    else
        promise(error.kind == ERROR_INPUT);
}

static void look_at_points(const char *text, enum dimension dimension) {
    static double points[QUANTITY_MOST_POINTS];
    struct error error = {0};
    size_t count;
    bool logarithmic;
    if (!quantity_parse_points(text, dimension, points, QUANTITY_MOST_POINTS, &count, &logarithmic,
                               &error)) {
        promise(error.kind == ERROR_INPUT);
        return;
    }
    promise(count >= 2 && count <= QUANTITY_MOST_POINTS);
    for (size_t i = 0; i < count; i++)
        promise(isfinite(points[i]) && (i == 0 || points[i] >= points[i - 1]));
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
    if (size == 0 || data[0] >= DIMENSION_WORD)
        return -1;
    enum dimension dimension = (enum dimension)data[0];
    char *text = fuzz_text(data + 1, size - 1);
    look_at_value(text, dimension);
    look_at_range(text, dimension);
    look_at_points(text, dimension);
    free(text);
    return 0;
}

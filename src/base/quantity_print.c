/* Writing.  snprintf rounds to the digits asked for; the digits are then placed here, so the
 * decimal point does not come from a locale. */

#include "unit.h"

#include <assert.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { MOST_DIGITS = 17, LOWEST_PLAIN = -5, HIGHEST_PLAIN = 6 };

struct decimal {
    char digits[MOST_DIGITS + 1];
    int count;
    int exponent; /* of the first digit */
    bool negative;
};

static struct decimal round_to(double value, int digits) {
    struct decimal decimal = {.negative = value < 0};
    bool trim = digits < 0;
    int wanted = abs(digits);
    if (wanted < 1)
        wanted = 1;
    if (wanted > MOST_DIGITS)
        wanted = MOST_DIGITS;
    char text[64];
    snprintf(text, sizeof text, "%.*e", wanted - 1, fabs(value));
    const char *at = text;
    for (; *at != 'e' && *at != '\0'; at++)
        if (*at >= '0' && *at <= '9' && decimal.count < MOST_DIGITS)
            decimal.digits[decimal.count++] = *at;
    decimal.exponent = *at == 'e' ? (int)strtol(at + 1, NULL, 10) : 0;
    while (trim && decimal.count > 1 && decimal.digits[decimal.count - 1] == '0')
        decimal.count--;
    return decimal;
}

/* A text that grows in a fixed buffer and is cut at its end. */
struct writer {
    char *buffer;
    size_t size, used;
};

static void put(struct writer *writer, const char *text, size_t length) {
    for (size_t i = 0; i < length && writer->used + 1 < writer->size; i++)
        writer->buffer[writer->used++] = text[i];
    if (writer->size > 0)
        writer->buffer[writer->used] = '\0';
}

static void put_text(struct writer *writer, const char *text) {
    put(writer, text, strlen(text));
}

/* The decimal times 10^shift, written out. */
static void put_plain(struct writer *writer, const struct decimal *decimal, int shift) {
    int point = decimal->exponent + shift + 1; /* digits before the point */
    if (point <= 0) {
        put_text(writer, "0.");
        for (int i = point; i < 0; i++)
            put_text(writer, "0");
        put(writer, decimal->digits, (size_t)decimal->count);
        return;
    }
    for (int i = 0; i < point || i < decimal->count; i++) {
        if (i == point)
            put_text(writer, ".");
        put(writer, i < decimal->count ? &decimal->digits[i] : "0", 1);
    }
}

static const char *const superscripts[] = {"⁰", "¹", "²", "³", "⁴", "⁵", "⁶", "⁷", "⁸", "⁹"};

static void put_power(struct writer *writer, int exponent, enum quantity_style style) {
    char number[16];
    if (style == QUANTITY_ASCII) {
        snprintf(number, sizeof number, "e%d", exponent);
        put_text(writer, number);
        return;
    }
    put_text(writer, "×10");
    if (exponent < 0)
        put_text(writer, "⁻");
    snprintf(number, sizeof number, "%d", abs(exponent));
    for (const char *at = number; *at != '\0'; at++)
        put_text(writer, superscripts[*at - '0']);
}

static void put_number(struct writer *writer, const struct decimal *decimal, int shift,
                       enum quantity_style style) {
    if (decimal->negative)
        put_text(writer, style == QUANTITY_ASCII ? "-" : "−");
    bool zero = decimal->digits[0] == '0';
    int exponent = decimal->exponent + shift;
    if (zero || (exponent >= LOWEST_PLAIN && exponent <= HIGHEST_PLAIN)) {
        put_plain(writer, decimal, zero ? 0 : shift);
        return;
    }
    put_plain(writer, decimal, -decimal->exponent);
    put_power(writer, exponent, style);
}

static void put_unit(struct writer *writer, const char *unit, enum quantity_style style) {
    if (unit[0] == '\0')
        return;
    put_text(writer, style == QUANTITY_ASCII ? " " : "\xE2\x80\x89"); /* thin space */
    put_text(writer, unit);
}

static int prefix_of(int exponent) {
    int prefix = UNIT_PLAIN + (exponent >= 0 ? exponent / 3 : -((2 - exponent) / 3));
    return prefix < 0 ? 0 : prefix >= UNIT_PREFIXES ? UNIT_PREFIXES - 1 : prefix;
}

static const char *small_length(enum quantity_style style) {
    return style == QUANTITY_ASCII ? "um" : "µm";
}

static const double metres_per_mil = 25.4e-6;

/* Millimetres down to 0.1 mm, micrometres below; a length that rounds to 0.1 mm counts as one. */
static void put_length(struct writer *writer, double value, int digits, enum quantity_style style,
                       enum quantity_lengths lengths) {
    if (lengths == QUANTITY_MILS) {
        struct decimal mils = round_to(value / metres_per_mil, digits);
        put_number(writer, &mils, 0, style);
        put_unit(writer, "mil", style);
        return;
    }
    struct decimal decimal = round_to(value, digits);
    bool small = decimal.digits[0] != '0' && decimal.exponent < -4;
    put_number(writer, &decimal, small ? 6 : 3, style);
    put_unit(writer, small ? small_length(style) : "mm", style);
}

char *quantity_print(char *buffer, size_t size, double value, enum dimension dimension, int digits,
                     enum quantity_style style, enum quantity_lengths lengths) {
    assert(size > 0);
    struct writer writer = {buffer, size, 0};
    buffer[0] = '\0';
    if (!isfinite(value)) {
        const char *word = isnan(value)                                     ? "not defined"
                           : dimension == DIMENSION_RESISTANCE && value > 0 ? "open"
                                                                            : "infinite";
        put_text(&writer, word);
        return buffer;
    }
    if (dimension == DIMENSION_LENGTH) {
        put_length(&writer, value, digits, style, lengths);
        return buffer;
    }
    if (dimension == DIMENSION_COUNT || dimension == DIMENSION_WORD)
        digits = -MOST_DIGITS;
    struct decimal decimal = round_to(value, digits);
    const char *const *units = unit_prefixed(dimension, style);
    const char *unit = unit_plain(dimension, style);
    int shift = 0;
    if (dimension == DIMENSION_RATIO) {
        shift = 2;
        unit = "%";
    } else if (units != NULL && decimal.digits[0] != '0') {
        int prefix = prefix_of(decimal.exponent);
        shift = -3 * (prefix - UNIT_PLAIN);
        unit = units[prefix];
    }
    put_number(&writer, &decimal, shift, style);
    put_unit(&writer, unit, style);
    return buffer;
}

const char *quantity_axis_unit(double largest, enum dimension dimension, enum quantity_style style,
                               enum quantity_lengths lengths, double *scale) {
    static const double scales[UNIT_PREFIXES] = {1e15, 1e12, 1e9,  1e6,  1e3,
                                                 1.0,  1e-3, 1e-6, 1e-9, 1e-12};
    double magnitude = fabs(largest);
    if (dimension == DIMENSION_LENGTH) {
        bool small = magnitude > 0 && magnitude < 0.99995e-4;
        *scale = lengths == QUANTITY_MILS ? 1 / metres_per_mil : small ? 1e6 : 1e3;
        return lengths == QUANTITY_MILS ? "mil" : small ? small_length(style) : "mm";
    }
    if (dimension == DIMENSION_RATIO) {
        *scale = 100.0;
        return "%";
    }
    const char *const *units = unit_prefixed(dimension, style);
    if (units == NULL || !(magnitude > 0) || !isfinite(magnitude)) {
        *scale = 1.0;
        return unit_plain(dimension, style);
    }
    struct decimal decimal = round_to(magnitude, 6);
    int prefix = prefix_of(decimal.exponent);
    *scale = scales[prefix];
    return units[prefix];
}

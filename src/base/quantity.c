/* Reading: the text is first made ASCII (µ to u, Ω to ohm, ± to +/-, the spaces and minus signs of
 * typesetting to plain ones), then scanned.  A number's digits and its unit's power of ten become
 * one text without a decimal point before strtod sees it, so the result is the correctly rounded
 * SI value and no locale can change it. */

#include "unit.h"

#include <assert.h>
#include <limits.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { MOST_TEXT = 200, MOST_SHOWN = 80, MOST_DIGITS = 40, MOST_EXPONENT = 400 };
static const double most_magnitude = 1e30;

struct reader {
    const char *written; /* for messages */
    enum dimension dimension;
    const char *at; /* in the ASCII text */
    struct error *error;
    bool sweep; /* what is read are the points of a sweep */
};

struct number {
    char digits[MOST_DIGITS + 1];
    size_t count;
    int exponent;
    bool negative;
};

static bool refuse(const struct reader *reader, const char *reason) {
    size_t shown = strlen(reader->written);
    bool cut = shown > MOST_SHOWN;
    if (cut)
        for (shown = MOST_SHOWN; shown > 0 && (reader->written[shown] & 0xC0) == 0x80;)
            shown--;
    return error_set(reader->error, ERROR_INPUT, "\"%.*s%s\": %s; expected %s%s, such as \"%s\"",
                     (int)shown, reader->written, cut ? "..." : "", reason,
                     reader->sweep ? "\"FROM .. TO in 40 points\" or \"... log\", both ends " : "",
                     dimension_name(reader->dimension), dimension_example(reader->dimension));
}

static const struct {
    const char *from, *to;
} replacements[] = {
    {"\xC2\xB5", "u"},       /* micro sign */
    {"\xCE\xBC", "u"},       /* Greek mu */
    {"\xCE\xA9", "ohm"},     /* Greek omega */
    {"\xE2\x84\xA6", "ohm"}, /* ohm sign */
    {"Ohm", "ohm"},
    {"\xC2\xB1", "+/-"},   /* plus-minus */
    {"\xE2\x88\x92", "-"}, /* minus sign */
    {"\xC2\xA0", " "},     /* spaces: no-break, narrow no-break, thin */
    {"\xE2\x80\xAF", " "},
    {"\xE2\x80\x89", " "},
    {"\xC2\xB7", "*"}, /* ohm (middle dot) m */
    {"\xE2\x88\x9A"
     "Hz",
     "sqrt(Hz)"},
    {"\xE2\x80\xA6", ".."}, /* ellipsis */
    {"\t", " "},
};

static bool make_ascii(const char *text, char ascii[MOST_TEXT], const struct reader *reader) {
    size_t used = 0;
    while (*text != '\0') {
        const char *put = NULL;
        size_t taken = 1;
        for (size_t i = 0; put == NULL && i < sizeof replacements / sizeof replacements[0]; i++)
            if (strncmp(text, replacements[i].from, strlen(replacements[i].from)) == 0) {
                put = replacements[i].to;
                taken = strlen(replacements[i].from);
            }
        char same[2] = {*text, '\0'};
        if (put == NULL)
            put = same;
        if (used + strlen(put) + 1 > MOST_TEXT)
            return refuse(reader, "too long");
        memcpy(ascii + used, put, strlen(put));
        used += strlen(put);
        text += taken;
    }
    while (used > 0 && ascii[used - 1] == ' ')
        used--;
    ascii[used] = '\0';
    return true;
}

static bool is_digit(char c) {
    return c >= '0' && c <= '9';
}

static void skip_spaces(struct reader *reader) {
    while (*reader->at == ' ')
        reader->at++;
}

/* Takes `word` when it stands here; leading spaces are taken in any case. */
static bool take(struct reader *reader, const char *word) {
    skip_spaces(reader);
    size_t length = strlen(word);
    if (strncmp(reader->at, word, length) != 0)
        return false;
    reader->at += length;
    return true;
}

static bool add_digit(struct number *number, char digit) {
    if (number->count == 0 && digit == '0')
        return true;
    if (number->count == MOST_DIGITS)
        return false;
    number->digits[number->count++] = digit;
    return true;
}

/* A point followed by another point belongs to a range, "10..40 ohm". */
static bool at_fraction(const char *at) {
    return at[0] == '.' && at[1] != '.';
}

static bool read_exponent(struct reader *reader, struct number *number) {
    const char *at = reader->at + 1;
    bool negative = *at == '-';
    if (*at == '-' || *at == '+')
        at++;
    if (!is_digit(*at))
        return true; /* no exponent: a unit that starts with e, refused there */
    int exponent = 0;
    for (; is_digit(*at); at++)
        if (exponent <= MOST_EXPONENT)
            exponent = exponent * 10 + (*at - '0');
    if (exponent > MOST_EXPONENT)
        return refuse(reader, negative ? "the number is too small" : "the number is too large");
    number->exponent += negative ? -exponent : exponent;
    reader->at = at;
    return true;
}

static bool read_number(struct reader *reader, struct number *number) {
    *number = (struct number){0};
    skip_spaces(reader);
    const char *at = reader->at;
    if (*at == '-' || *at == '+')
        number->negative = *at++ == '-';
    if (at[0] == '0' && (at[1] == 'x' || at[1] == 'X'))
        return refuse(reader, "hexadecimal numbers are not accepted");
    if (!is_digit(*at))
        return refuse(reader,
                      at_fraction(at) ? "a digit is missing before the point" : "no number found");
    bool room = true;
    for (; is_digit(*at); at++)
        room = room && add_digit(number, *at);
    if (at_fraction(at)) {
        at++;
        if (!is_digit(*at))
            return refuse(reader, "a digit is missing after the point");
        for (; is_digit(*at); at++) {
            room = room && add_digit(number, *at);
            number->exponent--;
        }
    }
    if (*at == ',')
        return refuse(reader, "a decimal comma is not accepted, write a point");
    if (!room)
        return refuse(reader, "too many digits");
    reader->at = at;
    return (*at != 'e' && *at != 'E') || read_exponent(reader, number);
}

/* The digits times a small whole number, in decimal: 14 mil is exactly 3556e-7 m. */
static size_t multiply_digits(const struct number *number, unsigned factor, char *product) {
    char reversed[MOST_DIGITS + 12];
    size_t used = 0;
    unsigned long carry = 0;
    for (size_t i = number->count; i > 0; i--) {
        carry += (unsigned long)(number->digits[i - 1] - '0') * factor;
        reversed[used++] = (char)('0' + carry % 10);
        carry /= 10;
    }
    for (; carry > 0; carry /= 10)
        reversed[used++] = (char)('0' + carry % 10);
    for (size_t i = 0; i < used; i++)
        product[i] = reversed[used - 1 - i];
    if (used == 0)
        product[used++] = '0';
    product[used] = '\0';
    return used;
}

static bool number_in_unit(const struct reader *reader, const struct number *number,
                           const struct unit *unit, double *value) {
    char digits[MOST_DIGITS + 16];
    char text[MOST_DIGITS + 32];
    multiply_digits(number, unit->multiply, digits);
    snprintf(text, sizeof text, "%se%d", digits, number->exponent + unit->exponent);
    double magnitude = strtod(text, NULL) / unit->divide;
    if (!(magnitude <= most_magnitude))
        return refuse(reader, "the number is too large");
    if (number->count > 0 && magnitude < 1 / most_magnitude)
        return refuse(reader, "the number is too small");
    *value = number->negative && number->count > 0 ? -magnitude : magnitude;
    return true;
}

/* The unit's text ends where a tolerance, a range or a sweep goes on. */
static size_t unit_length(const char *at) {
    size_t length = 0;
    while (at[length] != '\0') {
        const char *rest = at + length;
        if (*rest == '+' || *rest == '-' || strncmp(rest, "..", 2) == 0 ||
            strncmp(rest, " in ", 4) == 0)
            break;
        if (length == 0 && strncmp(rest, "in ", 3) == 0 && is_digit(rest[3]))
            break; /* the points of a sweep, not inches */
        length++;
    }
    while (length > 0 && at[length - 1] == ' ')
        length--;
    return length;
}

static bool refuse_unit(const struct reader *reader, const char *unit, size_t length) {
    char reason[120];
    enum dimension owner;
    if (length == 0)
        return refuse(reader, "the unit is missing");
    int shown = length > 40 ? 40 : (int)length;
    if (dimension_unit(reader->dimension)[0] == '\0' && !is_digit(*unit))
        snprintf(reason, sizeof reason, "no unit is expected, found \"%.*s\"", shown, unit);
    else if (unit_owner(unit, length, &owner))
        snprintf(reason, sizeof reason, "\"%.*s\" is the unit of %s", shown, unit,
                 dimension_name(owner));
    else
        snprintf(reason, sizeof reason, "\"%.*s\" is not a known unit", shown, unit);
    return refuse(reader, reason);
}

static bool read_unit(struct reader *reader, struct unit *unit) {
    skip_spaces(reader);
    size_t length = unit_length(reader->at);
    if (!unit_find(reader->at, length, reader->dimension, unit))
        return refuse_unit(reader, reader->at, length);
    reader->at += length;
    return true;
}

static bool read_value(struct reader *reader, double *value) {
    struct number number;
    struct unit unit;
    return read_number(reader, &number) && read_unit(reader, &unit) &&
           number_in_unit(reader, &number, &unit, value);
}

static bool has_unit(enum dimension dimension) {
    return dimension == DIMENSION_RATIO || dimension_unit(dimension)[0] != '\0';
}

/* Whether the number here is followed by nothing but `word`, the unit then comes at the end. */
static bool unit_follows(const struct reader *reader, const char *word) {
    struct reader ahead = *reader;
    ahead.error = NULL;
    struct number number;
    return has_unit(reader->dimension) && read_number(&ahead, &number) && take(&ahead, word);
}

/* "10 .. 40 ohm": the first number in the second one's unit. */
static bool read_value_before(struct reader *reader, const char *word, double *value) {
    struct number number;
    struct number next;
    struct unit unit;
    if (!read_number(reader, &number))
        return false;
    struct reader ahead = *reader;
    return take(&ahead, word) && read_number(&ahead, &next) && read_unit(&ahead, &unit) &&
           number_in_unit(reader, &number, &unit, value);
}

/* One side of a tolerance, "10 %" or "0.15 mm": in SI, of |value|. */
static bool read_tolerance(struct reader *reader, double value, double *tolerance) {
    struct reader ahead = *reader;
    ahead.error = NULL;
    struct number number;
    if (read_number(&ahead, &number) && take(&ahead, "%")) {
        reader->at = ahead.at;
        double share = 0.0;
        if (!number_in_unit(reader, &number, &(struct unit){1, -2, 1.0}, &share))
            return false;
        *tolerance = share * fabs(value);
    } else if (!read_value(reader, tolerance)) {
        return false;
    }
    return *tolerance >= 0 || refuse(reader, "a tolerance must not be negative");
}

static bool read_tolerances(struct reader *reader, struct quantity *quantity) {
    skip_spaces(reader);
    if (*reader->at == '\0')
        return true;
    if (take(reader, ".."))
        return refuse(reader, "a range is not accepted here");
    if (quantity->dimension == DIMENSION_RATIO || quantity->dimension == DIMENSION_COUNT)
        return refuse(reader, "no tolerance is accepted here");
    if (take(reader, "+/-")) {
        if (!read_tolerance(reader, quantity->value, &quantity->plus))
            return false;
        quantity->minus = quantity->plus;
    } else {
        for (int side = 0; side < 2; side++) {
            double *tolerance = take(reader, "+")   ? &quantity->plus
                                : take(reader, "-") ? &quantity->minus
                                                    : NULL;
            if (tolerance == NULL)
                return side == 0 ? refuse(reader, "a tolerance was expected after the value")
                                 : refuse(reader, "the other side of the tolerance is missing");
            if (*tolerance != 0.0)
                return refuse(reader, "one side of the tolerance is given twice");
            if (!read_tolerance(reader, quantity->value, tolerance))
                return false;
        }
    }
    bool above = quantity->value > 0 && quantity->value - quantity->minus > 0;
    bool below = quantity->value < 0 && quantity->value + quantity->plus < 0;
    if (quantity->dimension != DIMENSION_LEVEL && !above && !below)
        return refuse(reader, "the tolerance reaches zero");
    return true;
}

static bool check_count(const struct reader *reader, double value) {
    return reader->dimension != DIMENSION_COUNT || (fabs(value) <= 1e9 && value == floor(value)) ||
           refuse(reader, "not a whole number");
}

static bool at_end(struct reader *reader) {
    skip_spaces(reader);
    if (*reader->at == '\0')
        return true;
    char reason[MOST_TEXT];
    snprintf(reason, sizeof reason, "\"%.80s\" was not expected after it", reader->at);
    return refuse(reader, reason);
}

static bool read_open(struct reader *reader, struct quantity *quantity) {
    if (reader->dimension != DIMENSION_RESISTANCE || strcmp(reader->at, "open") != 0)
        return false;
    *quantity = (struct quantity){INFINITY, 0.0, 0.0, reader->dimension};
    return true;
}

static bool start_any(struct reader *reader, const char *text, enum dimension dimension,
                      char ascii[MOST_TEXT], bool sweep, struct error *error) {
    *reader = (struct reader){text, dimension, ascii, error, sweep};
    if (dimension == DIMENSION_WORD)
        return error_set(error, ERROR_INTERNAL, "a word was read as a quantity");
    if (!make_ascii(text, ascii, reader))
        return false;
    skip_spaces(reader);
    return *reader->at != '\0' || refuse(reader, "nothing is written");
}

static bool start(struct reader *reader, const char *text, enum dimension dimension,
                  char ascii[MOST_TEXT], struct error *error) {
    return start_any(reader, text, dimension, ascii, false, error);
}

static bool start_sweep(struct reader *reader, const char *text, enum dimension dimension,
                        char ascii[MOST_TEXT], struct error *error) {
    return start_any(reader, text, dimension, ascii, true, error);
}

static bool read_quantity(struct reader *reader, struct quantity *quantity) {
    struct quantity read = {.dimension = reader->dimension};
    if (!read_open(reader, &read)) {
        bool ok = unit_follows(reader, "+/-") ? read_value_before(reader, "+/-", &read.value)
                                              : read_value(reader, &read.value);
        if (!ok || !check_count(reader, read.value) || !read_tolerances(reader, &read) ||
            !at_end(reader))
            return false;
    }
    *quantity = read;
    return true;
}

bool quantity_parse(const char *text, enum dimension dimension, struct quantity *quantity,
                    struct error *error) {
    char ascii[MOST_TEXT];
    struct reader reader;
    return start(&reader, text, dimension, ascii, error) && read_quantity(&reader, quantity);
}

static bool read_interval(struct reader *reader, struct interval *range) {
    if (strstr(reader->at, "open") != NULL)
        return refuse(reader, "a range cannot end in \"open\"");
    bool ok = unit_follows(reader, "..") ? read_value_before(reader, "..", &range->from)
                                         : read_value(reader, &range->from);
    if (!ok)
        return false;
    skip_spaces(reader);
    if (*reader->at == '+' || *reader->at == '-')
        return refuse(reader, "a range takes no tolerance");
    if (!take(reader, ".."))
        return refuse(reader, "\"..\" was expected between the ends of the range");
    if (!read_value(reader, &range->to) || !check_count(reader, range->from) ||
        !check_count(reader, range->to))
        return false;
    skip_spaces(reader);
    if (*reader->at == '+' || *reader->at == '-')
        return refuse(reader, "a range takes no tolerance");
    return range->from <= range->to || refuse(reader, "the smaller value must come first");
}

static bool read_half_open(struct reader *reader, double lowest, double highest, bool up_to,
                           struct interval *range) {
    double value = 0.0;
    if (!read_value(reader, &value) || !check_count(reader, value))
        return false;
    skip_spaces(reader);
    if (*reader->at == '+' || *reader->at == '-')
        return refuse(reader, "a range takes no tolerance");
    *range = up_to ? (struct interval){lowest, value} : (struct interval){value, highest};
    if (range->from <= range->to)
        return true;
    char reason[100];
    char limit[40];
    quantity_print(limit, sizeof limit, up_to ? lowest : highest, reader->dimension, -6,
                   QUANTITY_ASCII, QUANTITY_MILLIMETRES);
    snprintf(reason, sizeof reason, "the %s value accepted is %s", up_to ? "lowest" : "highest",
             limit);
    return refuse(reader, reason);
}

bool quantity_parse_range(const char *text, enum dimension dimension, double lowest, double highest,
                          struct quantity *quantity, struct interval *range, bool *is_range,
                          struct error *error) {
    char ascii[MOST_TEXT];
    struct reader reader;
    struct interval read = {0.0, 0.0};
    if (!start(&reader, text, dimension, ascii, error))
        return false;
    bool up_to = take(&reader, "up to ");
    if (up_to || take(&reader, "at least ")) {
        if (!read_half_open(&reader, lowest, highest, up_to, &read) || !at_end(&reader))
            return false;
    } else if (strstr(reader.at, "..") != NULL) {
        if (!read_interval(&reader, &read) || !at_end(&reader))
            return false;
    } else {
        if (!read_quantity(&reader, quantity))
            return false;
        *range = (struct interval){quantity->value, quantity->value};
        *is_range = false;
        return true;
    }
    *quantity = (struct quantity){read.from + (read.to - read.from) / 2, 0.0, 0.0, dimension};
    *range = read;
    *is_range = true;
    return true;
}

static bool read_point_count(struct reader *reader, size_t most, size_t *count) {
    if (!take(reader, "in ")) {
        return refuse(reader, "the number of points is missing (\"... in 40 points\")");
    }
    skip_spaces(reader);
    if (!is_digit(*reader->at))
        return refuse(reader, "the number of points is missing (\"... in 40 points\")");
    char number[24];
    size_t length = 0;
    while (is_digit(reader->at[length]))
        length++;
    snprintf(number, sizeof number, "%.*s", length > 20 ? 20 : (int)length, reader->at);
    unsigned long long asked = length > 18 ? ULLONG_MAX : strtoull(number, NULL, 10);
    reader->at += length;
    if (!take(reader, "points"))
        return refuse(reader, "the word \"points\" is missing");
    if (asked < 2 || asked > most) {
        char reason[100];
        snprintf(reason, sizeof reason, "%s points, 2 to %zu are accepted", number, most);
        return refuse(reader, reason);
    }
    *count = (size_t)asked;
    return true;
}

static bool place_points(const struct reader *reader, struct interval range, size_t count,
                         bool logarithmic, double *points) {
    if (!(range.from < range.to))
        return refuse(reader, "the range is empty");
    if (logarithmic && !(range.from > 0))
        return refuse(reader, "logarithmic points must start above zero");
    double steps = (double)(count - 1);
    if (reader->dimension == DIMENSION_COUNT &&
        (logarithmic || fmod(range.to - range.from, steps) != 0.0))
        return refuse(reader, "the points are not whole numbers");
    for (size_t i = 0; i < count; i++) {
        double share = (double)i / steps;
        points[i] = logarithmic ? range.from * pow(range.to / range.from, share)
                                : range.from + (range.to - range.from) * share;
    }
    points[0] = range.from;
    points[count - 1] = range.to;
    return true;
}

bool quantity_parse_points(const char *text, enum dimension dimension, double *points, size_t most,
                           size_t *count, bool *logarithmic, struct error *error) {
    char ascii[MOST_TEXT];
    struct reader reader;
    struct interval range = {0.0, 0.0};
    size_t asked = 0;
    if (most > QUANTITY_MOST_POINTS)
        most = QUANTITY_MOST_POINTS;
    if (!start_sweep(&reader, text, dimension, ascii, error) || !read_interval(&reader, &range) ||
        !read_point_count(&reader, most, &asked))
        return false;
    skip_spaces(&reader);
    bool log = strcmp(reader.at, "log") == 0 && take(&reader, "log");
    if (!at_end(&reader) || !place_points(&reader, range, asked, log, points))
        return false;
    *count = asked;
    *logarithmic = log;
    return true;
}

static long grid_number(double number) {
    if (number >= (double)LONG_MAX)
        return LONG_MAX;
    if (number <= (double)LONG_MIN)
        return LONG_MIN;
    return (long)number;
}

static const double grid_slack = 1e-9;

long quantity_grid_up(double value, double grid) {
    assert(grid > 0 && !isnan(value));
    double number = value / grid;
    return grid_number(ceil(number - grid_slack * fmax(1.0, fabs(number))));
}

long quantity_grid_down(double value, double grid) {
    assert(grid > 0 && !isnan(value));
    double number = value / grid;
    return grid_number(floor(number + grid_slack * fmax(1.0, fabs(number))));
}

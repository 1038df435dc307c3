#include "unit.h"

#include <assert.h>
#include <string.h>

#define PREFIXED(micro, unit)                                                                      \
    {                                                                                              \
        "f" unit, "p" unit, "n" unit, micro unit, "m" unit, unit, "k" unit, "M" unit, "G" unit,    \
            "T" unit                                                                               \
    }

enum { DIMENSIONS = DIMENSION_WORD + 1, NO_PREFIX = 0, WITH_PREFIX = 1 };

struct description {
    const char *name;
    const char *example;
    const char *plain[2];                   /* ASCII, typographic */
    const char *prefixed[2][UNIT_PREFIXES]; /* [0][0] NULL: none */
};

#define BOTH(ascii, sign)                                                                          \
    .plain = {ascii, sign}, .prefixed = {PREFIXED("u", ascii), PREFIXED("µ", sign)}

static const struct description descriptions[DIMENSIONS] = {
    [DIMENSION_NUMBER] = {"a number without unit", "4.3", .plain = {"", ""}},
    [DIMENSION_RATIO] = {"a ratio", "25 %", .plain = {"", ""}},
    [DIMENSION_COUNT] = {"a whole number", "2", .plain = {"", ""}},
    [DIMENSION_LENGTH] = {"a length", "0.35 mm", .plain = {"m", "m"}},
    [DIMENSION_TIME] = {"a time", "1.2 ns", BOTH("s", "s")},
    [DIMENSION_VOLTAGE] = {"a voltage", "3.3 V", BOTH("V", "V")},
    [DIMENSION_RESISTANCE] = {"a resistance", "50 ohm", BOTH("ohm", "Ω")},
    [DIMENSION_CAPACITANCE] = {"a capacitance", "5 pF", BOTH("F", "F")},
    [DIMENSION_INDUCTANCE] = {"an inductance", "3 nH", BOTH("H", "H")},
    [DIMENSION_FREQUENCY] = {"a frequency", "100 MHz", BOTH("Hz", "Hz")},
    [DIMENSION_RESISTIVITY] = {"a resistivity", "1.72e-8 ohm m", .plain = {"ohm m", "Ω·m"}},
    [DIMENSION_RESISTANCE_PER_LENGTH] = {"a resistance per length", "2 ohm/m",
                                         BOTH("ohm/m", "Ω/m")},
    [DIMENSION_SKIN_RESISTANCE] = {"a skin resistance", "1 mohm/m/sqrt(Hz)",
                                   BOTH("ohm/m/sqrt(Hz)", "Ω/m/√Hz")},
    [DIMENSION_INDUCTANCE_PER_LENGTH] = {"an inductance per length", "350 nH/m",
                                         BOTH("H/m", "H/m")},
    [DIMENSION_CAPACITANCE_PER_LENGTH] = {"a capacitance per length", "120 pF/m",
                                          BOTH("F/m", "F/m")},
    [DIMENSION_SLOWNESS] = {"a delay per length", "6.2 ns/m", BOTH("s/m", "s/m")},
    [DIMENSION_LEVEL] = {"a level", "-40 dB", .plain = {"dB", "dB"}},
    [DIMENSION_ATTENUATION] = {"an attenuation per length", "3 dB/m", .plain = {"dB/m", "dB/m"}},
    [DIMENSION_WORD] = {"a word", "none", .plain = {"", ""}},
};

static const struct description *describe(enum dimension dimension) {
    assert((int)dimension >= 0 && (int)dimension < DIMENSIONS);
    return &descriptions[dimension];
}

const char *dimension_name(enum dimension dimension) {
    return describe(dimension)->name;
}

const char *dimension_unit(enum dimension dimension) {
    return describe(dimension)->plain[0];
}

const char *dimension_example(enum dimension dimension) {
    return describe(dimension)->example;
}

const char *const *unit_prefixed(enum dimension dimension, enum quantity_style style) {
    const struct description *description = describe(dimension);
    return description->prefixed[0][0] == NULL ? NULL : description->prefixed[style];
}

const char *unit_plain(enum dimension dimension, enum quantity_style style) {
    return describe(dimension)->plain[style];
}

static bool same(const char *text, size_t length, const char *word) {
    return strlen(word) == length && memcmp(text, word, length) == 0;
}

static const struct {
    const char *text;
    struct unit unit;
} lengths[] = {
    {"nm", {1, -9, 1.0}}, {"um", {1, -6, 1.0}},    {"mm", {1, -3, 1.0}},   {"cm", {1, -2, 1.0}},
    {"m", {1, 0, 1.0}},   {"mil", {254, -7, 1.0}}, {"in", {254, -4, 1.0}},
};

static bool find_length(const char *text, size_t length, struct unit *unit) {
    for (size_t i = 0; i < sizeof lengths / sizeof lengths[0]; i++)
        if (same(text, length, lengths[i].text)) {
            *unit = lengths[i].unit;
            return true;
        }
    return false;
}

static bool find_prefixed(const char *text, size_t length, enum dimension dimension,
                          struct unit *unit) {
    const char *const *units = unit_prefixed(dimension, QUANTITY_ASCII);
    for (int i = 0; units != NULL && i < UNIT_PREFIXES; i++)
        if (same(text, length, units[i])) {
            *unit = (struct unit){1, 3 * (i - UNIT_PLAIN), 1.0};
            return true;
        }
    return false;
}

/* "nH/cm", "ps/in": the same unit per another length. */
static bool find_per_length(const char *text, size_t length, enum dimension dimension,
                            struct unit *unit) {
    const char *slash = memchr(text, '/', length);
    const char *plain = unit_plain(dimension, QUANTITY_ASCII);
    size_t plain_length = strlen(plain);
    if (slash == NULL || plain_length < 2 || strcmp(plain + plain_length - 2, "/m") != 0)
        return false;
    struct unit per;
    size_t front = (size_t)(slash - text);
    char whole[32];
    if (front + 3 > sizeof whole || !find_length(slash + 1, length - front - 1, &per))
        return false;
    memcpy(whole, text, front);
    memcpy(whole + front, "/m", 3);
    if (!find_prefixed(whole, front + 2, dimension, unit)) {
        if (!same(whole, front + 2, plain))
            return false;
        *unit = (struct unit){1, 0, 1.0};
    }
    unit->exponent -= per.exponent;
    unit->divide = per.multiply;
    return true;
}

bool unit_find(const char *text, size_t length, enum dimension dimension, struct unit *unit) {
    *unit = (struct unit){1, 0, 1.0};
    switch (dimension) {
    case DIMENSION_LENGTH:
        return find_length(text, length, unit);
    case DIMENSION_RATIO:
        if (same(text, length, "%"))
            unit->exponent = -2;
        return length == 0 || same(text, length, "%");
    case DIMENSION_RESISTIVITY:
        return same(text, length, "ohm m") || same(text, length, "ohm*m");
    case DIMENSION_WORD:
        return false;
    default:
        return same(text, length, unit_plain(dimension, QUANTITY_ASCII)) ||
               find_prefixed(text, length, dimension, unit) ||
               find_per_length(text, length, dimension, unit);
    }
}

bool unit_owner(const char *text, size_t length, enum dimension *dimension) {
    struct unit unit;
    for (int i = 0; i < DIMENSIONS && length > 0; i++)
        if (unit_find(text, length, (enum dimension)i, &unit)) {
            *dimension = (enum dimension)i;
            return true;
        }
    return false;
}

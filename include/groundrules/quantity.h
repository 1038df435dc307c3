#ifndef GROUNDRULES_QUANTITY_H
#define GROUNDRULES_QUANTITY_H

#include "groundrules/error.h"

#include <stddef.h>

/* Physical values: read from text with units, kept in SI, written with engineering prefixes. */

enum dimension {
    DIMENSION_NUMBER,                /* a pure number: "4.3" */
    DIMENSION_RATIO,                 /* "0.25" or "25 %" */
    DIMENSION_COUNT,                 /* a whole number */
    DIMENSION_LENGTH,                /* m; read as um, µm, mm, cm, m, mil, in */
    DIMENSION_TIME,                  /* s */
    DIMENSION_VOLTAGE,               /* V */
    DIMENSION_RESISTANCE,            /* ohm, Ω (also "open" where the input allows it: INFINITY) */
    DIMENSION_CAPACITANCE,           /* F */
    DIMENSION_INDUCTANCE,            /* H */
    DIMENSION_FREQUENCY,             /* Hz */
    DIMENSION_RESISTIVITY,           /* ohm m */
    DIMENSION_RESISTANCE_PER_LENGTH, /* ohm/m */
    DIMENSION_SKIN_RESISTANCE,       /* ohm/m/sqrt(Hz) */
    DIMENSION_INDUCTANCE_PER_LENGTH, /* H/m */
    DIMENSION_CAPACITANCE_PER_LENGTH, /* F/m */
    DIMENSION_SLOWNESS,               /* s/m */
    DIMENSION_LEVEL,                  /* dB */
    DIMENSION_ATTENUATION,            /* dB/m */
    DIMENSION_WORD,                   /* one of an input's words; the value is its index */
};

/* A value with its tolerance, all in SI: it may lie anywhere in value - minus .. value + plus. */
struct quantity {
    double value;
    double minus; /* >= 0 */
    double plus;  /* >= 0 */
    enum dimension dimension;
};

/* from <= to; a single value has from == to. */
struct interval {
    double from;
    double to;
};

/* Name of a dimension for messages ("a length"), its plain unit for headings ("mm" is not it: "m"),
 * and an example of what may be written ("0.35 mm"). */
const char *dimension_name(enum dimension dimension);
const char *dimension_unit(enum dimension dimension);
const char *dimension_example(enum dimension dimension);

/* "0.35mm", "0.35 mm", "1.51 mm ± 10 %", "4.3 +/- 0.2", "0.2 mm +15 % -5 %".  The decimal exponent
 * of the unit is shifted into the digits before strtod, so "0.35 mm" is exactly 0.35e-3.  Refused
 * (ERROR_INPUT, naming what was found and an example): no number, no unit, a wrong unit, trailing
 * text, infinite, NaN, hexadecimal, a magnitude beyond 1e30, a tolerance that is negative or
 * reaches the value's sign.  `quantity` written only on success. */
bool quantity_parse(const char *text, enum dimension dimension, struct quantity *quantity,
                    struct error *error);

/* As quantity_parse, or a range "10 ohm .. 40 ohm" ("10 .. 40 ohm" takes the unit from the end),
 * "up to 40 ohm" (from = lowest) or "at least 10 ohm" (to = highest).  A range takes no tolerance.
 * When a single value was written, *range is {value, value} and *quantity has its tolerance; when a
 * range was written *is_range is true and quantity->value is its middle. */
bool quantity_parse_range(const char *text, enum dimension dimension, double lowest, double highest,
                          struct quantity *quantity, struct interval *range, bool *is_range,
                          struct error *error);

/* "0.15 mm .. 6 mm in 40 points", "... in 40 points log": the points of a sweep.  `count` is what
 * was asked for, 2 .. QUANTITY_MOST_POINTS; refused with the number otherwise.  points[most] filled
 * from lowest to highest. */
enum { QUANTITY_MOST_POINTS = 1000 };
bool quantity_parse_points(const char *text, enum dimension dimension, double *points, size_t most,
                           size_t *count, bool *logarithmic, struct error *error);

enum quantity_style {
    QUANTITY_ASCII,       /* "0.35 mm", "50 ohm", "-3.2 dB": terminal, CSV headings, messages */
    QUANTITY_TYPOGRAPHIC, /* thin space before the unit, real minus, µ, Ω */
};
enum quantity_lengths { QUANTITY_MILLIMETRES, QUANTITY_MILS };

/* Writes `value` with an engineering prefix; lengths in mm (µm below 0.1 mm) or mil, ratios in
 * percent; INFINITY of a resistance as "open", NAN as "not defined".  `digits` > 0: exactly that
 * many significant digits, trailing zeros kept ("0.350 mm"); `digits` < 0: at most -digits,
 * trailing zeros cut ("0.35 mm").  The point never comes from a locale.  Returns `buffer`, cut at
 * its end when `size` is short; 64 bytes are always enough. */
char *quantity_print(char *buffer, size_t size, double value, enum dimension dimension, int digits,
                     enum quantity_style style, enum quantity_lengths lengths);

/* For an axis or a table column: one scale and unit for all values up to `largest`:
 * e.g. 0.33 V -> *scale = 1e3, unit "mV". */
const char *quantity_axis_unit(double largest, enum dimension dimension, enum quantity_style style,
                               enum quantity_lengths lengths, double *scale);

/* The smallest whole multiple of grid that is >= value (up) or the largest that is <= value (down),
 * with a relative slack of 1e-9 for values that sit on the grid. */
long quantity_grid_up(double value, double grid);
long quantity_grid_down(double value, double grid);

#endif

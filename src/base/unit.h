#ifndef BASE_UNIT_H
#define BASE_UNIT_H

#include "groundrules/quantity.h"

/* What can be written as the unit of a dimension, and the prefixed units that are printed. */

enum { UNIT_PREFIXES = 10, UNIT_PLAIN = 5 }; /* f p n u m - k M G T: exponent 3 (i - 5) */

/* [UNIT_PREFIXES] texts, or NULL when the dimension is printed without prefixes. */
const char *const *unit_prefixed(enum dimension dimension, enum quantity_style style);

/* The unit as printed without a prefix, "" for pure numbers. */
const char *unit_plain(enum dimension dimension, enum quantity_style style);

/* value in SI = number * multiply * 10^exponent / divide */
struct unit {
    unsigned multiply;
    int exponent;
    double divide;
};

/* `text` (ASCII: u for micro, ohm for the Greek letter) of `length` bytes as a unit of `dimension`.
 * An empty text is the unit of pure numbers and ratios only. */
bool unit_find(const char *text, size_t length, enum dimension dimension, struct unit *unit);

/* The dimension that has this unit, for messages; false when none has. */
bool unit_owner(const char *text, size_t length, enum dimension *dimension);

#endif

#ifndef REPORT_AXIS_H
#define REPORT_AXIS_H

#include "groundrules/quantity.h"

#include <stdbool.h>
#include <stddef.h>

/* Scales: nice ends, ticks at 1-2-5, decades with minor ticks, numbers in one engineering unit. */

enum { AXIS_MOST_TICKS = 200 };

struct axis_request {
    double lowest, highest; /* of what is to be shown, SI; lowest <= highest, finite */
    enum dimension dimension;
    enum quantity_lengths lengths;
    bool logarithmic;
    bool tight;  /* ends exactly at lowest and highest (a sweep); else at whole ticks */
    size_t most; /* labelled ticks at most, >= 2; 0 = 8 */
};

struct axis_tick {
    double value;   /* SI */
    bool major;     /* labelled; the others are minor */
    char label[40]; /* markup, typographic: "−20", "0.5", "10<sup>6</sup>" */
};

struct axis {
    double low, high; /* SI */
    bool logarithmic;
    double scale;     /* shown = SI * scale */
    const char *unit; /* typographic, "" for pure numbers */
    int decimals;     /* of the labels of a linear axis */
    struct axis_tick ticks[AXIS_MOST_TICKS];
    size_t count;
};

/* A range of no extent is widened; zero is included when the lowest value is below a third of the
 * highest.  A logarithmic axis over less than one decade is labelled at 1, 2, 5 or linearly within;
 * over more than two decades at the powers of ten.  Fails: ERROR_INPUT when a logarithmic axis is
 * asked for values that are not above 0, or a value is not finite. */
bool axis_make(const struct axis_request *request, struct axis *axis, struct error *error);

/* 0 at the low end, 1 at the high end, beyond outside; NAN for what a logarithmic axis cannot
 * show. */
double axis_position(const struct axis *axis, double value);

#endif

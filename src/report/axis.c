#include "report/axis.h"

#include <assert.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { STANDARD_MOST = 8, LARGEST_MOST = 20 };

/* Whole multiples of a step mantissa * 10^exponent; multiples as integers keep ticks exact. */
struct step {
    int mantissa, exponent;
    double size;
};

static double power(int exponent) {
    return exponent >= 0 ? pow(10, exponent) : 1 / pow(10, -exponent);
}

static struct step step_make(int mantissa, int exponent) {
    double size = exponent >= 0 ? mantissa * power(exponent) : mantissa / power(-exponent);
    return (struct step){mantissa, exponent, size};
}

static struct step step_next(struct step step) {
    return step.mantissa == 1   ? step_make(2, step.exponent)
           : step.mantissa == 2 ? step_make(5, step.exponent)
                                : step_make(1, step.exponent + 1);
}

/* Values a little off a multiple (rounding of the scale) count as on it. */
static double multiple_below(double value, double step) {
    return floor(value / step + 1e-9);
}

static double multiple_above(double value, double step) {
    return ceil(value / step - 1e-9);
}

static void add_tick(struct axis *axis, double value, bool major, const char *label) {
    if (axis->count == AXIS_MOST_TICKS)
        return;
    struct axis_tick *tick = &axis->ticks[axis->count++];
    *tick = (struct axis_tick){.value = value, .major = major};
    snprintf(tick->label, sizeof tick->label, "%s", label);
}

static void print_number(char label[40], double shown, int decimals) {
    char plain[64];
    snprintf(plain, sizeof plain, "%.*f", decimals, fabs(shown));
    bool zero = strspn(plain, "0.") == strlen(plain);
    snprintf(label, 40, "%s%.30s", shown < 0 && !zero ? "\u2212" : "", plain);
}

/* ---- linear ---- */

static double count_of(double low, double high, struct step step, bool tight) {
    double from = tight ? multiple_above(low, step.size) : multiple_below(low, step.size);
    double to = tight ? multiple_below(high, step.size) : multiple_above(high, step.size);
    return to - from + 1;
}

static struct step choose_step(double low, double high, size_t most, bool tight, int coarsest) {
    double finest = (high - low) / (double)(most + 1);
    struct step step = step_make(1, (int)floor(log10(finest)) - 1);
    while (count_of(low, high, step, tight) > (double)most || step.exponent < coarsest)
        step = step_next(step);
    return step;
}

static int decimals_of(struct step step) {
    return step.exponent < 0 ? -step.exponent : 0;
}

/* low and high in shown units. */
static void linear_ticks(struct axis *axis, double low, double high, struct step step) {
    int parts = step.mantissa == 2 ? 4 : 5;
    double fine = step.size / parts;
    axis->decimals = decimals_of(step);
    for (double n = multiple_above(low, fine); n <= multiple_below(high, fine); n++) {
        bool major = fmod(n, parts) == 0;
        char label[40] = "";
        double shown = major ? n / parts * step.mantissa : n * fine;
        if (major)
            shown =
                step.exponent >= 0 ? shown * power(step.exponent) : shown / power(-step.exponent);
        if (major)
            print_number(label, shown, axis->decimals);
        add_tick(axis, shown / axis->scale, major, label);
    }
}

static void include_zero(double *low, double *high) {
    if (*low > 0 && *low < *high / 3)
        *low = 0;
    if (*high < 0 && *high > *low / 3)
        *high = 0;
}

static void widen(double *low, double *high) {
    if (*high - *low > 1e-12 * fmax(fabs(*low), fabs(*high)))
        return;
    double middle = *low;
    *low = fmin(0, 1.25 * middle);
    *high = middle == 0 ? 1 : fmax(0, 1.25 * middle);
}

static void make_linear(const struct axis_request *request, size_t most, struct axis *axis) {
    double low = request->lowest, high = request->highest;
    widen(&low, &high);
    if (!request->tight)
        include_zero(&low, &high);
    axis->unit = quantity_axis_unit(fmax(fabs(low), fabs(high)), request->dimension,
                                    QUANTITY_TYPOGRAPHIC, request->lengths, &axis->scale);
    double shown_low = low * axis->scale, shown_high = high * axis->scale;
    int coarsest = request->dimension == DIMENSION_COUNT ? 0 : -30;
    struct step step = choose_step(shown_low, shown_high, most, request->tight, coarsest);
    if (!request->tight) {
        shown_low = multiple_below(shown_low, step.size) * step.size;
        shown_high = multiple_above(shown_high, step.size) * step.size;
        low = shown_low / axis->scale;
        high = shown_high / axis->scale;
    }
    axis->low = low;
    axis->high = high;
    linear_ticks(axis, shown_low, shown_high, step);
}

/* ---- logarithmic ---- */

static double nice_below(double value) {
    double decade = power((int)floor(log10(value) + 1e-9));
    double mantissa = value / decade * (1 + 1e-9);
    return (mantissa >= 5 ? 5 : mantissa >= 2 ? 2 : 1) * decade;
}

static double nice_above(double value) {
    double decade = power((int)floor(log10(value) + 1e-9));
    double mantissa = value / decade * (1 - 1e-9);
    return (mantissa <= 1 ? 1 : mantissa <= 2 ? 2 : mantissa <= 5 ? 5 : 10) * decade;
}

static double round_number(int mantissa, int exponent) {
    return exponent >= 0 ? mantissa * power(exponent) : mantissa / power(-exponent);
}

/* Over more than three decades no single unit serves: each label carries its own. */
static void wide_label(char label[40], double value, int exponent,
                       const struct axis_request *request) {
    if (request->dimension == DIMENSION_NUMBER || request->dimension == DIMENSION_RATIO ||
        request->dimension == DIMENSION_COUNT)
        snprintf(label, 40, "10<sup>%s%d</sup>", exponent < 0 ? "\u2212" : "", abs(exponent));
    else
        quantity_print(label, 40, value, request->dimension, 1, QUANTITY_TYPOGRAPHIC,
                       request->lengths);
}

struct logarithm {
    int first, last; /* decades touched, of the shown values */
    int stride;      /* decades between labels */
    bool fives;      /* labels at 1, 2 and 5 */
    bool wide;       /* labels with their own unit */
    bool minor;
};

static void decade_ticks(struct axis *axis, const struct axis_request *request,
                         const struct logarithm *plan, double low, double high) {
    for (int decade = plan->first; decade <= plan->last; decade++)
        for (int m = 1; m <= 9; m++) {
            double shown = round_number(m, decade);
            if (shown < low * (1 - 1e-9) || shown > high * (1 + 1e-9))
                continue;
            bool major = m == 1 ? ((decade - plan->first) % plan->stride) == 0
                                : plan->fives && (m == 2 || m == 5);
            char label[40] = "";
            if (major && plan->wide)
                wide_label(label, shown / axis->scale, decade, request);
            else if (major)
                print_number(label, shown, decade < 0 ? -decade : 0);
            if (major || plan->minor)
                add_tick(axis, shown / axis->scale, major, label);
        }
}

static size_t count_major(const struct axis *axis) {
    size_t count = 0;
    for (size_t i = 0; i < axis->count; i++)
        count += axis->ticks[i].major;
    return count;
}

static void make_logarithmic(const struct axis_request *request, size_t most, struct axis *axis) {
    double low = request->lowest, high = request->highest;
    if (high / low < 1 + 1e-9) {
        low /= 2;
        high *= 2;
    }
    double decades = log10(high / low);
    bool wide = decades > 3;
    axis->unit = quantity_axis_unit(high, request->dimension, QUANTITY_TYPOGRAPHIC,
                                    request->lengths, &axis->scale);
    if (wide) {
        axis->unit = "";
        axis->scale = 1;
    }
    double shown_low = low * axis->scale, shown_high = high * axis->scale;
    if (!request->tight) {
        shown_low = nice_below(shown_low);
        shown_high = nice_above(shown_high);
        low = shown_low / axis->scale;
        high = shown_high / axis->scale;
    }
    axis->low = low;
    axis->high = high;
    axis->logarithmic = true;
    decades = log10(high / low);
    struct logarithm plan = {
        .first = (int)floor(log10(shown_low) + 1e-9),
        .last = (int)floor(log10(shown_high) + 1e-9),
        .stride = (int)fmax(1, ceil(decades / (double)most)),
        .fives = decades <= 2.0 + 1e-9 && 3 * decades + 1 <= (double)most + 1,
        .wide = wide,
        .minor = decades <= 12,
    };
    decade_ticks(axis, request, &plan, shown_low, shown_high);
    if (count_major(axis) >= 3)
        return;
    /* Rather closer labels than even steps on an axis that is none. */
    axis->count = 0;
    plan.fives = true;
    decade_ticks(axis, request, &plan, shown_low, shown_high);
    if (count_major(axis) >= 4)
        return;
    axis->count = 0;
    linear_ticks(axis, shown_low, shown_high, choose_step(shown_low, shown_high, most, true, -30));
}

bool axis_make(const struct axis_request *request, struct axis *axis, struct error *error) {
    if (!isfinite(request->lowest) || !isfinite(request->highest) ||
        request->lowest > request->highest)
        return error_set(error, ERROR_INPUT, "an axis from %g to %g", request->lowest,
                         request->highest);
    if (request->logarithmic && !(request->lowest > 0))
        return error_set(error, ERROR_INPUT,
                         "a logarithmic axis cannot start at %g, must be above 0", request->lowest);
    size_t most = request->most == 0 ? STANDARD_MOST : request->most;
    most = most < 2 ? 2 : most > LARGEST_MOST ? LARGEST_MOST : most;
    struct axis made = {.scale = 1};
    if (request->logarithmic)
        make_logarithmic(request, most, &made);
    else
        make_linear(request, most, &made);
    *axis = made;
    return true;
}

double axis_position(const struct axis *axis, double value) {
    if (!axis->logarithmic)
        return (value - axis->low) / (axis->high - axis->low);
    return value > 0 ? log(value / axis->low) / log(axis->high / axis->low) : (double)NAN;
}

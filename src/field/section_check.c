#include "section_parts.h"

#include <math.h>

/* Beyond these ratios the corner and gap scales part so far that double precision and the mesh
 * rules are untested; no board is near them. */
static const double most_dk = 100.0;
static const double most_heights = 1e4;
static const double least_heights = 1e-4;
static const double thinnest = 1e-6;

static bool conductor_check(const struct section_problem *problem, size_t i, struct error *error) {
    const struct section_conductor *c = &problem->conductors[i];
    double h = problem->height;
    if (!isfinite(c->left) || !isfinite(c->width) || !isfinite(c->thickness))
        return error_set(error, ERROR_INPUT, "conductor %zu: left, width or thickness is no number",
                         i + 1);
    if (!(c->width > 0))
        return error_set(error, ERROR_INPUT, "conductor %zu: width is %g m, must be above 0", i + 1,
                         c->width);
    if (!(c->thickness >= 0))
        return error_set(error, ERROR_INPUT,
                         "conductor %zu: thickness is %g m, must be 0 (a sheet) or above", i + 1,
                         c->thickness);
    if (c->width > most_heights * h || c->width < least_heights * h)
        return error_set(error, ERROR_INPUT,
                         "conductor %zu: width %g m is %g of the height %g m, allowed are %g to %g",
                         i + 1, c->width, c->width / h, h, least_heights, most_heights);
    if (c->thickness > 100 * c->width || c->thickness > 100 * h)
        return error_set(error, ERROR_INPUT,
                         "conductor %zu: thickness %g m is more than 100 times its width or the "
                         "height",
                         i + 1, c->thickness);
    if (c->thickness > 0 && c->thickness < thinnest * c->width)
        return error_set(
            error, ERROR_INPUT,
            "conductor %zu: thickness %g m is below %g of its width; use 0 for a sheet", i + 1,
            c->thickness, thinnest);
    if (fabs(c->left) > 100 * most_heights * h)
        return error_set(error, ERROR_INPUT,
                         "conductor %zu: left edge at %g m is more than %g heights from x = 0",
                         i + 1, c->left, 100 * most_heights);
    return true;
}

static bool gap_check(const struct section_problem *problem, size_t i, struct error *error) {
    const struct section_conductor *one = &problem->conductors[i - 1], *two = one + 1;
    double gap = two->left - (one->left + one->width);
    if (two->left < one->left)
        return error_set(error, ERROR_INPUT,
                         "conductors %zu and %zu are not in order from left to right (%g m, %g m)",
                         i, i + 1, one->left, two->left);
    if (gap < 0)
        return error_set(error, ERROR_INPUT, "conductors %zu and %zu overlap by %g m", i, i + 1,
                         -gap);
    double least = 1e-4 * fmin(problem->height, fmin(one->width, two->width));
    if (gap < least)
        return error_set(error, ERROR_INPUT,
                         "conductors %zu and %zu touch or nearly: gap %g m, must be at least %g m",
                         i, i + 1, gap, least);
    return true;
}

bool section_check(const struct section_problem *problem, struct error *error) {
    if (!isfinite(problem->height) || !(problem->height > 0))
        return error_set(error, ERROR_INPUT, "height is %g m, must be above 0", problem->height);
    if (!isfinite(problem->dk) || !(problem->dk >= 1) || problem->dk > most_dk)
        return error_set(error, ERROR_INPUT, "dk is %g, must be from 1 to %g", problem->dk,
                         most_dk);
    if (problem->count < 1 || problem->count > SECTION_MOST_CONDUCTORS)
        return error_set(error, ERROR_INPUT, "%zu conductors, must be 1 to %d", problem->count,
                         SECTION_MOST_CONDUCTORS);
    for (size_t i = 0; i < problem->count; i++)
        if (!conductor_check(problem, i, error))
            return false;
    for (size_t i = 1; i < problem->count; i++)
        if (!gap_check(problem, i, error))
            return false;
    return true;
}

#include "section_parts.h"

#include <math.h>

/* Beyond these ratios the corner and gap scales part so far that double precision and the mesh
 * rules are untested; no board is near them. */
static const double most_dk = 100.0;
static const double most_heights = 1e4;
static const double least_heights = 1e-4;
static const double thinnest = 1e-6;
static const double most_etch = 0.45, most_slope = 10; /* of the width, of the thickness */
static const double most_spacings = 80; /* between the planes; the kernel's exponentials end */

static bool etch_check(const struct section_conductor *c, size_t i, struct error *error) {
    if (!isfinite(c->etch) || !(c->etch >= 0))
        return error_set(error, ERROR_INPUT, "conductor %zu: etch is %g m, must be 0 or above",
                         i + 1, c->etch);
    if (c->etch > most_etch * c->width)
        return error_set(error, ERROR_INPUT,
                         "conductor %zu: etch %g m on either side leaves no top of the width %g m, "
                         "at most %g m",
                         i + 1, c->etch, c->width, most_etch * c->width);
    if (c->etch > most_slope * c->thickness)
        return error_set(error, ERROR_INPUT,
                         "conductor %zu: etch is %g m with a thickness of %g m, at most %g of it",
                         i + 1, c->etch, c->thickness, most_slope);
    return true;
}

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
    return etch_check(c, i, error);
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

static bool dk_check(const char *name, double dk, struct error *error) {
    if (!isfinite(dk) || !(dk >= 1) || dk > most_dk)
        return error_set(error, ERROR_INPUT, "%s is %g, must be from 1 to %g", name, dk, most_dk);
    return true;
}

static double thickest(const struct section_problem *problem) {
    double most = 0;
    for (size_t i = 0; i < problem->count; i++)
        most = fmax(most, problem->conductors[i].thickness);
    return most;
}

static bool mask_check(const struct section_problem *problem, struct error *error) {
    double h = problem->height;
    if (!isfinite(problem->mask) || !(problem->mask >= 0))
        return error_set(error, ERROR_INPUT, "mask is %g m, must be 0 (none) or above",
                         problem->mask);
    if (problem->mask == 0)
        return true;
    if (problem->mask < 1e-3 * h || problem->mask > 100 * h)
        return error_set(error, ERROR_INPUT,
                         "mask %g m is %g of the height %g m, allowed are 0.001 to 100, or 0",
                         problem->mask, problem->mask / h, h);
    return dk_check("mask_dk", problem->mask_dk, error);
}

static bool cover_check(const struct section_problem *problem, struct error *error) {
    if (!isfinite(problem->cover) || !(problem->cover >= 0))
        return error_set(error, ERROR_INPUT, "cover is %g m, must be 0 (none) or above",
                         problem->cover);
    if (problem->cover == 0)
        return true;
    if (problem->plane != SECTION_PLANE)
        return error_set(error, ERROR_INPUT,
                         "cover is %g m: a plane above needs an endless plane below",
                         problem->cover);
    double below = thickest(problem) + problem->mask, spacing = problem->height + problem->cover;
    if (!(problem->cover - below >= 1e-3 * spacing))
        return error_set(error, ERROR_INPUT,
                         "cover is %g m above the copper's foot, must be more than %g m "
                         "(thickness and mask) by at least %g m",
                         problem->cover, below, 1e-3 * spacing);
    const struct section_conductor *last = &problem->conductors[problem->count - 1];
    double across = last->left + last->width - problem->conductors[0].left;
    if (across > 2 * most_spacings * spacing)
        return error_set(error, ERROR_INPUT,
                         "cover: the copper reaches over %g m, at most %g times the %g m between "
                         "the planes",
                         across, 2 * most_spacings, spacing);
    return dk_check("cover_dk", problem->cover_dk, error);
}

static bool plane_check(const struct section_problem *problem, struct error *error) {
    switch (problem->plane) {
    case SECTION_PLANE:
        return true;
    case SECTION_PLANE_ENDS:
        if (!(fabs(problem->plane_end) <= 100 * most_heights * problem->height))
            return error_set(error, ERROR_INPUT,
                             "plane_end is at %g m, must be within %g heights of x = 0",
                             problem->plane_end, 100 * most_heights);
        return true;
    case SECTION_NO_PLANE:
        if (problem->count < 2)
            return error_set(error, ERROR_INPUT,
                             "%zu conductor without a plane, needs 2: the first is the reference",
                             problem->count);
        return true;
    }
    return error_set(error, ERROR_INPUT, "plane is %d, no kind of plane", (int)problem->plane);
}

bool section_check(const struct section_problem *problem, struct error *error) {
    if (!isfinite(problem->height) || !(problem->height > 0))
        return error_set(error, ERROR_INPUT, "height is %g m, must be above 0", problem->height);
    if (!dk_check("dk", problem->dk, error))
        return false;
    if (problem->count < 1 || problem->count > SECTION_MOST_CONDUCTORS)
        return error_set(error, ERROR_INPUT, "%zu conductors, must be 1 to %d", problem->count,
                         SECTION_MOST_CONDUCTORS);
    for (size_t i = 0; i < problem->count; i++)
        if (!conductor_check(problem, i, error))
            return false;
    for (size_t i = 1; i < problem->count; i++)
        if (!gap_check(problem, i, error))
            return false;
    return plane_check(problem, error) && mask_check(problem, error) && cover_check(problem, error);
}

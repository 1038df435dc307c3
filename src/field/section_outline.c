/* From a section to its faces.  Media: the slab (dk), the coating (mask_dk), what is above
 * (cover_dk under a cover, else air); borders of equal dielectrics vanish by themselves. */

#include "section_outline.h"

#include <math.h>

/* Under a cover the field dies out as exp(-pi x / spacing): 1e-10 of the charge is left out. */
static const double covered_reach = 7.5;

struct builder {
    const struct section_problem *problem;
    struct outline *outline;
    struct error *error;
    double middle; /* m */
    double height; /* of the spacing between the planes, in heights */
    double slab, above, coating;
    bool coated, ok;
};

static void face(struct builder *b, double complex from, double complex to, double left,
                 double right, size_t conductor) {
    b->ok = b->ok && outline_add(b->outline, from, to, left, right, conductor, b->error);
}

/* From a point to infinity, or, under a cover, as far as there is a field. */
static void endless(struct builder *b, double complex from, double direction, double left,
                    double right) {
    if (b->problem->cover > 0)
        face(b, from, from + direction * covered_reach * b->height, left, right, OUTLINE_NOBODY);
    else
        b->ok = b->ok && outline_add_endless(b->outline, from, direction, left, right, b->error);
}

struct trapezoid {
    double left, right, thickness, etch; /* of the foot; in heights */
};

static struct trapezoid trapezoid_of(const struct builder *b, size_t i) {
    const struct section_conductor *c = &b->problem->conductors[i];
    double h = b->problem->height, left = (c->left - b->middle) / h;
    return (struct trapezoid){left, left + c->width / h, c->thickness / h, c->etch / h};
}

static void add_conductor(struct builder *b, size_t i) {
    struct trapezoid c = trapezoid_of(b, i);
    double around = b->coated ? b->coating : b->above;
    double complex left = c.left + I, right = c.right + I;
    if (!(c.thickness > 0)) {
        face(b, left, right, around, b->slab, i);
        return;
    }
    double complex top_right = right - c.etch + I * c.thickness;
    double complex top_left = left + c.etch + I * c.thickness;
    face(b, left, right, OUTLINE_METAL, b->slab, i);
    face(b, right, top_right, OUTLINE_METAL, around, i);
    face(b, top_right, top_left, OUTLINE_METAL, around, i);
    face(b, top_left, left, OUTLINE_METAL, around, i);
}

static void add_slab_top(struct builder *b) {
    double around = b->coated ? b->coating : b->above;
    size_t last = b->problem->count - 1;
    endless(b, trapezoid_of(b, 0).left + I, -1, b->slab, around);
    for (size_t i = 0; i < last; i++)
        face(b, trapezoid_of(b, i).right + I, trapezoid_of(b, i + 1).left + I, around, b->slab,
             OUTLINE_NOBODY);
    endless(b, trapezoid_of(b, last).right + I, 1, around, b->slab);
}

static void add_slab_bottom(struct builder *b) {
    if (b->problem->plane == SECTION_PLANE_ENDS)
        endless(b, b->outline->map.end, 1, b->slab, 1);
    if (b->problem->plane != SECTION_NO_PLANE)
        return;
    endless(b, 0, 1, b->slab, 1);
    endless(b, 0, -1, 1, b->slab);
}

static void add_level(struct builder *b, double y) {
    endless(b, I * y, -1, b->coating, b->above);
    endless(b, I * y, 1, b->above, b->coating);
}

/* The coating's outer face over one conductor: flanks parallel to the copper's, square corners. */
struct bump {
    double low_left, low_right, top_left, top_right, top;
};

static struct bump bump_of(const struct builder *b, size_t i) {
    struct trapezoid c = trapezoid_of(b, i);
    double m = b->problem->mask / b->problem->height, slope = c.etch / c.thickness;
    double aside = m * sqrt(1 + slope * slope);
    double low = slope * m - aside, top = slope * (c.thickness + m) - aside;
    return (struct bump){c.left + low, c.right - low, c.left + top, c.right - top,
                         1 + c.thickness + m};
}

enum { MOST_POINTS = 4 * SECTION_MOST_CONDUCTORS };

struct profile {
    size_t count;
    double complex point[MOST_POINTS];
};

static double at_height(double complex from, double complex to, double y) {
    double share = (y - cimag(from)) / (cimag(to) - cimag(from));
    return creal(from) + share * (creal(to) - creal(from));
}

/* The right flank of the profile's last bump has met the next bump, which is added. */
static void merge(struct profile *profile, const struct bump *next) {
    double complex low = profile->point[profile->count - 1];
    double complex top = profile->point[profile->count - 2];
    double complex next_low = next->low_left + I * cimag(low);
    double complex next_top = next->top_left + I * next->top;
    double height = fmin(cimag(top), next->top), tiny = 1e-9;
    double here = at_height(top, low, height), there = at_height(next_top, next_low, height);
    profile->count -= 1;
    if (here < there) {
        /* Flanks cross below the lower top. */
        double apart = next->low_left - creal(low);
        double closing = (there - here - apart) / (height - cimag(low));
        double y = cimag(low) - apart / closing;
        profile->point[profile->count++] = at_height(top, low, y) + I * y;
        profile->point[profile->count++] = next_top;
    } else if (fabs(cimag(top) - next->top) < tiny) {
        profile->count -= 1;
    } else if (next->top > cimag(top)) {
        profile->point[profile->count - 1] = there + I * height;
        profile->point[profile->count++] = next_top;
    } else {
        profile->point[profile->count++] = here + I * height;
    }
    profile->point[profile->count++] = next->top_right + I * next->top;
    profile->point[profile->count++] = next->low_right + I * cimag(low);
}

static bool make_profile(const struct builder *b, struct profile *profile) {
    double level = 1 + b->problem->mask / b->problem->height;
    profile->count = 0;
    for (size_t i = 0; i < b->problem->count; i++) {
        if (!(b->problem->conductors[i].thickness > 0))
            continue;
        struct bump next = bump_of(b, i);
        if (profile->count > 0 &&
            next.low_left < creal(profile->point[profile->count - 1]) + 1e-9) {
            merge(profile, &next);
            continue;
        }
        profile->point[profile->count++] = next.low_left + I * level;
        profile->point[profile->count++] = next.top_left + I * next.top;
        profile->point[profile->count++] = next.top_right + I * next.top;
        profile->point[profile->count++] = next.low_right + I * level;
    }
    for (size_t i = 1; i < profile->count; i++)
        if (creal(profile->point[i]) < creal(profile->point[i - 1]) - 1e-9)
            return false;
    return true;
}

static void add_conformal(struct builder *b) {
    struct profile profile;
    if (!make_profile(b, &profile)) {
        b->ok = error_set(b->error, ERROR_INPUT,
                          "mask: %g m is so thick that it closes over thinner copper between "
                          "thicker; give all conductors one thickness or make it a flat layer",
                          b->problem->mask);
        return;
    }
    if (profile.count == 0) {
        add_level(b, 1 + b->problem->mask / b->problem->height);
        return;
    }
    endless(b, profile.point[0], -1, b->coating, b->above);
    for (size_t i = 1; i < profile.count; i++)
        if (cabs(profile.point[i] - profile.point[i - 1]) > 1e-9)
            face(b, profile.point[i - 1], profile.point[i], b->above, b->coating, OUTLINE_NOBODY);
    endless(b, profile.point[profile.count - 1], 1, b->above, b->coating);
}

static void add_flat(struct builder *b) {
    double thickest = 0;
    for (size_t i = 0; i < b->problem->count; i++)
        thickest = fmax(thickest, b->problem->conductors[i].thickness);
    add_level(b, 1 + (thickest + b->problem->mask) / b->problem->height);
}

static double middle_of(const struct section_problem *problem) {
    const struct section_conductor *last = &problem->conductors[problem->count - 1];
    return 0.5 * (problem->conductors[0].left + last->left + last->width);
}

bool section_outline(const struct section_problem *problem, struct outline *outline,
                     struct error *error) {
    struct builder b = {.problem = problem, .outline = outline, .error = error, .ok = true};
    double h = problem->height;
    b.middle = middle_of(problem);
    b.height = 1 + problem->cover / h;
    b.slab = problem->dk;
    b.above = problem->cover > 0 ? problem->cover_dk : 1;
    b.coated = problem->mask > 0;
    b.coating = problem->mask_dk;
    outline->count = outline->corners = 0;
    outline->conductors = problem->count;
    outline->map = (struct plane_map){.kind = problem->cover > 0                     ? PLANE_TWO
                                              : problem->plane == SECTION_PLANE_ENDS ? PLANE_HALF
                                              : problem->plane == SECTION_NO_PLANE   ? PLANE_NONE
                                                                                     : PLANE_BELOW,
                                      .spacing = b.height,
                                      .end = (problem->plane_end - b.middle) / h};
    for (size_t i = 0; i < problem->count; i++)
        add_conductor(&b, i);
    add_slab_top(&b);
    add_slab_bottom(&b);
    if (b.coated && problem->mask_flat)
        add_flat(&b);
    else if (b.coated)
        add_conformal(&b);
    outline_find_corners(outline);
    return b.ok;
}

bool section_outline_mirrored(const struct section_problem *problem) {
    const struct section_conductor *c = problem->conductors;
    double middle = middle_of(problem), allowed = 1e-10 * problem->height;
    if (problem->plane == SECTION_PLANE_ENDS)
        return false;
    for (size_t i = 0; i < (problem->count + 1) / 2; i++) {
        const struct section_conductor *one = &c[i], *other = &c[problem->count - 1 - i];
        if (fabs(one->width - other->width) > allowed ||
            fabs(one->thickness - other->thickness) > allowed ||
            fabs(one->etch - other->etch) > allowed ||
            fabs(middle - one->left - (other->left + other->width - middle)) > allowed)
            return false;
    }
    return true;
}

bool section_outline_homogeneous(const struct section_problem *problem) {
    double above = problem->cover > 0 ? problem->cover_dk : 1;
    bool below = problem->plane == SECTION_PLANE || problem->dk == 1;
    return problem->dk == above && below && (!(problem->mask > 0) || problem->mask_dk == above);
}

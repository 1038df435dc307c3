/* Orders of the fast solver from the geometry.
 * Terms: polynomials in s resolve 1/n^2 at the ends, so n^-3 in x; a feature of size d beside a
 * side of length w asks for n ~ (w/d)^(1/3). Nodes: interpolating a kernel whose nearest
 * singularity lies on the Bernstein ellipse rho of the side, count nodes leave rho^-count. */

#include "section_fast.h"
#include "section_image.h"
#include "section_parts.h"

#include <math.h>

/* Found by comparing with the plain solver. */
static const double level_base = 3.3, level_factor = 2.0, inner_factor = 0.7;
static const double upright_base = 1.7, upright_factor = 0.8;
static const double node_error = 2e-4, inner_node_error = 6e-5, image_error = 2e-5;

static double gap_between(const struct section_problem *problem, size_t i, size_t j) {
    const struct section_conductor *one = &problem->conductors[i < j ? i : j];
    const struct section_conductor *two = &problem->conductors[i < j ? j : i];
    return (two->left - (one->left + one->width)) / problem->height;
}

static size_t at_most(double wanted, size_t most, bool *reached) {
    double rounded = floor(wanted + 0.5);
    if (rounded <= (double)most)
        return (size_t)rounded;
    *reached = false;
    return most;
}

static void choose_terms(const struct section_problem *problem, size_t i, double raise,
                         struct section_orders *orders) {
    const struct section_conductor *c = &problem->conductors[i];
    double w = c->width / problem->height, t = c->thickness / problem->height;
    double near = 2.0;
    if (i > 0)
        near = fmin(near, gap_between(problem, i - 1, i));
    if (i + 1 < problem->count)
        near = fmin(near, gap_between(problem, i, i + 1));
    bool inner = i > 0 && i + 1 < problem->count;
    double factor = level_factor + (inner ? inner_factor * log1p(0.5 * w) : 0);
    /* By two, for one more polynomial would be of the other parity and change nothing where the
     * charge is even. */
    double level = level_base + factor * cbrt(w / near) + 2 * raise;
    double upright = upright_base + upright_factor * cbrt(t / near) + raise;
    orders->terms[i].level = at_most(level, FACE_MOST_TERMS, &orders->reached);
    orders->terms[i].upright = t > 0 ? at_most(upright, SECTION_MOST_UPRIGHT, &orders->reached) : 0;
}

/* Parameter of the ellipse with foci -1, 1: through 1 + 2 gap beyond the end, and through i height
 * above the middle. */
static double beyond_end(double gap) {
    return 1 + 2 * gap + 2 * sqrt(gap * (gap + 1));
}

static double above_middle(double height) {
    return height + sqrt(height * height + 1);
}

/* The same singularities in t, where x = (3t - t^3)/2 crowds nodes at the ends. */
static double crowded_beyond_end(double gap) {
    double third = acosh(1 + 2 * gap) / 3;
    double re = cosh(third), im = sqrt(3) * sinh(third);
    double sum = 0.5 * (hypot(re - 1, im) + hypot(re + 1, im));
    return sum + sqrt(sum * sum - 1);
}

static double crowded_above_middle(double height) {
    return above_middle(2 * sinh(asinh(height) / 3));
}

static double count_for(double rho, double error) {
    return fmax(ceil(log(error) / -log(rho)), 2);
}

/* The rules are Gauss', so a count that interpolates to `error` integrates to its square: half of
 * it still does. */
static size_t at_most_nodes(double wanted, bool *enough) {
    *enough = *enough && wanted <= 2 * FACE_MOST_NODES;
    return wanted > FACE_MOST_NODES ? FACE_MOST_NODES : (size_t)wanted;
}

struct section_nodes section_nodes(const struct section_problem *problem,
                                   const struct section_orders *orders, size_t i, size_t j) {
    const struct section_conductor *c = &problem->conductors[i];
    double w = c->width / problem->height, t = c->thickness / problem->height;
    /* Over a wide conductor the potential is the small difference of charge and image. */
    double error = orders->node_error / (1 + 0.5 * w), more = (double)orders->more_nodes;
    double gap = i == j ? 4 : gap_between(problem, i, j), end = gap / w, middle = 4 / w;
    struct section_nodes nodes = {.enough = true};
    double level = count_for(fmin(beyond_end(end), above_middle(middle)), error);
    if (end < 0.1) {
        double crowded =
            count_for(fmin(crowded_beyond_end(end), crowded_above_middle(middle)), error);
        nodes.level_crowded = crowded < level;
        level = fmin(level, crowded);
    }
    nodes.level = at_most_nodes(level + more, &nodes.enough);
    if (t > 0) {
        double rho = i == j ? beyond_end(2 / t) : above_middle(2 * gap / t);
        nodes.upright = at_most_nodes(count_for(rho, error) + more, &nodes.enough);
    }
    return nodes;
}

void section_orders_choose(const struct section_problem *problem, int effort,
                           struct section_orders *orders) {
    double raise = effort;
    orders->node_error = (problem->count > 2 ? inner_node_error : node_error) * pow(10, -raise);
    orders->more_nodes = (size_t)effort;
    orders->images =
        section_image_count(section_reflection(problem->dk), image_error * pow(10, -raise));
    orders->foot_corner = face_foot_corner(problem->dk);
    orders->reached = true;
    for (size_t i = 0; i < problem->count; i++) {
        choose_terms(problem, i, raise, orders);
        for (size_t j = i == 0 ? 0 : i - 1; j < problem->count && j <= i + 1; j++)
            orders->reached = orders->reached && section_nodes(problem, orders, i, j).enough;
    }
}

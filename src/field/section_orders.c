/* Orders of the fast solver from the geometry.
 * Terms: polynomials in s resolve 1/n^2 at the ends, so n^-3 in x; a feature of size d beside a
 * side of length w asks for n ~ (w/d)^(1/3). Nodes: interpolating a kernel whose nearest
 * singularity lies on the Bernstein ellipse rho of the side, count nodes leave rho^-count. */

#include "section_fast.h"
#include "section_image.h"
#include "section_parts.h"

#include <math.h>

/* Levels of polynomials, nodes, images, what one step of refinement adds; found by refining the
 * sections of the tests until every entry lay within 2e-5. */
static const double LEVEL_BASE = 3.3, LEVEL_FACTOR = 2.0, UP_BASE = 1.7, UP_FACTOR = 0.8,
                    NODE_ERROR = 2e-4, IMAGE_ERROR = 2e-5, STEP = 1.0, INNER = 0.7,
                    INNER_NODE = 0.3;

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

void section_orders_choose(const struct section_problem *problem, int effort,
                           struct section_orders *orders) {
    double raise = STEP * effort;
    orders->reached = true;
    for (size_t i = 0; i < problem->count; i++) {
        const struct section_conductor *c = &problem->conductors[i];
        double w = c->width / problem->height, t = c->thickness / problem->height;
        double near = 2.0;
        if (i > 0)
            near = fmin(near, gap_between(problem, i - 1, i));
        if (i + 1 < problem->count)
            near = fmin(near, gap_between(problem, i, i + 1));
        bool inner = i > 0 && i + 1 < problem->count;
        double factor = LEVEL_FACTOR + (inner ? INNER * log1p(0.5 * w) : 0);
        double level = LEVEL_BASE + factor * cbrt(w / near) + 1.5 * raise;
        double upright = UP_BASE + UP_FACTOR * cbrt(t / near) + raise;
        orders->terms[i].level = at_most(level, FACE_MOST_TERMS, &orders->reached);
        orders->terms[i].upright =
            t > 0 ? at_most(upright, SECTION_MOST_UPRIGHT, &orders->reached) : 0;
    }
    orders->node_error = (problem->count > 2 ? INNER_NODE : 1) * NODE_ERROR * pow(10, -raise);
    orders->images =
        section_image_count(section_reflection(problem->dk), IMAGE_ERROR * pow(10, -raise));
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

static size_t count_for(double rho, double error) {
    double count = ceil(log(error) / -log(rho));
    return count > FACE_MOST_NODES ? FACE_MOST_NODES : count < 2 ? 2 : (size_t)count;
}

struct section_nodes section_nodes(const struct section_problem *problem,
                                   const struct section_orders *orders, size_t i, size_t j) {
    const struct section_conductor *c = &problem->conductors[i];
    double w = c->width / problem->height, t = c->thickness / problem->height;
    /* Over a wide conductor the potential is the small difference of charge and image. */
    double error = orders->node_error / (1 + 0.5 * w);
    double gap = i == j ? 4 : gap_between(problem, i, j), end = gap / w, middle = 4 / w;
    struct section_nodes nodes = {0};
    nodes.level = count_for(fmin(beyond_end(end), above_middle(middle)), error);
    if (end < 0.1) {
        size_t crowded =
            count_for(fmin(crowded_beyond_end(end), crowded_above_middle(middle)), error);
        nodes.level_crowded = crowded < nodes.level;
        nodes.level = nodes.level_crowded ? crowded : nodes.level;
    }
    if (t > 0)
        nodes.upright = count_for(i == j ? beyond_end(2 / t) : above_middle(2 * gap / t), error);
    return nodes;
}

static bool solve_with(const struct section_problem *problem, int effort,
                       struct section_solution *solution, struct error *error) {
    struct section_orders orders;
    section_orders_choose(problem, effort, &orders);
    return section_fast(problem, &orders, solution, error);
}

bool section_solve_once(const struct section_problem *problem, struct section_solution *solution,
                        struct error *error) {
    return section_check(problem, error) && solve_with(problem, 0, solution, error);
}

bool section_solve(const struct section_problem *problem, struct section_solution *solution,
                   struct error *error) {
    struct section_solution rough, finer;
    if (!section_check(problem, error) || !solve_with(problem, 0, &rough, error) ||
        !solve_with(problem, 1, &finer, error))
        return false;
    finer.error = section_difference(&rough, &finer);
    *solution = finer;
    return true;
}

/* Orders of the fast solver from the geometry.
 * Terms: polynomials in s resolve 1/n^2 at the ends, so n^-3 in x; a feature of size d beside a
 * side of length w asks for n ~ (w/d)^(1/3). Nodes: interpolating a kernel whose nearest
 * singularity lies on the Bernstein ellipse rho of the side, count nodes leave rho^-count. */

#include "section_fast.h"
#include "section_image.h"
#include "section_parts.h"

#include <complex.h>
#include <math.h>

double tune_level_base = 3.0, tune_level_factor = 1.5, tune_up_base = 1.6, tune_up_factor = 0.8,
       tune_node = 3e-4, tune_image = 2e-5, tune_step = 1.0;

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
    double raise = tune_step * effort;
    orders->reached = true;
    for (size_t i = 0; i < problem->count; i++) {
        const struct section_conductor *c = &problem->conductors[i];
        double w = c->width / problem->height, t = c->thickness / problem->height;
        double near = 2.0;
        if (i > 0)
            near = fmin(near, gap_between(problem, i - 1, i));
        if (i + 1 < problem->count)
            near = fmin(near, gap_between(problem, i, i + 1));
        double level = tune_level_base + tune_level_factor * cbrt(w / near) + 1.5 * raise;
        double upright = tune_up_base + tune_up_factor * cbrt(t / near) + raise;
        orders->terms[i].level = at_most(level, FACE_MOST_TERMS, &orders->reached);
        orders->terms[i].upright =
            t > 0 ? at_most(upright, SECTION_MOST_UPRIGHT, &orders->reached) : 0;
    }
    orders->node_error = tune_node * pow(10, -raise);
    orders->images =
        section_image_count(section_reflection(problem->dk), tune_image * pow(10, -raise));
}

/* Ellipse through a singularity at z, the side being [-1, 1]. */
static double ellipse(double complex z) {
    double complex root = csqrt(z * z - 1);
    double rho = cabs(z + root);
    return rho > 1 ? rho : 1 / rho;
}

/* The same in t where z = (3t - t^3)/2 crowds nodes at the ends. */
static double crowded_ellipse(double complex z) {
    return ellipse(-2 * csin(casin(-z) / 3));
}

static size_t count_for(double complex z, double error, bool *crowded) {
    double plain = ellipse(z), dense = crowded_ellipse(z);
    *crowded = dense > 1.05 * plain;
    double count = ceil(log(1 / error) / log(fmax(plain, dense)));
    return count > FACE_MOST_NODES ? FACE_MOST_NODES : count < 2 ? 2 : (size_t)count;
}

struct section_nodes section_nodes(const struct section_problem *problem,
                                   const struct section_orders *orders, size_t i, size_t j) {
    const struct section_conductor *c = &problem->conductors[i];
    double w = c->width / problem->height, t = c->thickness / problem->height;
    double error = orders->node_error;
    struct section_nodes nodes = {0};
    double gap = i == j ? 4 : gap_between(problem, i, j);
    bool crowded;
    nodes.level = count_for(1 + 2 * gap / w, error, &nodes.level_crowded);
    size_t across = count_for(4 * I / w, error, &crowded);
    if (across > nodes.level) {
        nodes.level = across;
        nodes.level_crowded = crowded;
    }
    if (t > 0) {
        nodes.upright =
            count_for(i == j ? 1 + 4 / t : 2 * I * gap / t, error, &nodes.upright_crowded);
    }
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

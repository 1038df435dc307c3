/* Which solver a section is for. */

#include "groundrules/section.h"

#include "section_fast.h"
#include "section_general.h"
#include "section_parts.h"

#include <math.h>

/* What two efforts have in common and their difference cannot show: corner exponents in steps,
 * tables. */
static const double common_error = 5e-6;

/* Total charge converges in small steps: the finer of two solves can be as far off as the change.
 */
static const double slow_share = 2;

/* Hard sections are refined further. */
static const double good_enough = 4e-4;
enum { MOST_EFFORT = 3 };

/* Of two graded meshes: the smallest end pieces, whose charge is no polynomial. */
static const double plain_common_error = 3e-6;

static bool general_with(const struct section_problem *problem, int effort, bool share,
                         struct section_solution *solution, struct error *error) {
    struct piece_effort chosen;
    section_general_effort(effort, &chosen);
    return section_general(problem, &chosen, share, solution, error);
}

static bool fast_with(const struct section_problem *problem, int effort,
                      struct section_solution *solution, struct error *error) {
    struct section_orders orders;
    section_orders_choose(problem, effort, &orders);
    return section_fast(problem, &orders, solution, error);
}

static void forget_dielectric(struct section_solution *solution) {
    for (size_t i = 0; i < solution->count * solution->count; i++)
        solution->dielectric_capacitance[i] = NAN;
}

bool section_solve_once(const struct section_problem *problem, struct section_solution *solution,
                        struct error *error) {
    if (!section_check(problem, error) ||
        !(section_is_bare(problem) ? fast_with(problem, 0, solution, error)
                                   : general_with(problem, 1, false, solution, error)))
        return false;
    forget_dielectric(solution);
    return true;
}

static bool refine_general(const struct section_problem *problem, struct section_solution *finer,
                           struct error *error) {
    struct section_solution rough;
    if (!general_with(problem, 0, false, finer, error))
        return false;
    for (int effort = 1; effort <= MOST_EFFORT; effort++) {
        rough = *finer;
        if (!general_with(problem, effort, false, finer, error))
            return false;
        finer->error = slow_share * section_difference(&rough, finer) + common_error;
        if (finer->error < good_enough)
            break;
    }
    return true;
}

static bool refine_fast(const struct section_problem *problem, struct section_solution *finer,
                        struct error *error) {
    struct section_orders orders;
    struct section_solution rough;
    section_orders_choose(problem, 1, &orders);
    if (!orders.reached)
        return section_plain(problem, finer, error);
    if (!fast_with(problem, 0, &rough, error) || !section_fast(problem, &orders, finer, error))
        return false;
    finer->error = section_difference(&rough, finer) + common_error;
    return true;
}

bool section_solve(const struct section_problem *problem, struct section_solution *solution,
                   struct error *error) {
    struct section_solution result;
    if (!section_check(problem, error) ||
        !(section_is_bare(problem) ? refine_fast(problem, &result, error)
                                   : refine_general(problem, &result, error)))
        return false;
    forget_dielectric(&result);
    *solution = result;
    return true;
}

static bool graded(const struct section_problem *problem, struct section_solution *finer,
                   struct error *error) {
    struct piece_effort effort;
    struct section_solution rough;
    section_general_graded(0, &effort);
    if (!section_general(problem, &effort, false, &rough, error))
        return false;
    section_general_graded(1, &effort);
    if (!section_general(problem, &effort, false, finer, error))
        return false;
    finer->error = section_difference(&rough, finer) + plain_common_error;
    return true;
}

bool section_solve_plain(const struct section_problem *problem, struct section_solution *solution,
                         struct error *error) {
    struct section_solution result;
    if (!section_check(problem, error) ||
        !(section_is_bare(problem) ? section_plain(problem, &result, error)
                                   : graded(problem, &result, error)))
        return false;
    forget_dielectric(&result);
    *solution = result;
    return true;
}

/* The difference quotient of two solves with the same functions: C is stationary in them, so that
 * it is as smooth in dk as the kernel is. */
static bool fast_dielectric(const struct section_problem *problem,
                            const struct section_orders *orders, double *dielectric,
                            struct error *error) {
    struct section_problem less = *problem, more = *problem;
    struct section_solution low, high;
    less.dk *= 1 - SECTION_DK_STEP;
    more.dk *= 1 + SECTION_DK_STEP;
    if (!section_fast(&less, orders, &low, error) || !section_fast(&more, orders, &high, error))
        return false;
    for (size_t i = 0; i < problem->count * problem->count; i++)
        dielectric[i] = (high.capacitance[i] - low.capacitance[i]) / (2 * SECTION_DK_STEP);
    return true;
}

bool section_dielectric_capacitance(const struct section_problem *problem,
                                    struct section_solution *solution, struct error *error) {
    struct section_orders orders;
    struct section_solution solved = {.count = problem->count};
    if (!section_check(problem, error))
        return false;
    section_orders_choose(problem, 1, &orders);
    if (section_is_bare(problem) && problem->dk == 1)
        for (size_t i = 0; i < solved.count * solved.count; i++)
            solved.dielectric_capacitance[i] = 0;
    else if (section_is_bare(problem) && orders.reached) {
        if (!fast_dielectric(problem, &orders, solved.dielectric_capacitance, error))
            return false;
    } else if (!general_with(problem, 1, true, &solved, error))
        return false;
    for (size_t i = 0; i < solved.count * solved.count; i++)
        solution->dielectric_capacitance[i] = solved.dielectric_capacitance[i];
    return true;
}

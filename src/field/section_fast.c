#include "section_parts.h"

bool section_solve(const struct section_problem *problem, struct section_solution *solution,
                   struct error *error) {
    return section_solve_plain(problem, solution, error);
}

bool section_solve_once(const struct section_problem *problem, struct section_solution *solution,
                        struct error *error) {
    return section_solve_plain(problem, solution, error);
}

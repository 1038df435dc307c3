#include "groundrules/sketch.h"

#include <assert.h>
#include <math.h>

void sketch_add_solid(struct sketch *sketch, struct sketch_solid solid) {
    assert(sketch->solid_count < SKETCH_MOST_SOLIDS);
    sketch->solids[sketch->solid_count++] = solid;
}

void sketch_add_disc(struct sketch *sketch, struct sketch_disc disc) {
    assert(sketch->disc_count < SKETCH_MOST_DISCS);
    sketch->discs[sketch->disc_count++] = disc;
}

void sketch_add_dimension(struct sketch *sketch, struct sketch_dimension dimension) {
    assert(sketch->dimension_count < SKETCH_MOST_DIMENSIONS);
    sketch->dimensions[sketch->dimension_count++] = dimension;
}

static bool is_copper(enum sketch_role role) {
    return role != SKETCH_PLANE && role != SKETCH_DIELECTRIC && role != SKETCH_MASK &&
           role != SKETCH_COVER;
}

static enum section_tie tie_of(enum sketch_role role) {
    switch (role) {
    case SKETCH_TIED:
        return SECTION_TIED;
    case SKETCH_FLOATING:
        return SECTION_FLOATING;
    case SKETCH_TIED_ONE_END:
        return SECTION_TIED_ONE_END;
    case SKETCH_PLANE:
    case SKETCH_DIELECTRIC:
    case SKETCH_MASK:
    case SKETCH_COVER:
    case SKETCH_TRACE:
    case SKETCH_AGGRESSOR:
    case SKETCH_VICTIM:
        break;
    }
    return SECTION_SIGNAL;
}

static void add_conductor(const struct sketch_solid *solid, double etch,
                          struct section_problem *problem, enum section_tie *ties) {
    assert(problem->count < SECTION_MOST_CONDUCTORS);
    problem->height = solid->bottom;
    problem->conductors[problem->count] = (struct section_conductor){
        solid->left, solid->right - solid->left, solid->top - solid->bottom, etch};
    ties[problem->count++] = tie_of(solid->role);
}

void sketch_section(const struct sketch *sketch, struct section_problem *problem,
                    enum section_tie *ties) {
    double cover = 0.0;
    *problem = (struct section_problem){
        .dk = problem->dk, .mask_dk = problem->mask_dk, .cover_dk = problem->cover_dk};
    for (size_t i = 0; i < sketch->solid_count; i++) {
        const struct sketch_solid *solid = &sketch->solids[i];
        if (is_copper(solid->role))
            add_conductor(solid, sketch->etch, problem, ties);
        else if (solid->role == SKETCH_MASK)
            problem->mask = solid->top - solid->bottom;
        else if (solid->role == SKETCH_COVER)
            cover = solid->bottom;
        else if (solid->role == SKETCH_PLANE && isfinite(solid->right)) {
            problem->plane = SECTION_PLANE_ENDS;
            problem->plane_end = solid->right;
        }
    }
    if (cover > 0.0)
        problem->cover = cover - problem->height;
}

#include "groundrules/sketch.h"

#include <assert.h>
#include <math.h>

void sketch_add_solid(struct sketch *sketch, struct sketch_solid solid) {
    assert(sketch->solid_count < SKETCH_MOST_SOLIDS);
    sketch->solids[sketch->solid_count++] = solid;
}

void sketch_add_dimension(struct sketch *sketch, struct sketch_dimension dimension) {
    assert(sketch->dimension_count < SKETCH_MOST_DIMENSIONS);
    sketch->dimensions[sketch->dimension_count++] = dimension;
}

static bool is_copper(enum sketch_role role) {
    return role != SKETCH_PLANE && role != SKETCH_DIELECTRIC;
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
    case SKETCH_TRACE:
    case SKETCH_AGGRESSOR:
    case SKETCH_VICTIM:
        break;
    }
    return SECTION_SIGNAL;
}

void sketch_section(const struct sketch *sketch, double dk, struct section_problem *problem,
                    enum section_tie *ties) {
    *problem = (struct section_problem){.dk = dk};
    for (size_t i = 0; i < sketch->solid_count; i++) {
        const struct sketch_solid *solid = &sketch->solids[i];
        if (!is_copper(solid->role))
            continue;
        assert(problem->count < SECTION_MOST_CONDUCTORS);
        problem->height = solid->bottom;
        problem->conductors[problem->count] = (struct section_conductor){
            solid->left, solid->right - solid->left, solid->top - solid->bottom, 0};
        ties[problem->count++] = tie_of(solid->role);
    }
}

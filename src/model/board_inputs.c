#include "board_inputs.h"

#include <math.h>

const struct model_flag board_flags[BOARD_FLAG_COUNT] = {
    [BOARD_FLAG_THIN] = {"thin-sheet",
                         "Copper taken as an infinitely thin sheet: impedance a few percent high."},
    [BOARD_FLAG_WIDE_SECTION] =
        {"wide-section",
         "The section is larger than a tenth of the wavelength at the edge's highest "
         "frequency: the quasi-TEM solution is beyond its validity."},
    [BOARD_FLAG_SLOW] =
        {"slow-edge",
         "The edge is so slow that the return current spreads through the plane by its "
         "resistance: the plane's image is beyond its validity."},
};

void board_sketch_slab(struct sketch *sketch, double height) {
    sketch_add_solid(sketch, (struct sketch_solid){SKETCH_PLANE, -INFINITY, INFINITY, -35e-6, 0.0,
                                                   "ground plane"});
    sketch_add_solid(
        sketch, (struct sketch_solid){SKETCH_DIELECTRIC, -INFINITY, INFINITY, 0.0, height, NULL});
}

unsigned board_flags_of_edge(double size, double height, double thickness, double dk, double edge) {
    const double copper_resistivity = 1.72e-8, light = 299792458.0;
    double frequency = 0.35 / (0.8 * edge);
    unsigned flags = 0;
    if (size > 0.1 * light / (sqrt(dk) * frequency))
        flags |= 1u << BOARD_FLAG_WIDE_SECTION;
    double plane = thickness > 0.0 ? thickness : 35e-6;
    double spreading = copper_resistivity / (2.0 * M_PI * SECTION_MU_0 * plane * height);
    if (frequency < 10.0 * spreading)
        flags |= 1u << BOARD_FLAG_SLOW;
    return flags;
}

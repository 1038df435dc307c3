#include "board_inputs.h"

#include <math.h>

const struct model_flag board_flags[BOARD_FLAG_COUNT] = {
    [BOARD_FLAG_THIN] = {"thin-sheet",
                         "Copper taken as an infinitely thin sheet: impedance a few percent high.",
                         false},
    [BOARD_FLAG_WIDE_SECTION] =
        {"wide-section",
         "The section is larger than a tenth of the wavelength at the edge's highest "
         "frequency: the quasi-TEM solution is beyond its validity.",
         false},
    [BOARD_FLAG_SLOW] =
        {"slow-edge",
         "The edge is so slow that the return current spreads through the plane by its "
         "resistance: the plane's image is beyond its validity.",
         false},
    [BOARD_FLAG_NEAR_EDGE] =
        {"near-plane-edge",
         "The plane ends within ten heights of a trace. It is solved with that edge, the laminate "
         "going on beyond it; what radiates from the edge is not counted.",
         true},
};

static const char *length_text(char *text, size_t size, double length) {
    quantity_print(text, size, length, DIMENSION_LENGTH, -6, QUANTITY_ASCII, QUANTITY_MILLIMETRES);
    return text;
}

bool board_check(const struct board *board, double narrowest, struct error *error) {
    char first[40], second[40];
    if (!(board->etch <= 0.45 * narrowest))
        return error_set(error, ERROR_INPUT,
                         "etch %s on both sides leaves less than a tenth of copper that is %s wide",
                         length_text(first, sizeof first, board->etch),
                         length_text(second, sizeof second, narrowest));
    if (board->cover > 0.0 && board->edge_distance > 0.0)
        return error_set(error, ERROR_NOT_YET,
                         "cover with edge_distance: a plane above one that ends is not solved by "
                         "this version; leave one of them out");
    if (board->cover > 0.0 && !(board->cover > board->thickness + board->mask))
        return error_set(error, ERROR_INPUT,
                         "cover %s: the plane above must clear the copper%s, which is %s thick",
                         length_text(first, sizeof first, board->cover),
                         board->mask > 0.0 ? " and its mask" : "",
                         length_text(second, sizeof second, board->thickness + board->mask));
    return true;
}

static const double PLANE_THICKNESS = 35e-6; /* drawn only */

void board_sketch(struct sketch *sketch, const struct board *board, double edge_from) {
    double height = board->height;
    sketch->etch = board->thickness > 0.0 ? board->etch : 0.0;
    double edge = board->edge_distance > 0.0 ? edge_from + board->edge_distance : INFINITY;
    sketch_add_solid(sketch, (struct sketch_solid){.role = SKETCH_PLANE,
                                                   .left = -INFINITY,
                                                   .right = edge,
                                                   .bottom = -PLANE_THICKNESS,
                                                   .label = "ground plane"});
    sketch_add_solid(sketch, (struct sketch_solid){.role = SKETCH_DIELECTRIC,
                                                   .left = -INFINITY,
                                                   .right = INFINITY,
                                                   .top = height});
    if (board->cover > 0.0) {
        double cover = height + board->cover;
        sketch_add_solid(sketch, (struct sketch_solid){.role = SKETCH_DIELECTRIC,
                                                       .left = -INFINITY,
                                                       .right = INFINITY,
                                                       .bottom = height,
                                                       .top = cover});
        sketch_add_solid(sketch, (struct sketch_solid){.role = SKETCH_COVER,
                                                       .left = -INFINITY,
                                                       .right = INFINITY,
                                                       .bottom = cover,
                                                       .top = cover + PLANE_THICKNESS,
                                                       .label = "plane above"});
    }
    if (board->mask > 0.0)
        sketch_add_solid(sketch, (struct sketch_solid){.role = SKETCH_MASK,
                                                       .left = -INFINITY,
                                                       .right = INFINITY,
                                                       .bottom = height,
                                                       .top = height + board->mask});
}

void board_sketch_copper(struct sketch *sketch, const struct board *board, enum sketch_role role,
                         double left, double width, const char *label) {
    sketch_add_solid(sketch, (struct sketch_solid){.role = role,
                                                   .left = left,
                                                   .right = left + width,
                                                   .bottom = board->height,
                                                   .top = board->height + board->thickness,
                                                   .label = label});
}

void board_sketch_dimensions(struct sketch *sketch, const struct board *board, double right,
                             double edge_from) {
    double height = board->height, top = height + board->thickness;
    sketch_add_dimension(sketch,
                         (struct sketch_dimension){true, 0.0, height, right, "height", height});
    if (board->mask > 0.0)
        sketch_add_dimension(sketch, (struct sketch_dimension){true, height, height + board->mask,
                                                               right, "mask", board->mask});
    if (board->cover > 0.0)
        sketch_add_dimension(sketch, (struct sketch_dimension){true, height, height + board->cover,
                                                               right, "cover", board->cover});
    if (board->edge_distance > 0.0)
        sketch_add_dimension(
            sketch, (struct sketch_dimension){false, edge_from, edge_from + board->edge_distance,
                                              top, "edge_distance", board->edge_distance});
}

void board_section(const struct sketch *sketch, const struct board *board,
                   struct section_problem *problem, enum section_tie *ties) {
    *problem = (struct section_problem){
        .dk = board->dk, .mask_dk = board->mask_dk, .cover_dk = board->cover_dk};
    sketch_section(sketch, problem, ties);
}

unsigned board_flags_of_section(const struct board *board) {
    unsigned flags = 0;
    if (board->thickness == 0.0)
        flags |= 1u << BOARD_FLAG_THIN;
    if (board->edge_distance > 0.0 && board->edge_distance < 10.0 * board->height)
        flags |= 1u << BOARD_FLAG_NEAR_EDGE;
    return flags;
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

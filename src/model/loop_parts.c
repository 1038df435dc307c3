#include "loop_parts.h"

#include "board_inputs.h"

#include <math.h>

enum {
    MOST_LOOPS = 2,
    MOST_VIAS = 2 * MOST_LOOPS * VIA_MOST_AT_AN_END,
    MOST_BRANCHES = MOST_LOOPS + MOST_VIAS,
    NODES_EACH = 3, /* top of the first end, top and foot of the second */
};

/* What the azimuthal harmonics leave out, of the vias' share: 3e-4 (test_inductance_groups.c), more
 * where their number is at its limit. */
static double via_error(double diameter, double spacing) {
    return fmax(3e-4,
                pow(inductance_barrel_convergence(diameter, spacing), INDUCTANCE_MOST_HARMONICS));
}

/* Rows across the trace at both ends; loop after loop, first end before second. */
static size_t place(const struct loop_shape *shape, size_t count, double *x, double *y) {
    size_t used = 0;
    for (size_t loop = 0; loop < count; loop++)
        for (size_t end = 0; end < 2; end++)
            for (size_t i = 0; i < shape->vias; i++) {
                double across = (double)i - (double)(shape->vias - 1) / 2.0;
                x[used] = (double)end * shape->length;
                y[used++] = (double)loop * shape->separation + across * shape->via_pitch;
            }
    return used;
}

static double closest(const struct loop_shape *shape, size_t count) {
    double row = (double)(shape->vias - 1) * shape->via_pitch, apart = shape->length;
    if (shape->vias > 1)
        apart = fmin(apart, shape->via_pitch);
    return count > 1 ? fmin(apart, shape->separation - row) : apart;
}

static bool vias_matrix(const struct loop_shape *shape, size_t count, double *matrix,
                        struct error *error) {
    double x[MOST_VIAS], y[MOST_VIAS];
    struct inductance_barrels barrels = {
        .count = place(shape, count, x, y),
        .x = x,
        .y = y,
        .height = shape->height + shape->thickness / 2.0,
        .diameter = shape->via_diameter,
        .ends = INDUCTANCE_ON_PLANE,
        .harmonics = inductance_barrel_harmonics(shape->via_diameter, closest(shape, count)),
    };
    return inductance_barrels_solve(&barrels, matrix, NULL, NULL, error) || error_in(error, "vias");
}

static bool traces_matrix(const struct loop_shape *shape, size_t count, double *inductance,
                          double *estimate, struct error *error) {
    struct inductance_trace trace[MOST_LOOPS];
    for (size_t i = 0; i < count; i++)
        trace[i] = (struct inductance_trace){(double)i * shape->separation, shape->width,
                                             shape->thickness, shape->height};
    struct inductance_traces traces = {count, trace, shape->length};
    return inductance_traces_solve(&traces, inductance, estimate, error) ||
           error_in(error, "trace");
}

/* Traces first, then the vias; a port lies under the feet of each second end. */
struct wiring {
    size_t branches;
    double matrix[MOST_BRANCHES * MOST_BRANCHES];
    size_t from[MOST_BRANCHES], to[MOST_BRANCHES];
    size_t in[MOST_LOOPS], out[MOST_LOOPS];
};

static void connect(struct wiring *wiring, const struct loop_shape *shape, size_t count,
                    const double *traces, const double *vias) {
    size_t per_loop = 2 * shape->vias, all = count * per_loop, n = count + all;
    wiring->branches = n;
    for (size_t i = 0; i < n * n; i++)
        wiring->matrix[i] = 0.0;
    for (size_t i = 0; i < all; i++)
        for (size_t j = 0; j < all; j++)
            wiring->matrix[(count + i) * n + count + j] = vias[i * all + j];
    for (size_t loop = 0; loop < count; loop++) {
        size_t top = NODES_EACH * loop + 1;
        for (size_t j = 0; j < count; j++)
            wiring->matrix[loop * n + j] = traces[loop * count + j];
        wiring->from[loop] = top;
        wiring->to[loop] = top + 1;
        for (size_t i = 0; i < per_loop; i++) {
            bool second = i >= shape->vias; /* all barrels count from the plane upwards */
            wiring->from[count + loop * per_loop + i] = second ? top + 2 : 0;
            wiring->to[count + loop * per_loop + i] = second ? top + 1 : top;
        }
        wiring->in[loop] = top + 2;
        wiring->out[loop] = 0;
    }
}

bool loop_solve(const struct loop_shape *shape, size_t count, struct loop_solution *solution,
                struct error *error) {
    double traces[MOST_LOOPS * MOST_LOOPS], estimate[MOST_LOOPS * MOST_LOOPS];
    double vias[MOST_VIAS * MOST_VIAS], inductance[MOST_LOOPS * MOST_LOOPS];
    struct wiring wiring;
    if (!traces_matrix(shape, count, traces, estimate, error) ||
        !vias_matrix(shape, count, vias, error))
        return false;
    connect(&wiring, shape, count, traces, vias);
    struct inductance_network network = {.branches = wiring.branches,
                                         .matrix = wiring.matrix,
                                         .from = wiring.from,
                                         .to = wiring.to,
                                         .nodes = NODES_EACH * count + 1,
                                         .ports = count,
                                         .port_in = wiring.in,
                                         .port_out = wiring.out};
    if (!inductance_network_solve(&network, inductance, NULL, error))
        return error_in(error, "loop");
    *solution = (struct loop_solution){
        .inductance = inductance[0], .trace = traces[0], .vias = inductance[0] - traces[0]};
    double relative = via_error(shape->via_diameter, closest(shape, count));
    solution->error = estimate[0] + relative * solution->vias;
    if (count > 1) {
        solution->mutual = inductance[1];
        solution->mutual_error = estimate[1] + relative * fabs(inductance[1] - traces[1]);
    }
    return true;
}

bool loop_check(const struct loop_shape *shape, double vias, struct error *error) {
    double barrel = via_least_pitch(shape->via_diameter);
    double plate = fmax(shape->width, shape->thickness) / 4.0;
    if (!via_check_count("vias", vias, error) ||
        !via_check_pitch(vias, shape->via_pitch, shape->via_diameter, error))
        return false;
    if (!(shape->length >= barrel * (1.0 - 1e-9)))
        return error_set(
            error, ERROR_INPUT,
            "length is %s: the loop is shorter than its vias of %s are wide; the smallest "
            "allowed is %s (1.05 via_diameter)",
            via_length(shape->length).text, via_length(shape->via_diameter).text,
            via_length(barrel).text);
    return shape->length >= plate * (1.0 - 1e-9) ||
           error_set(error, ERROR_INPUT,
                     "length is %s: with copper so wide or thick it is a plate and no trace; the "
                     "smallest allowed is %s (a quarter of the width and of the thickness)",
                     via_length(shape->length).text, via_length(plate).text);
}

unsigned loop_flags(const struct loop_shape *shape, double frequency) {
    unsigned flags = via_flags_of(shape->length + 2.0 * shape->height, shape->height, frequency);
    double row = (double)(shape->vias - 1) * shape->via_pitch + shape->via_diameter;
    if (shape->vias > 1 && row > shape->width)
        flags |= 1u << VIA_FLAG_ROW;
    return flags;
}

void loop_sketch(const struct loop_shape *shape, double body, struct sketch *sketch) {
    double radius = shape->via_diameter / 2.0, length = shape->length, foot = shape->height;
    double board = foot - body, top = foot + shape->thickness;
    board_sketch(sketch, &(struct board){.height = board}, 0.0);
    sketch_add_solid(sketch, (struct sketch_solid){SKETCH_TRACE, -radius, radius, 0.0, foot, NULL});
    sketch_add_solid(sketch, (struct sketch_solid){SKETCH_TRACE, length - radius, length + radius,
                                                   0.0, foot, NULL});
    sketch_add_solid(
        sketch, (struct sketch_solid){SKETCH_TRACE, -radius, length + radius, foot, top, "trace"});
    sketch_add_dimension(sketch,
                         (struct sketch_dimension){false, 0.0, length, top, "length", length});
    loop_heights(board, body, length + radius, sketch);
}

void loop_heights(double height, double body, double at, struct sketch *sketch) {
    sketch_add_dimension(sketch,
                         (struct sketch_dimension){true, 0.0, height, at, "height", height});
    if (body > 0.0)
        sketch_add_dimension(
            sketch, (struct sketch_dimension){true, height, height + body, at, "body", body});
}

void loop_plan(const struct loop_shape *shape, size_t count, struct sketch *plan) {
    static const enum sketch_role roles[] = {SKETCH_AGGRESSOR, SKETCH_VICTIM};
    static const char *const names[] = {"loop", "other loop"};
    double x[MOST_VIAS], y[MOST_VIAS], half = shape->width / 2.0;
    double radius = shape->via_diameter / 2.0, length = shape->length;
    size_t vias = place(shape, count, x, y);
    *plan = (struct sketch){.plan = true};
    for (size_t i = 0; i < count; i++) {
        double across = (double)i * shape->separation;
        sketch_add_solid(plan, (struct sketch_solid){count > 1 ? roles[i] : SKETCH_TRACE, -radius,
                                                     length + radius, across - half, across + half,
                                                     count > 1 ? names[i] : "trace"});
    }
    for (size_t i = 0; i < vias; i++)
        sketch_add_disc(plan,
                        (struct sketch_disc){SKETCH_TIED, x[i], y[i], shape->via_diameter, "via"});
    double top = (double)(count - 1) * shape->separation + half;
    sketch_add_dimension(plan,
                         (struct sketch_dimension){false, 0.0, length, top, "length", length});
    if (count > 1)
        sketch_add_dimension(plan, (struct sketch_dimension){true, 0.0, shape->separation, length,
                                                             "separation", shape->separation});
    else
        sketch_add_dimension(
            plan, (struct sketch_dimension){true, -half, half, length, "width", shape->width});
    if (shape->vias > 1)
        sketch_add_dimension(plan, (struct sketch_dimension){true, y[0], y[1], length, "via_pitch",
                                                             shape->via_pitch});
}

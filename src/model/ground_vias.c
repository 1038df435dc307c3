/* Vias in parallel that carry one ground current onto a plane. */

#include "registry.h"
#include "via_inputs.h"

#include <math.h>

enum { HEIGHT, DIAMETER, VIAS, PITCH, ARRANGEMENT, FAR_END, FREQUENCY, INPUT_COUNT };

enum arrangement { ROW, RING, GRID };
static const char *const arrangement_words[] = {"row", "ring", "grid", NULL};
enum far_end { FAR_PLANE, FAR_FREE };
static const char *const far_end_words[] = {"plane", "free", NULL};

static const struct model_input inputs[INPUT_COUNT] = {
    [HEIGHT] = VIA_HEIGHT,
    [DIAMETER] = VIA_DIAMETER,
    [VIAS] = {"vias", "vias in parallel, joined at their tops", DIMENSION_COUNT, MODEL_SHAPE, 1, 1,
              VIA_MOST, false, NULL, NULL, 0, NULL},
    [PITCH] = VIA_PITCH,
    [ARRANGEMENT] = {"arrangement", "how the vias stand", DIMENSION_WORD, MODEL_CHOICE, ROW, 0, 2,
                     false, NULL, arrangement_words, 0, NULL},
    [FAR_END] = {"far_end", "what the vias' feet stand on: a plane, or nothing that is counted",
                 DIMENSION_WORD, MODEL_CHOICE, FAR_PLANE, 0, 1, false, NULL, far_end_words, 0,
                 NULL},
    [FREQUENCY] = VIA_FREQUENCY("reactance"),
};

enum {
    BARREL_INDUCTANCE,
    SINGLE_INDUCTANCE,
    INDUCTANCE,
    UNIFORM_INDUCTANCE,
    BENEFIT,
    IDEAL_BENEFIT,
    NEXT_BENEFIT,
    LARGEST_SHARE,
    SMALLEST_SHARE,
    REACTANCE,
    OUTPUT_COUNT
};

static const struct model_output outputs[OUTPUT_COUNT] = {
    [BARREL_INDUCTANCE] = {"barrel_inductance", "inductance of the barrel alone",
                           "L<sub>barrel</sub>",
                           "One barrel alone in free space by Rosa's formula, the trade's figure; "
                           "not what a circuit sees.",
                           DIMENSION_INDUCTANCE, MODEL_NEITHER, NULL},
    [SINGLE_INDUCTANCE] = {"single_inductance", "inductance of one via", "L<sub>1</sub>",
                           "One via as placed: onto its plane, or free.", DIMENSION_INDUCTANCE,
                           MODEL_HIGHER_IS_WORSE, NULL},
    [INDUCTANCE] = {"inductance", "inductance of the group", "L",
                    "The group as placed: onto its plane, or free; currents find their shares "
                    "among the vias and around each barrel.",
                    DIMENSION_INDUCTANCE, MODEL_HIGHER_IS_WORSE, NULL},
    [UNIFORM_INDUCTANCE] = {"uniform_inductance", "inductance of the group, current even",
                            "L<sub>u</sub>",
                            "The group with the current even around each barrel: an upper bound.",
                            DIMENSION_INDUCTANCE, MODEL_HIGHER_IS_WORSE, NULL},
    [BENEFIT] = {"benefit", "benefit of the group", "b",
                 "What the group takes off the inductance of one via: 1 - inductance over "
                 "single_inductance.",
                 DIMENSION_RATIO, MODEL_LOWER_IS_WORSE, NULL},
    [IDEAL_BENEFIT] = {"ideal_benefit", "benefit of independent vias", "b<sub>ideal</sub>",
                       "What vias without mutual inductance would take off: 1 - 1/vias.",
                       DIMENSION_RATIO, MODEL_NEITHER, NULL},
    [NEXT_BENEFIT] = {"next_benefit", "benefit of one via more", "b<sub>+1</sub>",
                      "What one via more in the same arrangement would take off the group's "
                      "inductance.",
                      DIMENSION_RATIO, MODEL_LOWER_IS_WORSE, NULL},
    [LARGEST_SHARE] = {"largest_share", "largest share of the current", NULL,
                       "Share of the current in the via that carries most.", DIMENSION_RATIO,
                       MODEL_NEITHER, NULL},
    [SMALLEST_SHARE] = {"smallest_share", "smallest share of the current", NULL,
                        "Share of the current in the via that carries least.", DIMENSION_RATIO,
                        MODEL_NEITHER, NULL},
    [REACTANCE] = {"reactance", "reactance of the group", "X",
                   "2 pi times the frequency times the group's inductance.", DIMENSION_RESISTANCE,
                   MODEL_HIGHER_IS_WORSE, NULL},
};

enum {
    PREPARED_SINGLE,
    PREPARED_GROUP,
    PREPARED_UNIFORM,
    PREPARED_NEXT, /* inductance with one via more; NAN where it has no room */
    PREPARED_LARGEST,
    PREPARED_SMALLEST,
    PREPARED_ERROR, /* relative, of the group */
    PREPARED_COUNT
};

static bool check(const double *values, struct error *error) {
    if (!via_check_count("vias", values[VIAS], error))
        return false;
    if (values[ARRANGEMENT] == RING && values[VIAS] < 2.0)
        return error_set(error, ERROR_INPUT,
                         "vias is %g: a ring needs more than one; the smallest allowed is 2 (one "
                         "via is a row)",
                         values[VIAS]);
    return via_check_pitch(values[VIAS], values[PITCH], values[DIAMETER], error);
}

/* Grids are as square as can be and filled row by row; a ring of two is a row. */
static void place(enum arrangement arrangement, size_t count, double pitch, double *x, double *y) {
    size_t columns = (size_t)ceil(sqrt((double)count) - 1e-9);
    double radius = count > 1 ? pitch / (2.0 * sin(M_PI / (double)count)) : 0.0;
    for (size_t i = 0; i < count; i++) {
        double turn = 2.0 * M_PI * (double)i / (double)count;
        x[i] = (double)i * pitch;
        y[i] = 0.0;
        if (arrangement == RING) {
            x[i] = radius * cos(turn);
            y[i] = radius * sin(turn);
        } else if (arrangement == GRID) {
            x[i] = (double)(i % columns) * pitch;
            y[i] = (double)(i / columns) * pitch;
        }
    }
}

static bool group_of(const double *values, size_t count, struct via_group *group,
                     struct error *error) {
    double x[VIA_MOST + 1], y[VIA_MOST + 1];
    place((enum arrangement)values[ARRANGEMENT], count, values[PITCH], x, y);
    struct inductance_barrels barrels = {
        .count = count,
        .x = x,
        .y = y,
        .height = values[HEIGHT],
        .diameter = values[DIAMETER],
        .ends = values[FAR_END] == FAR_FREE ? INDUCTANCE_FREE : INDUCTANCE_ON_PLANE,
    };
    if (count > 1)
        barrels.harmonics = inductance_barrel_harmonics(values[DIAMETER], values[PITCH]);
    return via_joined(&barrels, values[PITCH], group, error) || error_in(error, "vias");
}

static bool prepare(const double *values, double *prepared, struct model_memo *memo,
                    struct error *error) {
    (void)memo;
    size_t count = (size_t)values[VIAS];
    bool room = values[PITCH] >= via_least_pitch(values[DIAMETER]) * (1.0 - 1e-9);
    struct via_group single, group, next = {.inductance = NAN};
    if (!group_of(values, 1, &single, error) || !group_of(values, count, &group, error) ||
        (room && !group_of(values, count + 1, &next, error)))
        return false;
    prepared[PREPARED_SINGLE] = single.inductance;
    prepared[PREPARED_GROUP] = group.inductance;
    prepared[PREPARED_UNIFORM] = group.even;
    prepared[PREPARED_NEXT] = next.inductance;
    prepared[PREPARED_LARGEST] = group.largest;
    prepared[PREPARED_SMALLEST] = group.smallest;
    prepared[PREPARED_ERROR] = group.error / group.inductance;
    return true;
}

static bool respond(const double *values, const double *prepared, struct model_worker *worker,
                    double *answers, double *errors, unsigned *flags, struct error *error) {
    (void)worker;
    (void)error;
    double single = prepared[PREPARED_SINGLE], all = prepared[PREPARED_GROUP];
    double relative = prepared[PREPARED_ERROR], reach = 2.0 * M_PI * values[FREQUENCY];
    for (size_t i = 0; i < OUTPUT_COUNT; i++)
        errors[i] = 0.0;
    answers[BARREL_INDUCTANCE] = inductance_barrel(values[HEIGHT], values[DIAMETER]);
    answers[SINGLE_INDUCTANCE] = single;
    errors[SINGLE_INDUCTANCE] = 1e-8 * single;
    answers[INDUCTANCE] = all;
    errors[INDUCTANCE] = relative * all;
    answers[UNIFORM_INDUCTANCE] = prepared[PREPARED_UNIFORM];
    errors[UNIFORM_INDUCTANCE] = 1e-8 * prepared[PREPARED_UNIFORM];
    answers[BENEFIT] = 1.0 - all / single;
    errors[BENEFIT] = relative * all / single;
    answers[IDEAL_BENEFIT] = 1.0 - 1.0 / values[VIAS];
    answers[NEXT_BENEFIT] = 1.0 - prepared[PREPARED_NEXT] / all;
    errors[NEXT_BENEFIT] = isnan(answers[NEXT_BENEFIT]) ? 0.0 : relative;
    answers[LARGEST_SHARE] = prepared[PREPARED_LARGEST];
    answers[SMALLEST_SHARE] = prepared[PREPARED_SMALLEST];
    errors[LARGEST_SHARE] = 2.0 * relative * prepared[PREPARED_LARGEST];
    errors[SMALLEST_SHARE] = 2.0 * relative * prepared[PREPARED_SMALLEST];
    answers[REACTANCE] = reach * all;
    errors[REACTANCE] = reach * errors[INDUCTANCE];
    *flags = via_flags_of(values[HEIGHT], values[HEIGHT], values[FREQUENCY]);
    return true;
}

/* Seen from the side: of a grid the front row.  The plan shows every group. */
static bool sketch(const double *values, struct sketch *drawing, struct error *error) {
    const size_t most = SKETCH_MOST_SOLIDS - 2; /* plane and dielectric */
    size_t count = (size_t)values[VIAS];
    if (values[ARRANGEMENT] != GRID && count > most)
        return error_set(error, ERROR_NOT_YET,
                         "rows and rings are drawn from the side up to %zu vias", most);
    double x[VIA_MOST], y[VIA_MOST];
    place((enum arrangement)values[ARRANGEMENT], count, values[PITCH], x, y);
    *drawing = (struct sketch){0};
    double height = values[HEIGHT], radius = values[DIAMETER] / 2.0, pitch = values[PITCH];
    if (values[FAR_END] == FAR_PLANE)
        sketch_add_solid(drawing, (struct sketch_solid){SKETCH_PLANE, -INFINITY, INFINITY, -35e-6,
                                                        0.0, "ground plane"});
    sketch_add_solid(
        drawing, (struct sketch_solid){SKETCH_DIELECTRIC, -INFINITY, INFINITY, 0.0, height, NULL});
    for (size_t i = 0; i < count; i++)
        if (values[ARRANGEMENT] != GRID || y[i] == 0.0)
            sketch_add_solid(drawing, (struct sketch_solid){SKETCH_TIED, x[i] - radius,
                                                            x[i] + radius, 0.0, height, "via"});
    sketch_add_dimension(drawing,
                         (struct sketch_dimension){false, x[0] - radius, x[0] + radius, height,
                                                   "via_diameter", values[DIAMETER]});
    if (count > 1 && values[ARRANGEMENT] != RING)
        sketch_add_dimension(
            drawing, (struct sketch_dimension){false, 0.0, pitch, height, "via_pitch", pitch});
    sketch_add_dimension(drawing,
                         (struct sketch_dimension){true, 0.0, height, -radius, "height", height});
    return true;
}

static bool plan(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    size_t count = (size_t)values[VIAS];
    double x[VIA_MOST], y[VIA_MOST], pitch = values[PITCH], diameter = values[DIAMETER];
    enum arrangement arrangement = (enum arrangement)values[ARRANGEMENT];
    place(arrangement, count, pitch, x, y);
    *drawing = (struct sketch){.plan = true};
    for (size_t i = 0; i < count; i++)
        sketch_add_disc(drawing, (struct sketch_disc){SKETCH_TIED, x[i], y[i], diameter, "via"});
    sketch_add_dimension(drawing, (struct sketch_dimension){false, x[0] - diameter / 2.0,
                                                            x[0] + diameter / 2.0, y[0],
                                                            "via_diameter", diameter});
    /* No two neighbours on a ring lie along an axis for every count. */
    if (count > 1 && arrangement != RING)
        sketch_add_dimension(drawing,
                             (struct sketch_dimension){false, 0.0, pitch, 0.0, "via_pitch", pitch});
    if (arrangement == GRID && y[count - 1] > 0.0)
        sketch_add_dimension(drawing,
                             (struct sketch_dimension){true, 0.0, pitch, x[0], "via_pitch", pitch});
    return true;
}

const struct model model_ground_vias = {
    .name = "ground-vias",
    .title = "Vias in parallel onto a plane",
    .summary = "What inductance has a group of ground vias, and what is one via more worth?",
    .method =
        "Partial inductances of thin round tubes, averaged exactly over their surfaces, with "
        "the plane by images: a via onto a plane has half the inductance of one twice as high. "
        "Currents find their shares among the vias and, as harmonics of the azimuth, around "
        "each barrel; what the last two changed, carried on geometrically, is the error estimate. "
        "The barrel alone is "
        "Rosa's formula of 1908.",
    .validity = "Perfectly conducting barrels, current constant along the height, an infinite "
                "uncut plane; the tops are joined by copper that is not counted and are open "
                "towards the rest of the loop.",
    .revision = 1,
    .inputs = inputs,
    .input_count = INPUT_COUNT,
    .outputs = outputs,
    .output_count = OUTPUT_COUNT,
    .flags = via_flags,
    .flag_count = VIA_FLAG_ROW, /* the row belongs to loops */
    .check = check,
    .prepared_count = PREPARED_COUNT,
    .prepare = prepare,
    .respond = respond,
    .sketch = sketch,
    .plan = plan,
};

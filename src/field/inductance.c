/* Pieces in space: which of the averages applies, and their images. */
#include "groundrules/inductance.h"

#include "bar.h"
#include "tube.h"

#include <math.h>

enum { CIRCLE = 64 };
static const double NEUMANN = INDUCTANCE_MU_0 / (4.0 * M_PI);

/* The other two axes, in the order x, y, z. */
static void across_of(enum inductance_axis axis, int *across) {
    across[0] = axis == INDUCTANCE_X ? 1 : 0;
    across[1] = axis == INDUCTANCE_Z ? 1 : 2;
}

static struct bar_pair bars_of(const struct inductance_piece *a, const struct inductance_piece *b) {
    int across[2];
    across_of(a->axis, across);
    struct bar_pair pair = {
        .along = {a->start[a->axis], a->length, b->start[b->axis], b->length},
        .offset = {b->start[across[0]] - a->start[across[0]],
                   b->start[across[1]] - a->start[across[1]]},
    };
    for (int k = 0; k < 2; k++) {
        pair.side[0][k] = a->shape == INDUCTANCE_BAR ? a->across[k] : 0.0;
        pair.side[1][k] = b->shape == INDUCTANCE_BAR ? b->across[k] : 0.0;
    }
    return pair;
}

static double tubes(const struct bar_pair *pair, double diameter_a, double diameter_b) {
    struct tube_pair tubes = {.along = pair->along,
                              .radius = {diameter_a / 2.0, diameter_b / 2.0},
                              .distance = hypot(pair->offset[0], pair->offset[1])};
    return tube_neumann(&tubes);
}

/* A tube and something else: the mean over the tube's circle. */
static double tube_and_bar(struct bar_pair pair, double diameter) {
    const double offset[2] = {pair.offset[0], pair.offset[1]};
    double sum = 0.0;
    for (int i = 0; i < CIRCLE; i++) {
        double angle = 2.0 * M_PI * (i + 0.5) / CIRCLE;
        pair.offset[0] = offset[0] + diameter / 2.0 * cos(angle);
        pair.offset[1] = offset[1] + diameter / 2.0 * sin(angle);
        sum += bar_neumann(&pair);
    }
    return sum / CIRCLE;
}

double inductance_mutual(const struct inductance_piece *a, const struct inductance_piece *b) {
    if (a->axis != b->axis)
        return 0.0;
    struct bar_pair pair = bars_of(a, b);
    if (a->shape == INDUCTANCE_TUBE && b->shape == INDUCTANCE_TUBE)
        return NEUMANN * tubes(&pair, a->diameter, b->diameter);
    if (a->shape == INDUCTANCE_TUBE)
        return NEUMANN * tube_and_bar(pair, a->diameter);
    if (b->shape == INDUCTANCE_TUBE)
        return NEUMANN * tube_and_bar(pair, b->diameter);
    return NEUMANN * bar_neumann(&pair);
}

double inductance_self(const struct inductance_piece *piece) {
    if (piece->shape == INDUCTANCE_FILAMENT)
        return INFINITY;
    return inductance_mutual(piece, piece);
}

double inductance_image(const struct inductance_piece *a, const struct inductance_piece *b) {
    struct inductance_piece image = *b;
    image.start[2] = -image.start[2];
    if (b->axis != INDUCTANCE_Z)
        return -inductance_mutual(a, &image);
    image.start[2] -= image.length;
    return inductance_mutual(a, &image);
}

static double lowest(const struct inductance_piece *piece) {
    if (piece->axis == INDUCTANCE_Z)
        return piece->start[2];
    return piece->start[2] -
           (piece->shape == INDUCTANCE_TUBE ? piece->diameter : piece->across[1]) / 2.0;
}

static bool check(const struct inductance_piece *piece, bool plane, struct error *error) {
    if (!(piece->length > 0.0 && isfinite(piece->length)))
        return error_set(error, ERROR_INPUT, "length is %g m, must be above 0", piece->length);
    if (piece->shape == INDUCTANCE_FILAMENT)
        return error_set(error, ERROR_INPUT, "a filament has no finite inductance of its own");
    if (piece->shape == INDUCTANCE_TUBE && !(piece->diameter > 0.0))
        return error_set(error, ERROR_INPUT, "diameter is %g m, must be above 0", piece->diameter);
    if (piece->shape == INDUCTANCE_BAR && !(fmin(piece->across[0], piece->across[1]) >= 0.0 &&
                                            fmax(piece->across[0], piece->across[1]) > 0.0))
        return error_set(error, ERROR_INPUT, "a bar needs one side above 0, neither below");
    bool flat = piece->axis != INDUCTANCE_Z;
    if (plane && (flat ? !(lowest(piece) > 0.0) : !(lowest(piece) >= 0.0)))
        return error_set(error, ERROR_INPUT, "lies %g m below the plane or on it", -lowest(piece));
    return true;
}

bool inductance_matrix(const struct inductance_piece *pieces, size_t count, bool plane,
                       double *matrix, struct error *error) {
    for (size_t i = 0; i < count; i++)
        if (!check(&pieces[i], plane, error))
            return error_in(error, "pieces[%zu]", i);
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j <= i; j++) {
            double value = inductance_mutual(&pieces[i], &pieces[j]);
            if (plane)
                value += inductance_image(&pieces[i], &pieces[j]);
            matrix[i * count + j] = matrix[j * count + i] = value;
        }
    return true;
}

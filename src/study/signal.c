#include "sections.h"

#include <math.h>
#include <string.h>

static const struct bounds swing_bounds = {1e-3, 1e3};
/* Where "up to" starts and "at least" ends: what the models take. */
static const struct bounds edge_reach = {10e-12, 10e-6};
static const struct bounds source_reach = {0.0, 1e6};
static const struct bounds edge_bounds = {1e-12, 1.0};
static const struct bounds source_bounds = {0.0, INFINITY};
static const struct bounds load_bounds = {0.0, INFINITY};
static const struct bounds capacitance_bounds = {0.0, 1e-6};
static const struct bounds bit_bounds = {0.0, 1.0};
static const struct bounds settling_bounds = {0.0, 1.0};
static const struct bounds margin_bounds = {1e-6, 1e3};
static const struct bounds share_bounds = {1e-3, 1.0};

/* A tolerance counts as a range here: what is said must hold over all of it. */
static void read_range(const struct reader *reader, const struct node *node,
                       enum dimension dimension, struct bounds reach, struct bounds bounds,
                       struct levels *levels, struct interval *range) {
    struct quantity quantity;
    struct interval read;
    bool is_range = false;
    if (node == NULL ||
        !reader_span(reader, node, dimension, reach, levels, &quantity, &read, &is_range))
        return;
    if (!is_range)
        read = (struct interval){quantity.value - quantity.minus, quantity.value + quantity.plus};
    if (reader_in_bounds(reader, node, dimension, bounds, read.from) &&
        reader_in_bounds(reader, node, dimension, bounds, read.to))
        *range = read;
}

static void read_value(const struct reader *reader, const struct node *node,
                       enum dimension dimension, struct bounds bounds, double *value) {
    if (node != NULL)
        reader_number(reader, node, dimension, bounds, value);
}

static void read_neighbours(const struct reader *reader, const struct node *node,
                            struct study_signal *signal) {
    const struct node *aggressors = tree_get(node, "aggressors");
    const struct node *switching = tree_get(node, "switching");
    if (aggressors != NULL)
        signal->aggressors = reader_word(reader, aggressors, keys_aggressors);
    if (switching != NULL)
        signal->independent = reader_word(reader, switching, keys_switching) == 1;
}

static void read_victim(const struct reader *reader, const struct node *node,
                        struct study_signal *signal) {
    const struct node *receiver = tree_get(node, "receiver");
    signal->receiver = STUDY_RECEIVER_EITHER;
    if (node == NULL)
        return;
    signal->is_victim = true;
    read_value(reader, tree_get(node, "noise_margin"), DIMENSION_VOLTAGE, margin_bounds,
               &signal->noise_margin);
    read_value(reader, tree_get(node, "share"), DIMENSION_RATIO, share_bounds, &signal->share);
    read_value(reader, tree_get(node, "settling"), DIMENSION_TIME, settling_bounds,
               &signal->settling);
    if (receiver != NULL)
        signal->receiver = (enum study_receiver)reader_word(reader, receiver, keys_receivers);
}

/* What could not be read stays NAN and is not reported again where the signal is used. */
static void read_signal(const struct reader *reader, const struct node *node,
                        struct study_signal *signal) {
    const struct node *name = tree_get(node, "name");
    const struct node *edge = tree_get(node, "edge");
    struct levels levels = {0.0, 1.0};
    *signal = (struct study_signal){.id = node->key,
                                    .name = name == NULL ? node->key : name->text,
                                    .note = reader_text(tree_get(node, "note")),
                                    .swing = NAN,
                                    .edge = {NAN, NAN},
                                    .source = {NAN, NAN},
                                    .load = NAN};
    read_value(reader, tree_get(node, "swing"), DIMENSION_VOLTAGE, swing_bounds, &signal->swing);
    read_range(reader, edge, DIMENSION_TIME, edge_reach, edge_bounds, &levels, &signal->edge);
    signal->edge_text = reader_text(edge);
    signal->edge_low = levels.low;
    signal->edge_high = levels.high;
    read_range(reader, tree_get(node, "source"), DIMENSION_RESISTANCE, source_reach, source_bounds,
               NULL, &signal->source);
    read_value(reader, tree_get(node, "load"), DIMENSION_RESISTANCE, load_bounds, &signal->load);
    read_value(reader, tree_get(node, "load_capacitance"), DIMENSION_CAPACITANCE,
               capacitance_bounds, &signal->load_capacitance);
    read_value(reader, tree_get(node, "bit_time"), DIMENSION_TIME, bit_bounds, &signal->bit_time);
    read_neighbours(reader, node, signal);
    read_victim(reader, tree_get(node, "victim"), signal);
    if (keys_refused(node, "victim"))
        signal->is_victim = true;
}

bool signals_read(const struct reader *reader, const struct node *node) {
    if (node == NULL)
        return true;
    struct study_signal *signals =
        arena_new(reader->arena, node->count, struct study_signal, reader->error);
    if (signals == NULL)
        return false;
    size_t count = 0;
    for (const struct node *child = node->first; child != NULL; child = child->next)
        read_signal(reader, child, &signals[count++]);
    reader->study->signals = signals;
    reader->study->signal_count = count;
    return reader->error->kind == ERROR_NONE;
}

const struct study_signal *signals_find(const struct reader *reader, const struct node *node) {
    const struct study *study = reader->study;
    const char **names = arena_new(reader->arena, study->signal_count, const char *, reader->error);
    if (names == NULL)
        return NULL;
    for (size_t i = 0; i < study->signal_count; i++) {
        if (strcmp(study->signals[i].id, node->text) == 0)
            return &study->signals[i];
        names[i] = study->signals[i].id;
    }
    if (reader->signals_refused)
        return NULL;
    reader_refuse(reader, node, "there is no signal \"%s\"%s", reader_shown(reader, node),
                  reader_advice(reader, node->text, names, study->signal_count));
    return NULL;
}

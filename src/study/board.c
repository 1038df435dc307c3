/* A stackup: its layers, and what the models take from them: the top signal layer over the next
 * plane, under its coating. */

#include "sections.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

static const struct bounds layer_thickness = {1e-6, 10e-3};
static const struct bounds layer_dk = {1.0, 20.0};
static const struct bounds layer_df = {0.0, 0.2};
static const struct bounds frequency = {1e3, 100e9};
static const struct bounds mask_thickness = {1e-6, 0.2e-3};
static const struct bounds mask_dk = {1.0, 15.0};
static const struct bounds etch = {0.0, 0.2e-3};
static const double standard_frequency = 1e9, standard_mask_dk = 3.5; /* as the models' */
static const struct bounds fab_length = {1e-6, 0.1};

static bool refuse_of_copper(const struct reader *reader, const struct node *node) {
    static const char *const names[] = {"dk", "df", "material_frequency"};
    bool ok = true;
    for (size_t i = 0; i < sizeof names / sizeof *names; i++) {
        const struct node *child = tree_get(node, names[i]);
        if (child != NULL)
            ok = reader_refuse_key(
                reader, child, "\"%s\" belongs to a dielectric, this layer is copper", names[i]);
    }
    return ok;
}

static bool read_copper(const struct reader *reader, const struct node *node,
                        struct study_layer *layer) {
    const struct node *role = tree_get(node, "role");
    bool ok = refuse_of_copper(reader, node);
    layer->kind = STUDY_LAYER_COPPER;
    if (role == NULL) {
        bool there = false;
        for (const struct node *child = node->first; child != NULL; child = child->next)
            there = there || strcmp(child->key, "role") == 0;
        return there ? false
                     : reader_refuse(reader, node,
                                     "\"role\" is missing in a copper layer; allowed: "
                                     "signal, plane");
    }
    layer->plane = reader_word(reader, role, keys_roles) == 1;
    return reader_quantity(reader, tree_get(node, "copper"), DIMENSION_LENGTH, layer_thickness,
                           false, &layer->thickness) &&
           ok;
}

static bool read_dielectric(const struct reader *reader, const struct node *node,
                            struct study_layer *layer) {
    const struct node *dk = tree_get(node, "dk");
    const struct node *role = tree_get(node, "role");
    const struct node *df = tree_get(node, "df"), *at = tree_get(node, "material_frequency");
    bool ok = true;
    layer->kind = STUDY_LAYER_DIELECTRIC;
    layer->material_frequency = standard_frequency;
    if (df != NULL && !reader_number(reader, df, DIMENSION_NUMBER, layer_df, &layer->df))
        ok = false;
    if (at != NULL &&
        !reader_number(reader, at, DIMENSION_FREQUENCY, frequency, &layer->material_frequency))
        ok = false;
    if (role != NULL)
        ok = reader_refuse_key(reader, role,
                               "\"role\" belongs to copper, this layer is a dielectric");
    if (dk == NULL)
        ok = reader_refuse(reader, node,
                           "\"dk\" is missing in a dielectric layer: relative permittivity, such "
                           "as \"4.3 +/- 0.2\"");
    else if (!reader_quantity(reader, dk, DIMENSION_NUMBER, layer_dk, false, &layer->dk))
        ok = false;
    return reader_quantity(reader, tree_get(node, "dielectric"), DIMENSION_LENGTH, layer_thickness,
                           false, &layer->thickness) &&
           ok;
}

static bool read_layer(const struct reader *reader, const struct node *node,
                       struct study_layer *layer) {
    const struct node *copper = tree_get(node, "copper");
    const struct node *dielectric = tree_get(node, "dielectric");
    *layer = (struct study_layer){.name = reader_text(tree_get(node, "name"))};
    if (node->bad)
        return false;
    for (const struct node *child = node->first; child != NULL; child = child->next)
        if (child->bad)
            return false; /* reported: "mask", say, in place of a thickness */
    if (copper != NULL && dielectric != NULL)
        return reader_refuse(reader, node,
                             "a layer is either \"copper\" or \"dielectric\", this one says both");
    if (copper == NULL && dielectric == NULL)
        return reader_refuse(reader, node,
                             "a layer needs its thickness, \"copper\": \"35 um\" or "
                             "\"dielectric\": \"1.51 mm\"");
    return copper != NULL ? read_copper(reader, node, layer) : read_dielectric(reader, node, layer);
}

static const struct node *child_at(const struct node *node, size_t index) {
    const struct node *child = node->first;
    for (; index > 0; index--)
        child = child->next;
    return child;
}

/* Copper outside, dielectric between every two coppers. */
static bool check_order(const struct reader *reader, const struct node *node,
                        const struct study_layer *layers, size_t count) {
    if (count < 3)
        return reader_refuse(reader, node,
                             "%zu layer%s; a board has at least copper, dielectric, copper", count,
                             count == 1 ? "" : "s");
    if (layers[0].kind != STUDY_LAYER_COPPER || layers[count - 1].kind != STUDY_LAYER_COPPER)
        return reader_refuse(reader,
                             child_at(node, layers[0].kind == STUDY_LAYER_COPPER ? count - 1 : 0),
                             "the outermost layers must be copper; a coating over it is the "
                             "stackup's \"mask\"");
    for (size_t i = 1; i < count; i++)
        if (layers[i].kind == STUDY_LAYER_COPPER && layers[i - 1].kind == STUDY_LAYER_COPPER)
            return reader_refuse(reader, child_at(node, i),
                                 "copper on copper; a dielectric is missing above this layer");
    return true;
}

/* Several dielectrics between trace and plane add up when they are the same material. */
static bool add_dielectric(const struct reader *reader, const struct node *node,
                           const struct study_layer *layer, struct study_stackup *stackup) {
    if (stackup->height.value > 0 && layer->dk.value != stackup->dk.value)
        return reader_refuse(reader, node,
                             "between the top layer and its plane lie dielectrics of dk %.4g and "
                             "%.4g; mixed dielectrics are not yet supported",
                             stackup->dk.value, layer->dk.value);
    if (stackup->height.value > 0 &&
        (layer->df != stackup->df || layer->material_frequency != stackup->material_frequency))
        return reader_refuse(
            reader, node,
            "between the top layer and its plane lie dielectrics of df %.4g at %.4g Hz "
            "and %.4g at %.4g Hz; mixed dielectrics are not yet supported",
            stackup->df, stackup->material_frequency, layer->df, layer->material_frequency);
    stackup->df = layer->df;
    stackup->material_frequency = layer->material_frequency;
    stackup->height.value += layer->thickness.value;
    stackup->height.minus += layer->thickness.minus;
    stackup->height.plus += layer->thickness.plus;
    stackup->dk.value = layer->dk.value;
    stackup->dk.minus = fmax(stackup->dk.minus, layer->dk.minus);
    stackup->dk.plus = fmax(stackup->dk.plus, layer->dk.plus);
    return true;
}

static bool refuse_no_plane(const struct reader *reader, const struct node *node,
                            const struct study_layer *layers, size_t count, size_t next) {
    for (size_t i = next; i < count; i++)
        if (layers[i].plane)
            return reader_refuse(reader, child_at(node, next),
                                 "the next copper under the top layer is a signal layer; planes "
                                 "further down are not yet supported, it must be \"plane\"");
    return reader_refuse(reader, node,
                         "the stackup has no plane; the next copper under the top layer must have "
                         "the role \"plane\"");
}

static bool find_height(const struct reader *reader, const struct node *node,
                        struct study_stackup *stackup) {
    const struct study_layer *layers = stackup->layers;
    if (layers[0].plane)
        return reader_refuse(reader, child_at(node, 0),
                             "the top layer is a plane; traces under a plane are not yet "
                             "supported, the top layer must be \"signal\"");
    stackup->thickness = layers[0].thickness;
    stackup->height = (struct quantity){.dimension = DIMENSION_LENGTH};
    stackup->dk = (struct quantity){.dimension = DIMENSION_NUMBER};
    for (size_t i = 1; i < stackup->layer_count; i++) {
        if (layers[i].kind == STUDY_LAYER_DIELECTRIC) {
            if (!add_dielectric(reader, child_at(node, i), &layers[i], stackup))
                return false;
            continue;
        }
        return layers[i].plane || refuse_no_plane(reader, node, layers, stackup->layer_count, i);
    }
    return false; /* check_order saw copper at the bottom */
}

static bool read_layers(const struct reader *reader, const struct node *node,
                        struct study_stackup *stackup) {
    struct study_layer *layers =
        arena_new(reader->arena, node->count, struct study_layer, reader->error);
    bool ok = layers != NULL;
    if (layers == NULL)
        return false;
    for (const struct node *child = node->first; child != NULL; child = child->next)
        if (!read_layer(reader, child, &layers[stackup->layer_count++]))
            ok = false;
    stackup->layers = layers;
    return ok && check_order(reader, node, layers, stackup->layer_count) &&
           find_height(reader, node, stackup);
}

static void read_smallest(const struct reader *reader, const struct node *node,
                          struct study_stackup *stackup) {
    static const char *const names[] = {"width", "gap", "drill"};
    double *const values[] = {&stackup->smallest_width, &stackup->smallest_gap,
                              &stackup->smallest_drill};
    for (size_t i = 0; i < 3; i++) {
        const struct node *child = tree_get(node, names[i]);
        if (child != NULL)
            reader_number(reader, child, DIMENSION_LENGTH, fab_length, values[i]);
    }
}

static void read_coating(const struct reader *reader, const struct node *node,
                         struct study_stackup *stackup) {
    const struct node *thickness = tree_get(node, "thickness"), *dk = tree_get(node, "dk");
    if (thickness != NULL)
        reader_quantity(reader, thickness, DIMENSION_LENGTH, mask_thickness, false, &stackup->mask);
    if (dk != NULL)
        reader_quantity(reader, dk, DIMENSION_NUMBER, mask_dk, false, &stackup->mask_dk);
}

/* A stackup that is wrong is kept with a NAN height, so that chapters which name it are not told
 * that it does not exist. */
static void read_board(const struct reader *reader, const struct node *node,
                       struct study_stackup *stackup) {
    const struct node *name = tree_get(node, "name");
    const struct node *layers = tree_get(node, "layers");
    const struct node *taper = tree_get(node, "etch");
    *stackup = (struct study_stackup){
        .id = node->key,
        .fab = reader_text(tree_get(node, "fab")),
        .mask = {.dimension = DIMENSION_LENGTH},
        .mask_dk = {.value = standard_mask_dk, .dimension = DIMENSION_NUMBER},
        .etch = {.dimension = DIMENSION_LENGTH},
        .material_frequency = standard_frequency};
    stackup->name = name == NULL ? node->key : name->text;
    source_position(reader->source, node->key_offset, &stackup->line, &stackup->column);
    if (layers == NULL || !read_layers(reader, layers, stackup))
        stackup->height.value = NAN;
    if (taper != NULL)
        reader_quantity(reader, taper, DIMENSION_LENGTH, etch, false, &stackup->etch);
    read_coating(reader, tree_get(node, "mask"), stackup);
    read_smallest(reader, tree_get(node, "smallest"), stackup);
}

bool boards_read(const struct reader *reader, const struct node *node) {
    if (node == NULL)
        return true;
    struct study_stackup *stackups =
        arena_new(reader->arena, node->count, struct study_stackup, reader->error);
    if (stackups == NULL)
        return false;
    size_t count = 0;
    for (const struct node *child = node->first; child != NULL; child = child->next)
        read_board(reader, child, &stackups[count++]);
    reader->study->stackups = stackups;
    reader->study->stackup_count = count;
    return reader->error->kind == ERROR_NONE;
}

const struct study_stackup *study_find_stackup(const struct study *study, const char *id) {
    for (size_t i = 0; i < study->stackup_count; i++)
        if (strcmp(study->stackups[i].id, id) == 0)
            return &study->stackups[i];
    return NULL;
}

const struct study_stackup *boards_find(const struct reader *reader, const struct node *node) {
    const struct study *study = reader->study;
    const struct study_stackup *stackup = study_find_stackup(study, node->text);
    if (stackup != NULL || reader->stackups_refused)
        return stackup;
    const char **names =
        arena_new(reader->arena, study->stackup_count, const char *, reader->error);
    if (names == NULL)
        return NULL;
    for (size_t i = 0; i < study->stackup_count; i++)
        names[i] = study->stackups[i].id;
    reader_refuse(reader, node, "there is no stackup \"%s\"%s", reader_shown(reader, node),
                  reader_advice(reader, node->text, names, study->stackup_count));
    return NULL;
}

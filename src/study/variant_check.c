/* What `check` can say about a variant without computing: missing inputs, values that the model
 * does not take, and combinations that cannot be built, at both ends of the sweep. */

#include "draft.h"

#include "groundrules/text.h"

#include <math.h>
#include <string.h>

struct inspection {
    const struct reader *reader;
    const struct model *model;
    const struct study_variant *variant;
    const struct node *const *nodes;
    const struct node *missing_place, *fallback;
    size_t swept;
    const struct node *span_node;
};

static const struct node *place_of(const struct inspection *inspection, size_t input) {
    if (input == inspection->swept && inspection->span_node != NULL)
        return inspection->span_node;
    return inspection->nodes[input] != NULL ? inspection->nodes[input] : inspection->fallback;
}

static const char *hint(const char *name) {
    static const char *const from_stackup[] = {"height", "thickness", "dk"};
    for (size_t i = 0; i < 3; i++)
        if (strcmp(name, from_stackup[i]) == 0)
            return " (or a stackup)";
    return "";
}

/* *refused: a setting was refused earlier; there is no point in looking further. */
static bool find_missing(const struct inspection *inspection, bool *refused) {
    const struct model *model = inspection->model;
    struct text missing = text_start(inspection->reader->arena, inspection->reader->error);
    *refused = false;
    for (size_t i = 0; i < model->input_count; i++) {
        if (i == inspection->swept || !isnan(inspection->variant->settings[i].value))
            continue;
        if (inspection->nodes[i] != NULL)
            *refused = true;
        else if (model->inputs[i].same_as == NULL)
            text_format(&missing, "%s%s%s", missing.length > 0 ? ", " : "", model->inputs[i].name,
                        hint(model->inputs[i].name));
    }
    if (missing.length == 0)
        return true;
    const char *list = text_end(&missing);
    return list != NULL && reader_refuse(inspection->reader, inspection->missing_place,
                                         "%s needs %s, which nothing here sets", model->name, list);
}

/* Who set a value that does not stand in the study where the finding points. */
static const char *setter(const struct inspection *inspection, size_t i) {
    const struct study_variant *variant = inspection->variant;
    const struct node *node = inspection->nodes[i];
    const char *what = NULL;
    if (node != NULL && variant->settings[i].origin == STUDY_FROM_STACKUP)
        what = "stackup";
    else if (node != NULL && variant->settings[i].origin == STUDY_FROM_SIGNAL)
        what = "signal";
    const char *text = what == NULL
                           ? ""
                           : arena_print(inspection->reader->arena, inspection->reader->error,
                                         "the %s \"%s\" does not fit here: ", what, node->text);
    return text == NULL ? "" : text;
}

static bool check_setting(const struct inspection *inspection, size_t i) {
    const struct study_setting *setting = &inspection->variant->settings[i];
    const struct model_input *input = &inspection->model->inputs[i];
    const double values[] = {setting->value, setting->range.from, setting->range.to,
                             setting->value - setting->minus, setting->value + setting->plus};
    for (size_t k = 0; k < sizeof values / sizeof values[0]; k++) {
        struct error error = {0};
        if (!model_check_input(input, values[k], &error))
            return reader_refuse(inspection->reader, place_of(inspection, i), "%s%s%s",
                                 setter(inspection, i), error.message,
                                 given_is_edge(input) ? ", from 0 to 100 %" : "");
    }
    return true;
}

static bool check_settings(const struct inspection *inspection) {
    bool ok = true;
    for (size_t i = 0; i < inspection->model->input_count; i++)
        if (i != inspection->swept && !isnan(inspection->variant->settings[i].value) &&
            !check_setting(inspection, i))
            ok = false;
    return ok;
}

/* Messages of model->check start with the name of the input that they complain about. */
static const struct node *blamed(const struct inspection *inspection, const char *message) {
    size_t length = strspn(message, "abcdefghijklmnopqrstuvwxyz_");
    for (size_t i = 0; i < inspection->model->input_count; i++) {
        const char *name = inspection->model->inputs[i].name;
        if (strlen(name) == length && memcmp(name, message, length) == 0)
            return place_of(inspection, i);
    }
    return inspection->fallback;
}

enum side { NOMINAL, LOWEST, HIGHEST, SIDES };

static double side_of(const struct study_setting *setting, enum side side) {
    if (side == LOWEST)
        return setting->range.from - setting->minus;
    return side == HIGHEST ? setting->range.to + setting->plus : setting->value;
}

static bool check_together(const struct inspection *inspection, enum side side, double swept) {
    double inputs[MODEL_MOST_INPUTS];
    struct error error = {0};
    for (size_t i = 0; i < inspection->model->input_count; i++)
        inputs[i] = side_of(&inspection->variant->settings[i], side);
    inputs[inspection->swept] = swept;
    if (!model_resolve(inspection->model, inputs, &error) ||
        !model_check(inspection->model, inputs, &error))
        return reader_refuse(inspection->reader, blamed(inspection, error.message), "%s",
                             error.message);
    return true;
}

bool draft_check_variant(const struct reader *reader, const struct draft *draft,
                         const struct study_variant *variant,
                         const struct node *const *setting_nodes, const struct node *fallback,
                         size_t swept, struct interval span, const struct node *span_node) {
    struct inspection inspection = {.reader = reader,
                                    .model = draft->chapter.model,
                                    .variant = variant,
                                    .nodes = setting_nodes,
                                    .missing_place = draft->place,
                                    .fallback = fallback,
                                    .swept = swept,
                                    .span_node = span_node};
    bool refused = false;
    bool ok = find_missing(&inspection, &refused);
    ok = check_settings(&inspection) && ok;
    if (!ok || refused || isnan(span.from))
        return false;
    for (int side = NOMINAL; side < SIDES && ok; side++)
        ok = check_together(&inspection, (enum side)side, span.from) &&
             check_together(&inspection, (enum side)side, span.to);
    return ok;
}

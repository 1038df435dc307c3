/* The settings of one variant, from weak to strong: the model's standard, the board, the signals,
 * what the chapter gives, what the rule gives, what is compared, what is varied. */

#include "draft.h"

#include "groundrules/text.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

struct target {
    const struct model *model;
    struct study_setting *settings;
    const struct node **nodes;
};

static bool put(const struct target *target, const char *name, struct study_setting setting,
                const struct node *node) {
    size_t index = model_input_index(target->model, name);
    if (index == SIZE_MAX)
        return false;
    target->settings[index] = setting;
    target->nodes[index] = node;
    return true;
}

static struct study_setting from_quantity(struct quantity quantity) {
    return (struct study_setting){.value = quantity.value,
                                  .range = {quantity.value, quantity.value},
                                  .minus = quantity.minus,
                                  .plus = quantity.plus,
                                  .origin = STUDY_FROM_STACKUP};
}

static struct study_setting from_value(double value) {
    return (struct study_setting){
        .value = value, .range = {value, value}, .origin = STUDY_FROM_SIGNAL};
}

static struct study_setting from_range(const struct target *target, const char *name,
                                       struct interval range) {
    size_t index = model_input_index(target->model, name);
    double value = index == SIZE_MAX || range.from == range.to
                       ? range.from
                       : given_middle(&target->model->inputs[index], range);
    return (struct study_setting){.value = value, .range = range, .origin = STUDY_FROM_SIGNAL};
}

/* False: the model has none of these inputs. */
static bool put_stackup(const struct target *target, const struct study_stackup *stackup,
                        const struct node *node) {
    bool refused = isnan(stackup->height.value), any = false; /* where it is defined */
    struct study_board_value values[STUDY_BOARD_VALUES];
    study_board_values(stackup, values);
    for (size_t i = 0; i < STUDY_BOARD_VALUES; i++) {
        if (!values[i].stated)
            continue;
        if (refused)
            values[i].value = (struct quantity){.value = NAN};
        any = put(target, values[i].input, from_quantity(values[i].value), node) || any;
    }
    return any;
}

static bool put_aggressor(const struct target *target, const struct study_signal *signal,
                          const struct node *node) {
    bool any = put(target, "swing", from_value(signal->swing), node);
    any = put(target, "edge", from_range(target, "edge", signal->edge), node) || any;
    any = put(target, "source", from_range(target, "source", signal->source), node) || any;
    any = put(target, "load", from_value(signal->load), node) || any;
    if (signal->bit_time > 0.0)
        any = put(target, "bit_time", from_value(signal->bit_time), node) || any;
    if (signal->aggressors > 0)
        any = put(target, "aggressors", from_value((double)signal->aggressors), node) || any;
    if (signal->independent)
        any = put(target, "switching", from_value(1.0), node) || any;
    return put(target, "load_capacitance", from_value(signal->load_capacitance), node) || any;
}

static bool put_receiver(const struct target *target, const struct study_signal *signal,
                         const struct node *node) {
    size_t index = model_input_index(target->model, "receiver");
    if (index == SIZE_MAX)
        return false;
    double far = (double)model_word_index(&target->model->inputs[index], "far");
    double near = (double)model_word_index(&target->model->inputs[index], "near");
    struct study_setting setting = from_value(signal->receiver == STUDY_RECEIVER_NEAR ? near : far);
    if (signal->receiver == STUDY_RECEIVER_EITHER)
        setting.range = (struct interval){fmin(far, near), fmax(far, near)};
    return put(target, "receiver", setting, node);
}

static bool put_victim(const struct target *target, const struct study_signal *signal,
                       const struct node *node) {
    bool any =
        put(target, "victim_source", from_range(target, "victim_source", signal->source), node);
    any = put(target, "victim_load", from_value(signal->load), node) || any;
    any = put(target, "victim_load_capacitance", from_value(signal->load_capacitance), node) || any;
    if (signal->settling > 0.0)
        any = put(target, "settling", from_value(signal->settling), node) || any;
    return put_receiver(target, signal, node) || any;
}

static void put_standards(const struct target *target) {
    for (size_t i = 0; i < target->model->input_count; i++) {
        const struct model_input *input = &target->model->inputs[i];
        double value = input->same_as != NULL ? (double)NAN : input->standard;
        target->settings[i] = (struct study_setting){
            .value = value, .range = {value, value}, .origin = STUDY_STANDARD};
        target->nodes[i] = NULL;
    }
}

static void put_inputs(const struct target *target, const struct given *given) {
    for (size_t i = 0; given != NULL && i < target->model->input_count; i++)
        if (given->input_nodes[i] != NULL) {
            target->settings[i] = given->settings[i];
            target->nodes[i] = given->input_nodes[i];
        }
}

struct choice {
    const struct study_stackup *stackup;
    const struct study_signal *aggressor, *victim;
    const struct node *stackup_node, *aggressor_node, *victim_node;
};

static void choose(struct choice *choice, const struct given *given) {
    if (given == NULL)
        return;
    if (given->stackup_node != NULL) {
        choice->stackup = given->stackup;
        choice->stackup_node = given->stackup_node;
    }
    if (given->aggressor_node != NULL) {
        choice->aggressor = given->aggressor;
        choice->aggressor_node = given->aggressor_node;
    }
    if (given->victim_node != NULL) {
        choice->victim = given->victim;
        choice->victim_node = given->victim_node;
    }
}

static void choose_option(struct choice *choice, const struct axis *axis,
                          const struct axis_option *option) {
    if (axis->kind == AXIS_STACKUP) {
        choice->stackup = option->stackup;
        choice->stackup_node = option->node;
    } else if (axis->kind == AXIS_AGGRESSOR) {
        choice->aggressor = option->signal;
        choice->aggressor_node = option->node;
    } else if (axis->kind == AXIS_VICTIM) {
        choice->victim = option->signal;
        choice->victim_node = option->node;
    }
}

static void refuse_source(const struct reader *reader, const struct model *model,
                          const struct node *node, const char *what) {
    reader_refuse(reader, node, "the model %s has no input that %s sets", model->name, what);
}

/* A name that was refused sets its inputs to what is not known, so that they are not missing. */
static void put_unknown_sources(const struct target *target, const struct choice *choice) {
    static const struct study_stackup stackup = {.height = {.value = NAN}};
    static const struct study_signal signal = {.swing = NAN,
                                               .edge = {NAN, NAN},
                                               .source = {NAN, NAN},
                                               .load = NAN,
                                               .load_capacitance = NAN};
    if (choice->stackup == NULL && choice->stackup_node != NULL)
        put_stackup(target, &stackup, choice->stackup_node);
    if (choice->aggressor == NULL && choice->aggressor_node != NULL)
        put_aggressor(target, &signal, choice->aggressor_node);
    if (choice->victim == NULL && choice->victim_node != NULL)
        put_victim(target, &signal, choice->victim_node);
}

static void put_sources(const struct reader *reader, const struct target *target,
                        const struct choice *choice) {
    put_unknown_sources(target, choice);
    if (choice->stackup != NULL && !put_stackup(target, choice->stackup, choice->stackup_node))
        refuse_source(reader, target->model, choice->stackup_node, "a stackup");
    if (choice->aggressor != NULL &&
        !put_aggressor(target, choice->aggressor, choice->aggressor_node))
        refuse_source(reader, target->model, choice->aggressor_node, "an aggressor");
    if (choice->victim != NULL && !put_victim(target, choice->victim, choice->victim_node))
        refuse_source(reader, target->model, choice->victim_node, "a victim");
}

static void put_varied(const struct target *target, const struct draft *draft,
                       const struct given *rule) {
    const struct study_vary *vary = &draft->chapter.vary;
    if (draft->swept_node == NULL || (rule != NULL && rule->input_nodes[vary->input] != NULL))
        return;
    double first = draft->vary_node == NULL ? (double)NAN : vary->points[0];
    target->settings[vary->input] =
        (struct study_setting){.value = first, .range = {first, first}, .origin = STUDY_VARIED};
    target->nodes[vary->input] = draft->swept_node;
}

/* "Two layers, 1.6 mm, tied"; without a comparison the board, else the model. */
static const char *label_of(const struct reader *reader, const struct draft *draft,
                            const struct axis_option *const *options, const struct choice *choice) {
    if (draft->axis_count == 0)
        return choice->stackup != NULL ? choice->stackup->name : draft->chapter.model->title;
    struct text label = text_start(reader->arena, reader->error);
    for (size_t i = 0; i < draft->axis_count; i++)
        text_format(&label, "%s%s", i > 0 ? ", " : "", options[i]->label);
    return text_end(&label);
}

static bool resolve_one(const struct reader *reader, const struct draft *draft,
                        const struct given *rule, size_t number, struct study_variant *variant,
                        const struct node **nodes) {
    const struct axis_option *options[DRAFT_MOST_AXES] = {NULL, NULL};
    struct choice choice = {0};
    struct target target = {draft->chapter.model, variant->settings, nodes};
    for (size_t i = draft->axis_count; i > 0; i--) {
        const struct axis *axis = &draft->axes[i - 1];
        options[i - 1] = &axis->options[number % axis->count];
        number /= axis->count;
    }
    choose(&choice, &draft->given);
    choose(&choice, rule);
    for (size_t i = 0; i < draft->axis_count; i++)
        choose_option(&choice, &draft->axes[i], options[i]);
    put_standards(&target);
    put_sources(reader, &target, &choice);
    put_inputs(&target, &draft->given);
    put_inputs(&target, rule);
    for (size_t i = 0; i < draft->axis_count; i++)
        if (draft->axes[i].kind == AXIS_INPUT) {
            target.settings[draft->axes[i].input] = options[i]->setting;
            target.nodes[draft->axes[i].input] = options[i]->node;
        }
    put_varied(&target, draft, rule);
    variant->stackup = choice.stackup;
    variant->aggressor = choice.aggressor;
    variant->victim = choice.victim;
    variant->label = label_of(reader, draft, options, &choice);
    return variant->label != NULL;
}

bool draft_resolve(const struct reader *reader, const struct draft *draft,
                   const struct given *given, struct study_variant **variants, size_t *count,
                   const struct node *(**nodes)[MODEL_MOST_INPUTS]) {
    size_t total = 1;
    for (size_t i = 0; i < draft->axis_count; i++)
        total *= draft->axes[i].count;
    struct study_variant *resolved =
        arena_new(reader->arena, total, struct study_variant, reader->error);
    const struct node *(*places)[MODEL_MOST_INPUTS] =
        arena_take(reader->arena, total, sizeof *places, reader->error);
    if (resolved == NULL || places == NULL)
        return false;
    for (size_t i = 0; i < total; i++)
        if (!resolve_one(reader, draft, given, i, &resolved[i], places[i]))
            return false;
    *variants = resolved;
    *count = total;
    *nodes = places;
    return true;
}

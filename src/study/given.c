#include "given.h"

#include "groundrules/text.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

bool given_is_source(const char *key) {
    return strcmp(key, "stackup") == 0 || strcmp(key, "aggressor") == 0 ||
           strcmp(key, "victim") == 0;
}

bool given_is_edge(const struct model_input *input) {
    return input->dimension == DIMENSION_TIME && strcmp(input->name, "edge") == 0;
}

enum { MOST_NAMES = MODEL_MOST_INPUTS + 8 };

/* Inputs of later versions are not offered. */
static size_t input_names(const struct model *model, const struct key_table *table,
                          const char *names[MOST_NAMES]) {
    size_t count = 0;
    for (size_t i = 0; table != NULL && i < table->count && count < 8; i++)
        names[count++] = table->keys[i].name;
    for (size_t i = 0; i < model->input_count; i++)
        if (model->inputs[i].not_yet == NULL)
            names[count++] = model->inputs[i].name;
    return count;
}

static const char *unknown(const struct reader *reader, const char *word, const char *what,
                           const struct model *model, const char *const *names, size_t count) {
    const char *shown = tree_excerpt(word, reader->arena, reader->error);
    const char *message = arena_print(reader->arena, reader->error, "\"%s\" is no %s of %s%s",
                                      shown == NULL ? "" : shown, what, model->name,
                                      reader_advice(reader, word, names, count));
    return message == NULL ? "" : message;
}

size_t given_input(const struct reader *reader, const struct node *node, const struct model *model,
                   const struct key_table *table) {
    const char *names[MOST_NAMES];
    size_t index = model_input_index(model, node->key);
    if (index != SIZE_MAX)
        return index;
    size_t count = input_names(model, table, names);
    reader_refuse_key(reader, node, "%s", unknown(reader, node->key, "input", model, names, count));
    return SIZE_MAX;
}

size_t given_input_word(const struct reader *reader, const struct node *node, const char *word,
                        const struct model *model) {
    const char *names[MOST_NAMES];
    size_t index = model_input_index(model, word);
    if (index != SIZE_MAX)
        return index;
    size_t count = input_names(model, NULL, names);
    reader_refuse(reader, node, "%s", unknown(reader, word, "input", model, names, count));
    return SIZE_MAX;
}

size_t given_output_word(const struct reader *reader, const struct node *node, const char *word,
                         const struct model *model) {
    const char *names[MODEL_MOST_OUTPUTS];
    size_t count = 0;
    size_t index = model_output_index(model, word);
    if (index != SIZE_MAX && model->outputs[index].not_yet == NULL)
        return index;
    if (index != SIZE_MAX) {
        reader_refuse(reader, node, "\"%s\" is not yet supported: %s", word,
                      model->outputs[index].not_yet);
        return SIZE_MAX;
    }
    for (size_t i = 0; i < model->output_count; i++)
        if (model->outputs[i].not_yet == NULL)
            names[count++] = model->outputs[i].name;
    reader_refuse(reader, node, "%s", unknown(reader, word, "output", model, names, count));
    return SIZE_MAX;
}

double given_middle(const struct model_input *input, struct interval range) {
    if (input->kind == MODEL_CHOICE)
        return range.from;
    if (input->dimension == DIMENSION_COUNT)
        return floor((range.from + range.to) / 2);
    if (range.from > 0 && range.to >= 10 * range.from)
        return sqrt(range.from) * sqrt(range.to);
    return range.from + (range.to - range.from) / 2;
}

const char *given_absent(const char *input) {
    static const char *const absent[][2] = {{"edge_distance", "an infinite plane"},
                                            {"cover", "no plane above"},
                                            {"bit_time", "a single edge"}};
    for (size_t i = 0; i < sizeof absent / sizeof *absent; i++)
        if (strcmp(input, absent[i][0]) == 0)
            return absent[i][1];
    return NULL;
}

bool given_begins_soundly(const struct reader *reader, const struct node *node,
                          const struct model_input *input, double from) {
    const char *absent = given_absent(input->name);
    return from != 0.0 || absent == NULL ||
           reader_refuse(reader, node,
                         "begins at 0, which for %s is %s and not its least value; begin above it",
                         input->name, absent);
}

static bool in_declaration(const struct reader *reader, const struct node *node,
                           const struct model_input *input, double value) {
    struct error error = {0};
    return model_check_input(input, value, &error) ||
           reader_refuse(reader, node, "%s", error.message);
}

static bool read_choice(const struct reader *reader, const struct node *node,
                        const struct model_input *input, struct study_setting *setting) {
    size_t count = 0;
    while (input->words[count] != NULL)
        count++;
    if (node->text == NULL)
        return reader_refuse(reader, node, "found %s; expected a word%s",
                             tree_kind_name(node->kind),
                             reader_advice(reader, "", input->words, count));
    size_t word = model_word_index(input, node->text);
    if (word == SIZE_MAX)
        return reader_refuse(reader, node, "\"%s\" is no choice of %s%s",
                             reader_shown(reader, node), input->name,
                             reader_advice(reader, node->text, input->words, count));
    double value = (double)word;
    if (!in_declaration(reader, node, input, value))
        return false;
    *setting = (struct study_setting){.value = value, .range = {value, value}};
    return true;
}

/* An input that only a later version takes is refused as such even when its value makes no sense.
 */
static bool taken_now(const struct reader *reader, const struct node *node,
                      const struct model_input *input) {
    struct quantity quantity;
    if (input->not_yet == NULL)
        return true;
    if (node->text != NULL && input->kind != MODEL_CHOICE &&
        quantity_parse(node->text, input->dimension, &quantity, NULL) &&
        quantity.value == input->standard && quantity.minus == 0.0 && quantity.plus == 0.0)
        return true;
    return reader_refuse(reader, node, "%s is not yet supported: %s", input->name, input->not_yet);
}

bool given_setting(const struct reader *reader, const struct node *node,
                   const struct model_input *input, struct study_setting *setting) {
    struct study_setting read = {.origin = STUDY_GIVEN};
    struct quantity quantity;
    struct levels levels;
    bool is_range = false;
    if (!taken_now(reader, node, input))
        return false;
    if (input->kind == MODEL_CHOICE) {
        if (!read_choice(reader, node, input, &read))
            return false;
    } else {
        if (!reader_span(reader, node, input->dimension,
                         (struct bounds){input->lowest, input->highest},
                         given_is_edge(input) ? &levels : NULL, &quantity, &read.range, &is_range))
            return false;
        if (is_range && !given_begins_soundly(reader, node, input, read.range.from))
            return false;
        read.value = is_range ? given_middle(input, read.range) : quantity.value;
        read.minus = quantity.minus;
        read.plus = quantity.plus;
    }
    read.origin = STUDY_GIVEN;
    if (!in_declaration(reader, node, input, read.range.from) ||
        !in_declaration(reader, node, input, read.range.to) ||
        !in_declaration(reader, node, input, read.value - read.minus) ||
        !in_declaration(reader, node, input, read.value + read.plus))
        return false;
    *setting = read;
    return true;
}

bool given_interval(const struct reader *reader, const struct node *node,
                    const struct model_input *input, struct interval *interval) {
    struct study_setting setting;
    if (!given_setting(reader, node, input, &setting))
        return false;
    if (setting.minus > 0 || setting.plus > 0)
        return reader_refuse(reader, node, "\"%s\": no tolerance is accepted here",
                             reader_shown(reader, node));
    *interval = setting.range;
    return true;
}

bool given_value(const struct reader *reader, const struct node *node,
                 const struct model_input *input, double *value) {
    struct interval interval;
    if (!given_interval(reader, node, input, &interval))
        return false;
    if (interval.from != interval.to)
        return reader_refuse(reader, node, "\"%s\": a range is not accepted here",
                             reader_shown(reader, node));
    *value = interval.from;
    return true;
}

/* What was refused still counts as given: it is not missing. */
static void read_source(const struct reader *reader, const struct node *node, const char *key,
                        struct given *given) {
    bool usable = !node->bad && strcmp(node->key, key) == 0;
    if (strcmp(key, "stackup") == 0) {
        given->stackup_node = node;
        given->stackup = usable ? boards_find(reader, node) : NULL;
    } else if (strcmp(key, "aggressor") == 0) {
        given->aggressor_node = node;
        given->aggressor = usable ? signals_find(reader, node) : NULL;
    } else {
        given->victim_node = node;
        given->victim = usable ? signals_find(reader, node) : NULL;
    }
}

static void refuse_input(struct given *given, size_t input, const struct node *node) {
    given->input_nodes[input] = node;
    given->settings[input] =
        (struct study_setting){.value = NAN, .range = {NAN, NAN}, .origin = STUDY_GIVEN};
}

/* A misspelt key stands for what it was most likely meant as. */
static void read_misspelt(const struct reader *reader, const struct node *node,
                          const struct model *model, struct given *given) {
    const char *names[MOST_NAMES];
    size_t count = input_names(model, &keys_given, names);
    const char *meant = text_nearest(node->key, names, count);
    if (meant == NULL || tree_get(node->parent, meant) != NULL)
        return;
    if (given_is_source(meant))
        read_source(reader, node, meant, given);
    else
        refuse_input(given, model_input_index(model, meant), node);
}

void given_read(const struct reader *reader, const struct node *node, const struct model *model,
                struct given *given) {
    *given = (struct given){.node = node};
    for (const struct node *child = node == NULL ? NULL : node->first; child != NULL;
         child = child->next) {
        if (given_is_source(child->key)) {
            if (!child->bad || tree_get(node, child->key) == NULL)
                read_source(reader, child, child->key, given);
            continue;
        }
        if (child->bad)
            continue;
        size_t input = given_input(reader, child, model, &keys_given);
        if (input == SIZE_MAX) {
            read_misspelt(reader, child, model, given);
            continue;
        }
        refuse_input(given, input, child);
        given_setting(reader, child, &model->inputs[input], &given->settings[input]);
    }
}

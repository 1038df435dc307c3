#include "region.h"

#include <math.h>
#include <string.h>

static bool spans_much(double low, double high) {
    return low > 0.0 && high / low > 1.5;
}

static struct region_axis axis_of(const struct model *model, size_t input, struct interval range) {
    bool choice = model->inputs[input].kind == MODEL_CHOICE;
    bool whole = model->inputs[input].dimension == DIMENSION_COUNT;
    return (struct region_axis){.input = input,
                                .kind = choice ? REGION_CHOICE : REGION_RANGE,
                                .low = range.from,
                                .high = range.to,
                                .nominal = range.from,
                                .logarithmic =
                                    !choice && !whole && spans_much(range.from, range.to),
                                .whole = whole};
}

/* `edge` innermost: cases that differ only in it share one line response. */
static void put_edge_last(struct region *region) {
    size_t edge = model_input_index(region->model, "edge");
    for (size_t i = 0; i + 1 < region->range_count; i++)
        if (region->axes[i].input == edge) {
            struct region_axis moved = region->axes[i];
            memmove(&region->axes[i], &region->axes[i + 1],
                    (region->range_count - i - 1) * sizeof moved);
            region->axes[region->range_count - 1] = moved;
            return;
        }
}

void region_add_tolerance(struct region *region, size_t input, const struct quantity *value) {
    region->axes[region->axis_count++] = (struct region_axis){.input = input,
                                                              .kind = REGION_TOLERANCE,
                                                              .low = value->value - value->minus,
                                                              .high = value->value + value->plus,
                                                              .nominal = value->value};
}

void region_of(const struct model *model, const struct study_variant *variant, size_t without,
               bool nominal, struct region *region) {
    *region = (struct region){.model = model};
    for (size_t i = 0; i < model->input_count; i++) {
        const struct study_setting *setting = &variant->settings[i];
        region->base[i] = setting->value;
        if (i != without && setting->range.to > setting->range.from)
            region->axes[region->axis_count++] = axis_of(model, i, setting->range);
    }
    region->range_count = region->axis_count;
    put_edge_last(region);
    for (size_t i = 0; i < model->input_count && !nominal; i++) {
        const struct study_setting *setting = &variant->settings[i];
        struct quantity value = {
            .value = setting->value, .minus = setting->minus, .plus = setting->plus};
        if (i != without && (setting->minus > 0.0 || setting->plus > 0.0))
            region_add_tolerance(region, i, &value);
    }
}

static void remove_axis(struct region *region, size_t at) {
    memmove(&region->axes[at], &region->axes[at + 1],
            (region->axis_count - at - 1) * sizeof *region->axes);
    region->axis_count--;
    if (at < region->range_count)
        region->range_count--;
}

void region_restrict(struct region *region, size_t input, struct interval range) {
    for (size_t i = 0; i < region->axis_count; i++)
        if (region->axes[i].input == input) {
            remove_axis(region, i);
            break;
        }
    region->base[input] = range.from;
    if (!(range.to > range.from))
        return;
    memmove(&region->axes[1], &region->axes[0], region->axis_count * sizeof *region->axes);
    region->axes[0] = axis_of(region->model, input, range);
    region->axis_count++;
    region->range_count++;
    put_edge_last(region);
}

double region_snap(const struct region_axis *axis, double value) {
    double within = fmin(axis->high, fmax(axis->low, value));
    return axis->whole ? round(within) : within;
}

double region_sample(const struct region_axis *axis, size_t index, size_t count) {
    if (index == 0 || count < 2)
        return axis->low;
    if (index + 1 == count)
        return axis->high;
    double part = (double)index / (double)(count - 1);
    if (axis->logarithmic)
        return region_snap(axis, axis->low * pow(axis->high / axis->low, part));
    return region_snap(axis, axis->low + (axis->high - axis->low) * part);
}

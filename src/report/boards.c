/* The boards to scale, and the signal classes with their budgets. */

#include "pages.h"

#include "report/drawing.h"
#include "words.h"

#include <math.h>

static const char *fab_line(struct flow *flow, const struct study_stackup *stackup) {
    const char *text = flow_print(
        flow, "Trace foot to plane %s, copper %s, dk %s.", words_quantity(flow, &stackup->height),
        words_quantity(flow, &stackup->thickness), words_quantity(flow, &stackup->dk));
    if (stackup->df > 0.0)
        text = flow_print(flow, "%s Loss tangent %s at %s.", text,
                          words_value(flow, stackup->df, DIMENSION_NUMBER),
                          words_value(flow, stackup->material_frequency, DIMENSION_FREQUENCY));
    if (stackup->mask.value > 0.0)
        text = flow_print(flow, "%s Solder mask %s, dk %s.", text,
                          words_quantity(flow, &stackup->mask),
                          words_quantity(flow, &stackup->mask_dk));
    if (stackup->etch.value > 0.0)
        text = flow_print(flow, "%s Top of a trace narrower by %s per side.", text,
                          words_quantity(flow, &stackup->etch));
    if (stackup->smallest_width > 0.0)
        text = flow_print(flow, "%s Smallest width %s", text,
                          words_value(flow, stackup->smallest_width, DIMENSION_LENGTH));
    if (stackup->smallest_gap > 0.0)
        text = flow_print(flow, "%s, gap %s", text,
                          words_value(flow, stackup->smallest_gap, DIMENSION_LENGTH));
    if (stackup->smallest_drill > 0.0)
        text = flow_print(flow, "%s, drill %s", text,
                          words_value(flow, stackup->smallest_drill, DIMENSION_LENGTH));
    return flow_print(flow, "%s.", text);
}

/* What is said beside the drawing, at the cursor; returns its height. */
static double side_text(struct flow *flow, const struct study_stackup *stackup, double x,
                        double width, bool draw) {
    double height = 0.0;
    const char *sheet = flow_shorten(flow, THEME_STRONG, flow_escape(flow, stackup->fab), width, 8);
    const char *figures = fab_line(flow, stackup);
    if (draw && stackup->fab != NULL)
        flow_text_box(flow, THEME_STRONG, sheet, x, flow->y, width);
    if (stackup->fab != NULL)
        height = flow_text_height(flow, THEME_STRONG, sheet, width) + 3.0;
    if (draw)
        flow_text_box(flow, THEME_BODY, figures, x, flow->y + height, width);
    return height + flow_text_height(flow, THEME_BODY, figures, width);
}

static void board(struct flow *flow, const struct study_stackup *stackup) {
    double width;
    double x = theme_column(&flow->page, 0, 4, &width);
    struct drawing_options options = {
        .name = stackup->id,
        .lengths = flow->guideline->study->document.lengths,
        .width = width,
        .most_height = flow->guideline->study->stackup_count > 2 ? 118.0 : 150.0};
    struct drawing_report report;
    struct scene *drawing =
        drawing_stackup(stackup, &options, flow->setter, flow->arena, &report, flow->error);
    if (drawing == NULL)
        return;
    double side;
    double right = theme_column(&flow->page, 4, 2, &side);
    flow_heading(flow, 1, stackup->name, pages_destination(flow, "board", stackup->id),
                 fmax(drawing->height, side_text(flow, stackup, right, side, false)) + 12.0);
    double top = flow->y;
    flow_place(flow, drawing, x);
    flow_figure(flow, flow_print(flow, "board-%s", stackup->id), flow_escape(flow, stackup->name),
                drawing);
    double after = flow->y;
    flow->y = top;
    flow->y = fmax(after, top + side_text(flow, stackup, right, side, true));
}

void pages_boards(struct flow *flow) {
    const struct study *study = flow->guideline->study;
    if (study->stackup_count == 0)
        return;
    flow_heading(flow, 0, "Boards", "part.boards", 0.0);
    flow_text(flow, THEME_BODY,
              "Layers as on the fab’s sheet, top to bottom: finished copper, pressed dielectrics. "
              "Heights are to "
              "scale within a drawing. Tolerances are the fab’s; rules hold over all of them.");
    for (size_t i = 0; i < study->stackup_count && !flow_failed(flow); i++)
        board(flow, &study->stackups[i]);
}

static const char *receiver_words(enum study_receiver receiver) {
    switch (receiver) {
    case STUDY_RECEIVER_NEAR:
        return "near end";
    case STUDY_RECEIVER_EITHER:
        return "either end";
    case STUDY_RECEIVER_FAR:
        break;
    }
    return "far end";
}

static const char *load_words(struct flow *flow, const struct study_signal *signal) {
    const char *load =
        isinf(signal->load) ? "open" : words_value(flow, signal->load, DIMENSION_RESISTANCE);
    if (signal->load_capacitance == 0.0)
        return load;
    return flow_print(flow, "%s, %s", load,
                      words_value(flow, signal->load_capacitance, DIMENSION_CAPACITANCE));
}

static void signal_cells(struct flow *flow, const struct study_signal *signal, const char **cells) {
    static const char *const beside[] = {"", "on both sides", "two on each side"};
    cells[0] = flow_escape(flow, signal->name);
    if (signal->aggressors > 0)
        cells[0] = flow_print(flow, "%s, %s of a victim%s", cells[0], beside[signal->aggressors],
                              signal->independent ? ", each on its own" : "");
    cells[1] = words_value(flow, signal->swing, DIMENSION_VOLTAGE);
    cells[2] = flow_escape(flow, signal->edge_text);
    cells[3] = words_range(flow, signal->edge, DIMENSION_TIME);
    cells[4] = words_range(flow, signal->source, DIMENSION_RESISTANCE);
    cells[5] = load_words(flow, signal);
    if (!signal->is_victim)
        return;
    cells[6] = flow_print(flow, "%s of %s", words_value(flow, signal->share, DIMENSION_RATIO),
                          words_value(flow, signal->noise_margin, DIMENSION_VOLTAGE));
    cells[7] =
        flow_print(flow, "<b>%s</b>",
                   words_value(flow, signal->share * signal->noise_margin, DIMENSION_VOLTAGE));
    cells[8] = receiver_words(signal->receiver);
    if (signal->settling > 0.0)
        cells[8] = flow_print(flow, "%s, sampled %s after an edge’s start", cells[8],
                              words_value(flow, signal->settling, DIMENSION_TIME));
}

enum { SIGNAL_COLUMNS = 9 };

void pages_signals(struct flow *flow) {
    const struct study *study = flow->guideline->study;
    if (study->signal_count == 0)
        return;
    struct table_row *rows =
        arena_new(flow->arena, study->signal_count, struct table_row, flow->error);
    for (size_t i = 0; rows != NULL && i < study->signal_count; i++) {
        const char **cells = arena_new(flow->arena, SIGNAL_COLUMNS, const char *, flow->error);
        if (cells == NULL)
            return;
        signal_cells(flow, &study->signals[i], cells);
        rows[i] = (struct table_row){.cells = cells};
    }
    const struct table_column columns[SIGNAL_COLUMNS] = {
        [0] = {.most = 80.0}, [7] = {.least = 38.0}, [8] = {.least = 40.0}};
    const struct table_head heads[SIGNAL_COLUMNS] = {
        {"Class", 1},         {"Swing", 1},  {"Edge, as stated", 1},
        {"Edge, 0–100 %", 1}, {"Driver", 1}, {"Receiver load", 1},
        {"Share", 1},         {"Budget", 1}, {"Listens at", 1}};
    const struct table_head_row head = {heads, SIGNAL_COLUMNS};
    const char *notes[] = {
        "Edges become one linear ramp from 0 to 100 %; a rounder edge of the same 10–90 % time can "
        "give up to 28 % more at a matched far end. Budget: the share of the noise margin that "
        "crosstalk may take. Ends are counted from the aggressor’s driver."};
    struct table table = {.name = "signals",
                          .columns = columns,
                          .column_count = SIGNAL_COLUMNS,
                          .heads = &head,
                          .head_count = 1,
                          .rows = rows,
                          .row_count = study->signal_count,
                          .notes = notes,
                          .note_count = 1,
                          .stretch = true};
    flow_heading(flow, 1, "Signal classes", "part.signals", flow_table_start(flow, &table));
    flow_table(flow, &table);
}

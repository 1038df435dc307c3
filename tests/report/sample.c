/* Writes sample.pdf (and a PNG and an SVG) with one of everything, to be looked at by a person: in
 * colour, in grey, and with text extracted.  sample.pdf goes to the folder given. */

#include "report/chart.h"
#include "report/drawing.h"
#include "report/paint.h"
#include "report/table.h"
#include "report/theme.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { POINTS = 60 };

static struct text_setter *setter;
static struct arena *arena;
static struct error error;
static struct theme_page page_form;

static struct scene *pages[16];
static size_t page_count;

static struct scene *new_page(const char *title, const char *name) {
    struct scene *page = scene_create(page_form.width, page_form.height, arena, &error);
    if (page == NULL)
        return NULL;
    pages[page_count++] = page;
    scene_destination(page, name, page_form.left, page_form.top - 20);
    scene_text(page, &(struct scene_text){.markup = title,
                                          .style = theme_style(THEME_CHAPTER),
                                          .x = page_form.left,
                                          .y = page_form.top});
    return page;
}

static void place(struct scene *page, const struct scene *part, double x, double y) {
    if (page != NULL && part != NULL)
        scene_place(page, part, x, y);
}

static double sweep[POINTS], curves[12][POINTS], lows[12][POINTS], highs[12][POINTS];

static void fill_curves(void) {
    for (size_t i = 0; i < POINTS; i++) {
        sweep[i] = 0.15e-3 + 5.85e-3 * (double)i / (POINTS - 1);
        for (size_t k = 0; k < 12; k++) {
            double fall = 0.35e-3 * (1 + 0.45 * (double)k);
            curves[k][i] = 0.62 / (1 + pow(sweep[i] / fall, 1.6));
            lows[k][i] = 0.9 * curves[k][i];
            highs[k][i] = 1.12 * curves[k][i];
        }
    }
}

static void chart_spacing(struct scene *page, double y) {
    static const char *const NAMES[] = {"Four layers, plane 0.2 mm down", "Two layers, 0.8 mm",
                                        "Two layers, 1.6 mm"};
    struct chart_series series[3];
    for (size_t k = 0; k < 3; k++)
        series[k] = (struct chart_series){.label = NAMES[k],
                                          .x = sweep,
                                          .y = curves[k * 4],
                                          .count = POINTS,
                                          .low = lows[k * 4],
                                          .high = highs[k * 4],
                                          .style = k};
    struct chart_limit limits[] = {{0.2, "budget of class <b>clock</b>: 200\u2009mV", false}};
    struct chart_mark marks[] = {{0.75e-3, 0.20, "XT-01: 0.75\u2009mm", 0},
                                 {2.15e-3, 0.20, "XT-02: 2.15\u2009mm", 1},
                                 {3.45e-3, 0.20, "XT-03: 3.45\u2009mm", 2}};
    struct chart chart = {.name = "spacing-1",
                          .title = "Worst peak on the victim against the gap",
                          .x = {"gap, edge to edge", DIMENSION_LENGTH, false, 0, 0},
                          .y = {"larger peak of the two ends", DIMENSION_VOLTAGE, false, 0, 0},
                          .series = series,
                          .series_count = 3,
                          .limits = limits,
                          .limit_count = 1,
                          .marks = marks,
                          .mark_count = 3};
    place(page, chart_draw(&chart, 480, 260, setter, arena, NULL, &error), page_form.left, y);
}

static void chart_many(struct scene *page, double y) {
    static const char *const NAMES[] = {
        "A", "B with a longer name", "C", "D<sub>2</sub>", "E", "F", "G", "H", "I, 1.2 ns", "J"};
    struct chart_series series[10];
    for (size_t k = 0; k < 10; k++)
        series[k] = (struct chart_series){
            .label = NAMES[k], .x = sweep, .y = curves[k], .count = POINTS, .style = k};
    struct chart_limit limits[] = {{2e-2, "at least 20\u2009mV", true}};
    struct chart chart = {.name = "many",
                          .title = "Ten curves, both axes logarithmic",
                          .x = {"gap", DIMENSION_LENGTH, true, 0, 0},
                          .y = {"near-end peak", DIMENSION_VOLTAGE, true, 0, 0},
                          .series = series,
                          .series_count = 10,
                          .limits = limits,
                          .limit_count = 1};
    place(page, chart_draw(&chart, 480, 220, setter, arena, NULL, &error), page_form.left, y);
}

static void chart_odd(struct scene *page, double y) {
    static double gaps[POINTS], leaves[POINTS], levels[POINTS], frequency[POINTS];
    static bool doubtful[POINTS];
    static const double measured_x[] = {0.5e-3, 1.5e-3, 3e-3, 4.5e-3};
    static const double measured[] = {0.31, 0.085, 0.030, 0.016};
    static const double measured_low[] = {0.29, 0.075, 0.022, 0.010};
    static const double measured_high[] = {0.33, 0.095, 0.038, 0.022};
    static const double one_x[] = {2.5e-3}, one_y[] = {0.22};
    for (size_t i = 0; i < POINTS; i++) {
        gaps[i] = i > 20 && i < 30 ? (double)NAN : curves[0][i];
        leaves[i] = 0.05 + 90 * sweep[i];
        doubtful[i] = i < 8;
        frequency[i] = 1e5 * pow(10, 4.0 * (double)i / (POINTS - 1));
        levels[i] = -20 - 60 / (1 + pow(frequency[i] / 2e7, 1.1));
    }
    struct chart_series series[] = {
        {.label = "a gap in it",
         .x = sweep,
         .y = gaps,
         .count = POINTS,
         .style = 0,
         .doubtful = doubtful},
        {.label = "leaves the frame", .x = sweep, .y = leaves, .count = POINTS, .style = 1},
        {.label = "same as below", .x = sweep, .y = curves[6], .count = POINTS, .style = 2},
        {.label = "same as above", .x = sweep, .y = curves[6], .count = POINTS, .style = 3},
        {.label = "measured",
         .x = measured_x,
         .y = measured,
         .count = 4,
         .style = 4,
         .low = measured_low,
         .high = measured_high,
         .points = true},
        {.label = "one point", .x = one_x, .y = one_y, .count = 1, .style = 5}};
    struct chart_mark marks[] = {{1e-3, NAN, "R-1: 1\u2009mm", SIZE_MAX},
                                 {1.05e-3, NAN, "R-2: 1.05\u2009mm", SIZE_MAX},
                                 {5.9e-3, NAN, "R-3 at the far right: 5.9\u2009mm", SIZE_MAX}};
    struct chart chart = {.name = "odd",
                          .x = {"gap", DIMENSION_LENGTH, false, 0, 0},
                          .y = {"peak", DIMENSION_VOLTAGE, false, 0, 0.4},
                          .series = series,
                          .series_count = 6,
                          .marks = marks,
                          .mark_count = 3};
    place(page, chart_draw(&chart, 300, 200, setter, arena, NULL, &error), page_form.left, y);
    struct chart_series level = {
        .label = "|S<sub>21</sub>|", .x = frequency, .y = levels, .count = POINTS};
    struct chart narrow = {.name = "level",
                           .x = {"frequency", DIMENSION_FREQUENCY, true, 0, 0},
                           .y = {"level", DIMENSION_LEVEL, false, 0, 0},
                           .series = &level,
                           .series_count = 1};
    place(page, chart_draw(&narrow, 170, 200, setter, arena, NULL, &error), page_form.left + 310,
          y);
}

static void chart_legend(struct scene *page, double y) {
    static char names[12][40];
    struct chart_series series[12];
    for (size_t k = 0; k < 12; k++) {
        snprintf(names[k], sizeof names[k], "variant %zu of a long list of them", k + 1);
        series[k] = (struct chart_series){.label = names[k],
                                          .x = sweep,
                                          .y = curves[k],
                                          .count = POINTS,
                                          .style = k,
                                          .markers = false};
    }
    struct chart chart = {.name = "legend",
                          .title = "Too many for the room at the ends",
                          .x = {"gap", DIMENSION_LENGTH, false, 0, 0},
                          .y = {"peak", DIMENSION_VOLTAGE, false, 0, 0},
                          .series = series,
                          .series_count = 12};
    place(page, chart_draw(&chart, 480, 190, setter, arena, NULL, &error), page_form.left, y);
}

static void tables(struct scene *page, double y) {
    static const struct table_column COLUMNS[] = {{TABLE_LEFT, 0, 0},    {TABLE_DECIMAL, 0, 0},
                                                  {TABLE_DECIMAL, 0, 0}, {TABLE_DECIMAL, 0, 0},
                                                  {TABLE_DECIMAL, 0, 0}, {TABLE_LEFT, 0, 150}};
    static const struct table_head GROUPS[] = {
        {"", 1}, {"Two layers, 1.6\u2009mm", 2}, {"Four layers", 2}, {"", 1}};
    static const struct table_head HEADS[] = {{"Signal class", 1},   {"gap,\u2009mm", 1},
                                              {"margin,\u2009%", 1}, {"gap,\u2009mm", 1},
                                              {"margin,\u2009%", 1}, {"Remark", 1}};
    static const struct table_head_row HEAD_ROWS[] = {{GROUPS, 4}, {HEADS, 6}};
    static const char *const R0[] = {"Clocks and strobes", NULL, NULL, NULL, NULL, NULL};
    static const char *const R1[] = {
        "clock to <i>V</i><sub>ref</sub>",          "12.35", "3.1", "0.75", "\u22120.4",
        "proven over 10 .. 200\u2009mm, either end"};
    static const char *const R2[] = {
        "clock to sensor",
        "1.9",
        "12",
        "0.2<sup>1</sup>",
        "104.25",
        "the fab\u2019s smallest gap, so nothing is left to gain from a "
        "shorter run"};
    static const char *const R3[] = {"bus to bus", "\u2014", "cannot be met", "0.35", "8", ""};
    static const struct table_row ROWS[] = {{.cells = R0, .heading = true},
                                            {.cells = R1},
                                            {.cells = R2, .tinted = true},
                                            {.cells = R3, .strong = true}};
    static const char *const NOTES[] = {
        "<sup>1</sup> Below this the fab cannot etch; see <b>XT-04</b>. Ω, µ, ≥, ≤, ×, ±, −, →."};
    struct table table = {.name = "classes",
                          .columns = COLUMNS,
                          .column_count = 6,
                          .heads = HEAD_ROWS,
                          .head_count = 2,
                          .rows = ROWS,
                          .row_count = 4,
                          .notes = NOTES,
                          .note_count = 1,
                          .stretch = true};
    const struct table_layout *layout = table_layout(&table, 480, setter, arena, &error);
    if (layout != NULL && page != NULL)
        table_draw(layout, 0, 4, page, page_form.left, y);
}

static void text_specimen(struct scene *page, double y) {
    scene_text(
        page,
        &(struct scene_text){
            .markup = "How far apart must a clock and a victim run on each of our boards, when the "
                      "drivers and edges are those of the table of signals?",
            .style = theme_style(THEME_LEAD),
            .leading = theme_leading(THEME_LEAD),
            .x = page_form.left,
            .y = y,
            .width = 400});
    scene_text(
        page,
        &(struct scene_text){
            .markup =
                "Over the two-layer board the peak falls below its budget of 200\u2009mV from "
                "a gap of 2.15\u2009mm on; over the four-layer board 0.35\u2009mm suffice, a "
                "sixth of it. Efficient first fields: <i>Z</i><sub>0</sub>\u2009=\u2009"
                "50\u2009Ω, <i>C</i><sub>12</sub>, 10<sup>\u22126</sup>, ε<sub>r</sub> ≥ 4.3, "
                "35\u2009µm, 20 × log, ±\u200910\u2009%, −3.2\u2009dB, A → B.",
            .style = theme_style(THEME_BODY),
            .leading = theme_leading(THEME_BODY),
            .x = page_form.left,
            .y = y + 48,
            .width = 480});
    scene_link(page, page_form.left, y + 40, 120, 12, "drawings");
}

static void sketch_pair(struct sketch *sketch, double height, double width, double gap,
                        bool strip) {
    *sketch = (struct sketch){0};
    double top = height + 35e-6;
    sketch->solids[sketch->solid_count++] =
        (struct sketch_solid){SKETCH_PLANE, -INFINITY, INFINITY, -35e-6, 0, "ground plane"};
    sketch->solids[sketch->solid_count++] =
        (struct sketch_solid){SKETCH_DIELECTRIC, -INFINITY, INFINITY, 0, height, "dk 4.3"};
    sketch->solids[sketch->solid_count++] = (struct sketch_solid){
        SKETCH_AGGRESSOR, -gap / 2 - width, -gap / 2, height, top, "aggressor"};
    sketch->solids[sketch->solid_count++] =
        (struct sketch_solid){SKETCH_VICTIM, gap / 2, gap / 2 + width, height, top, "victim"};
    if (strip)
        sketch->solids[sketch->solid_count++] = (struct sketch_solid){
            SKETCH_TIED_ONE_END, -gap / 6, gap / 6, height, top, "tied at one end"};
    if (strip)
        sketch->dimensions[sketch->dimension_count++] =
            (struct sketch_dimension){false, -gap / 6, gap / 6, top, "between_width", gap / 3};
    sketch->dimensions[sketch->dimension_count++] =
        (struct sketch_dimension){false, -gap / 2, gap / 2, top, "gap", gap};
    sketch->dimensions[sketch->dimension_count++] =
        (struct sketch_dimension){false, -gap / 2 - width, -gap / 2, top, "width", width};
    sketch->dimensions[sketch->dimension_count++] =
        (struct sketch_dimension){true, 0, height, gap / 2 + width, "height", height};
}

static void drawings(struct scene *page, double y) {
    static struct sketch sketch;
    struct drawing_options options = {.width = 300};
    const struct {
        double height, width, gap;
        bool strip;
    } cases[] = {{1.6e-3, 0.3e-3, 0.3e-3, false},
                 {0.2e-3, 0.2e-3, 3e-3, true},
                 {0.8e-3, 0.3e-3, 1.5e-3, true}};
    for (size_t i = 0; i < 3; i++) {
        sketch_pair(&sketch, cases[i].height, cases[i].width, cases[i].gap, cases[i].strip);
        struct scene *drawing = drawing_sketch(&sketch, &options, setter, arena, NULL, &error);
        place(page, drawing, page_form.left, y);
        y += drawing == NULL ? 0 : drawing->height + 16;
    }
}

static void boards(struct scene *page, double y) {
    static const struct study_layer FOUR[] = {
        {.kind = STUDY_LAYER_COPPER,
         .name = "top",
         .thickness = {35e-6, 5e-6, 5e-6, DIMENSION_LENGTH},
         .dk = {0, 0, 0, DIMENSION_NUMBER},
         .plane = false},
        {.kind = STUDY_LAYER_DIELECTRIC,
         .name = "prepreg 2 × 1080",
         .thickness = {0.19e-3, 0.019e-3, 0.019e-3, DIMENSION_LENGTH},
         .dk = {4.1, 0.2, 0.2, DIMENSION_NUMBER},
         .plane = false},
        {.kind = STUDY_LAYER_COPPER,
         .name = "inner 1",
         .thickness = {35e-6, 0, 0, DIMENSION_LENGTH},
         .dk = {0, 0, 0, DIMENSION_NUMBER},
         .plane = true},
        {.kind = STUDY_LAYER_DIELECTRIC,
         .name = "core",
         .thickness = {1.1e-3, 0.1e-3, 0.1e-3, DIMENSION_LENGTH},
         .dk = {4.4, 0.2, 0.2, DIMENSION_NUMBER},
         .plane = false},
        {.kind = STUDY_LAYER_COPPER,
         .name = "inner 2",
         .thickness = {35e-6, 0, 0, DIMENSION_LENGTH},
         .dk = {0, 0, 0, DIMENSION_NUMBER},
         .plane = true},
        {.kind = STUDY_LAYER_DIELECTRIC,
         .name = "prepreg",
         .thickness = {0.19e-3, 0.019e-3, 0.03e-3, DIMENSION_LENGTH},
         .dk = {4.1, 0, 0, DIMENSION_NUMBER},
         .plane = false},
        {.kind = STUDY_LAYER_COPPER,
         .name = "bottom",
         .thickness = {35e-6, 0, 0, DIMENSION_LENGTH},
         .dk = {0, 0, 0, DIMENSION_NUMBER},
         .plane = false}};
    struct study_stackup four = {.layers = FOUR, .layer_count = 7};
    struct study_stackup two = {.layers = FOUR + 2, .layer_count = 3};
    struct drawing_options options = {.width = 360, .most_height = 180};
    struct scene *drawing = drawing_stackup(&four, &options, setter, arena, NULL, &error);
    place(page, drawing, page_form.left, y);
    y += drawing == NULL ? 0 : drawing->height + 20;
    place(page, drawing_stackup(&two, &options, setter, arena, NULL, &error), page_form.left, y);
}

static bool write_file(const char *folder, const char *name, struct paint_bytes bytes) {
    char path[4096];
    snprintf(path, sizeof path, "%s/%s", folder, name);
    FILE *file = fopen(path, "wb");
    if (file == NULL)
        return false;
    bool ok = fwrite(bytes.bytes, 1, bytes.length, file) == bytes.length;
    return fclose(file) == 0 && ok;
}

static bool write_all(const char *folder) {
    const struct paint_entry outline[] = {{"Charts", "charts", 0},
                                          {"More charts", "more", 1},
                                          {"Tables and text", "tables", 0},
                                          {"Drawings", "drawings", 0},
                                          {"Boards", "boards", 1}};
    struct paint_document document = {.title = "Sample: ≥ 1",
                                      .author = "Northlight Instruments",
                                      .created = "2026-03-01",
                                      .pages = (const struct scene *const *)pages,
                                      .page_count = page_count,
                                      .outline = outline,
                                      .outline_count = 5};
    struct paint_bytes pdf, svg, png;
    return paint_pdf(setter, &document, arena, &pdf, &error) &&
           paint_svg(setter, pages[0], "Charts", arena, &svg, &error) &&
           paint_png(setter, pages[0], 1.5, arena, &png, &error) &&
           write_file(folder, "sample.pdf", pdf) && write_file(folder, "sample.svg", svg) &&
           write_file(folder, "sample.png", png);
}

int main(int argc, char **argv) {
    arena = arena_create(&error);
    setter = text_setter_create(NULL, &error);
    bool ok = arena != NULL && setter != NULL;
    if (ok) {
        page_form = theme_page(STUDY_A4);
        fill_curves();
        struct scene *page = new_page("Charts", "charts");
        chart_spacing(page, 100);
        chart_many(page, 370);
        page = new_page("More charts", "more");
        chart_odd(page, 100);
        chart_legend(page, 330);
        page = new_page("Tables and text", "tables");
        text_specimen(page, 110);
        tables(page, 220);
        page = new_page("Drawings", "drawings");
        drawings(page, 96);
        page = new_page("Boards", "boards");
        boards(page, 110);
        ok = error.kind == ERROR_NONE && write_all(argc > 1 ? argv[1] : ".");
    }
    if (!ok)
        fprintf(stderr, "sample: %s\n", error.message);
    text_setter_free(setter);
    arena_free(arena);
    return ok ? 0 : 1;
}

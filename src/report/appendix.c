/* Inputs with their origin, methods with sources, glossary, cautions. */

#include "pages.h"

#include "words.h"

#include <math.h>
#include <string.h>

/* ---- inputs ---- */

static const char *origin_words(enum study_origin origin) {
    switch (origin) {
    case STUDY_GIVEN:
        return "given";
    case STUDY_VARIED:
        return "varied";
    case STUDY_COMPARED:
        return "compared";
    case STUDY_FROM_STACKUP:
        return "board";
    case STUDY_FROM_SIGNAL:
        return "signal";
    case STUDY_STANDARD:
        break;
    }
    return "standard";
}

static const char *setting_words(struct flow *flow, const struct study_chapter *chapter, size_t i,
                                 const struct study_setting *setting) {
    const struct model_input *input = &chapter->model->inputs[i];
    if (setting->origin == STUDY_VARIED)
        return flow_print(flow, "%s to %s",
                          words_value(flow, chapter->vary.points[0], input->dimension),
                          words_value(flow, chapter->vary.points[chapter->vary.point_count - 1],
                                      input->dimension));
    if (isnan(setting->value))
        return flow_print(flow, "as %s",
                          words_name(flow, input->same_as != NULL ? input->same_as : "given"));
    if (setting->range.to > setting->range.from)
        return input->words != NULL
                   ? flow_print(flow, "%s or %s", words_input(flow, input, setting->range.from),
                                words_input(flow, input, setting->range.to))
                   : words_range(flow, setting->range, input->dimension);
    if (input->words == NULL && (setting->minus > 0.0 || setting->plus > 0.0)) {
        struct quantity quantity = {setting->value, setting->minus, setting->plus,
                                    input->dimension};
        return words_quantity(flow, &quantity);
    }
    return words_input(flow, input, setting->value);
}

static bool settled_alike(const struct study_chapter *chapter, size_t i) {
    for (size_t v = 1; v < chapter->variant_count; v++)
        if (memcmp(&chapter->variants[v].settings[i].value, &chapter->variants[0].settings[i].value,
                   sizeof(double)) != 0 ||
            chapter->variants[v].settings[i].minus != chapter->variants[0].settings[i].minus)
            return false;
    return true;
}

static const char *all_variants(struct flow *flow, const struct study_chapter *chapter, size_t i) {
    const char *text = setting_words(flow, chapter, i, &chapter->variants[0].settings[i]);
    if (settled_alike(chapter, i))
        return text;
    for (size_t v = 1; v < chapter->variant_count; v++) {
        const char *next = setting_words(flow, chapter, i, &chapter->variants[v].settings[i]);
        bool told = false;
        for (size_t w = 0; w < v && !told; w++)
            told = strcmp(setting_words(flow, chapter, i, &chapter->variants[w].settings[i]),
                          next) == 0;
        if (!told)
            text = flow_print(flow, "%s; %s", text, next);
    }
    return text;
}

static void inputs_table(struct flow *flow, const char *name, const char *title,
                         const char *destination, const struct table_row *rows, size_t count,
                         bool origins) {
    const struct table_column four[4] = {{.most = 110.0}, {.most = 170.0}, {.most = 60.0}, {0}};
    const struct table_column three[3] = {{.most = 110.0}, {.most = 170.0}, {0}};
    const struct table_head of_chapter[4] = {
        {"Input", 1}, {"Value, all boards and cases", 1}, {"From", 1}, {"Meaning", 1}};
    const struct table_head of_model[3] = {{"Input", 1}, {"Standard", 1}, {"Meaning", 1}};
    const struct table_head_row head = {origins ? of_chapter : of_model, origins ? 4 : 3};
    struct table table = {.name = name,
                          .columns = origins ? four : three,
                          .column_count = origins ? 4 : 3,
                          .heads = &head,
                          .head_count = 1,
                          .rows = rows,
                          .row_count = count,
                          .stretch = true};
    flow_heading(flow, 1, title, destination, flow_table_start(flow, &table));
    flow_table(flow, &table);
}

static bool is_standard(const struct study_chapter *chapter, size_t i) {
    for (size_t v = 0; v < chapter->variant_count; v++)
        if (chapter->variants[v].settings[i].origin != STUDY_STANDARD)
            return false;
    return true;
}

/* What is not at its standard. */
static void chapter_inputs(struct flow *flow, const struct study_chapter *chapter) {
    const struct model *model = chapter->model;
    struct table_row *rows =
        arena_new(flow->arena, model->input_count, struct table_row, flow->error);
    size_t count = 0;
    for (size_t i = 0; rows != NULL && i < model->input_count; i++) {
        if (is_standard(chapter, i))
            continue;
        const char **cells = arena_new(flow->arena, 4, const char *, flow->error);
        if (cells == NULL)
            return;
        cells[0] = words_name(flow, model->inputs[i].name);
        cells[1] = all_variants(flow, chapter, i);
        cells[2] = origin_words(chapter->variants[0].settings[i].origin);
        cells[3] = flow_escape(flow, model->inputs[i].meaning);
        rows[count++].cells = cells;
    }
    if (count > 0)
        inputs_table(flow, flow_print(flow, "%s-inputs", chapter->id), chapter->title,
                     pages_destination(flow, "inputs", chapter->id), rows, count, true);
}

static void model_standards(struct flow *flow, const struct study_chapter *chapter) {
    const struct model *model = chapter->model;
    struct table_row *rows =
        arena_new(flow->arena, model->input_count, struct table_row, flow->error);
    size_t count = 0;
    for (size_t i = 0; rows != NULL && i < model->input_count; i++) {
        const struct model_input *input = &model->inputs[i];
        double value = input->same_as != NULL ? (double)NAN : input->standard;
        struct study_setting standard = {
            .value = value, .range = {value, value}, .origin = STUDY_STANDARD};
        const char **cells = arena_new(flow->arena, 3, const char *, flow->error);
        if (cells == NULL)
            return;
        if (input->not_yet != NULL || (isnan(input->standard) && input->same_as == NULL))
            continue;
        cells[0] = words_name(flow, input->name);
        cells[1] = setting_words(flow, chapter, i, &standard);
        cells[2] = flow_escape(flow, input->meaning);
        rows[count++].cells = cells;
    }
    if (count > 0)
        inputs_table(flow, flow_print(flow, "%s-standards", model->name),
                     flow_print(flow, "What else the model %s takes", model->name),
                     pages_destination(flow, "standards", model->name), rows, count, false);
}

static void inputs(struct flow *flow) {
    const struct study *study = flow->guideline->study;
    flow_heading(flow, 0, "Inputs and tolerances", "part.inputs", 0.0);
    flow_text(flow, THEME_BODY,
              "Of each chapter, what is stated; all other inputs stand at the standard of the "
              "chapter’s model, which follows at the end.");
    for (size_t c = 0; c < study->chapter_count && !flow_failed(flow); c++)
        chapter_inputs(flow, &study->chapters[c]);
    for (size_t c = 0; c < study->chapter_count && !flow_failed(flow); c++) {
        bool first = true;
        for (size_t before = 0; before < c; before++)
            first = first && study->chapters[before].model != study->chapters[c].model;
        if (first)
            model_standards(flow, &study->chapters[c]);
    }
}

/* ---- methods ---- */

static void methods(struct flow *flow) {
    static const char *const paragraphs[] = {
        "<b>Sections.</b> Galerkin boundary elements on the faces of the copper, the grounded slab "
        "by its image series; mask, planes above or that end and etched copper by the charge on "
        "the borders of the dielectrics as well; external inductance from the solution in air, L = "
        "µ<sub>0</sub>ε<sub>0</sub>C<sub>0</sub><sup>−1"
        "</sup>. Total-charge and image methods for multiconductor lines: Weeks 1970 (IEEE Trans. "
        "MTT-18, 35–43); Wei, "
        "Harrington, Mautz and Sarkar 1984 (IEEE Trans. MTT-32, 439–450).",
        "<b>Checks of sections.</b> Hammerstad and Jensen 1980 (MTT-S Digest, 407–409); Kirschning "
        "and Jansen 1984 "
        "(IEEE Trans. MTT-32, 83–90); Love 1923 for a thin strip over a plane in air; solutions by "
        "two independent "
        "methods that agree to 10<sup>−5</sup> on every matrix entry.",
        "<b>Copper that is no signal.</b> Tied: zero potential and zero flux. Floating: zero net "
        "charge and zero net "
        "current. Tied at one end: zero potential and zero net current, valid below the strip’s "
        "resonance.",
        "<b>Lines.</b> Coupled lines by travelling modes between the real ends (Branin 1967 for "
        "one line; modal decomposition as in Paul, Analysis of Multiconductor Transmission Lines, "
        "2nd ed. 2008); with loss (skin effect after Wheeler 1942, causal dielectric after "
        "Djordjevic et al. 2001) by inversion of the Laplace transform (Wilcox 1978).",
        "<b>Rules.</b> The region that a rule permits (the found input beyond its bound, stated "
        "ranges, tolerances, "
        "either receiver end) is scanned, every local maximum is refined by solving, and the value "
        "is rounded to the "
        "grid on the safe side. The card gives the number of solutions and the worst case.",
    };
    flow_heading(flow, 0, "Methods and sources", "part.methods", 0.0);
    for (size_t i = 0; i < sizeof paragraphs / sizeof *paragraphs; i++) {
        flow_text(flow, THEME_BODY, paragraphs[i]);
        flow_gap(flow, 6.0);
    }
    for (size_t i = 0; i < model_count(); i++) {
        const struct model *model = model_at(i);
        flow_text(flow, THEME_NOTE,
                  flow_print(flow, "<b>Model %s</b>, revision %u. %s %s", model->name,
                             model->revision, flow_escape(flow, model->method),
                             flow_escape(flow, model->validity)));
        flow_gap(flow, 3.0);
    }
}

/* ---- glossary ---- */

static void glossary(struct flow *flow) {
    static const char *const terms[][2] = {
        {"Aggressor, victim", "The trace that switches; the quiet trace beside it."},
        {"Near end, far end", "The victim’s ends at the aggressor’s driver and away from it."},
        {"Gap", "Free distance between the feet of two traces."},
        {"Height", "From the top of the plane to the foot of the trace."},
        {"Edge", "Time of one linear ramp of the driver’s EMF from 0 to 100 %."},
        {"K<sub>L</sub>, inductive coefficient",
         "Mutual inductance over the aggressor’s inductance."},
        {"K<sub>C</sub>, capacitive coefficient",
         "Mutual capacitance over the victim’s Maxwell capacitance."},
        {"K<sub>b</sub>, backward coefficient",
         "(K<sub>L</sub> + K<sub>C</sub>)/4: where the near end of a long, "
         "matched, weakly coupled pair settles."},
        {"K<sub>f</sub>, forward coefficient",
         "Far-end voltage of a matched, weakly coupled pair per length and per "
         "rate of change of the aggressor’s voltage; negative where the "
         "inductive part prevails."},
        {"Bit time", "Least time between two edges of one aggressor; 0: there is only one edge."},
        {"Settling",
         "From the start of the aggressor’s latest edge to the instant at which the victim is "
         "sampled; 0: every instant counts."},
        {"Edge distance", "From the centre of the outermost trace to the edge of the plane."},
        {"Level", "20 log of the victim’s voltage over the driver’s EMF."},
        {"Floating, tied",
         "Copper connected to nothing; to ground. Tied at one end: at a single point."},
        {"Solutions", "Cases solved for one proof, each a full field and line solution."},
        {"Fingerprint", "SHA-256 over all resolved inputs and the revisions of the methods: equal "
                        "fingerprints, equal "
                        "rules."},
    };
    size_t count = sizeof terms / sizeof *terms;
    struct table_row *rows = arena_new(flow->arena, count, struct table_row, flow->error);
    for (size_t i = 0; rows != NULL && i < count; i++)
        rows[i].cells = terms[i];
    const struct table_column columns[2] = {{.most = 150.0}, {0}};
    struct table table = {.name = "glossary",
                          .columns = columns,
                          .column_count = 2,
                          .rows = rows,
                          .row_count = count,
                          .stretch = true};
    flow_heading(flow, 1, "Glossary", "part.glossary", flow_table_start(flow, &table));
    flow_table(flow, &table);
}

/* ---- cautions ---- */

static void cautions(struct flow *flow) {
    static const char *const paragraphs[] = {
        "These rules speak about crosstalk and current loops over an uncut ground plane, for the "
        "drivers, loads, "
        "lengths and boards stated. "
        "They promise nothing about emission, immunity, electrostatic discharge or insulation.",
        "<b>Distances here are not clearance or creepage distances.</b> Where mains, high voltage, "
        "protective insulation or "
        "any safety function is concerned, local codes, the product’s safety standards and "
        "licensed practice decide, and "
        "they come first.",
        "Emission and immunity are shown by measurement to the standards that apply to the "
        "product.",
        "Loss, solder mask, etched copper, a plane above and the edge of a plane are in a number "
        "only where its inputs give them; see Inputs and tolerances. Cuts in the plane, vias, "
        "connectors and bends are in none; over a cut plane none of these rules holds.",
        "What is solved without loss is mostly the larger, but not the far end between planes or "
        "under thick mask, nor what is left long after an edge.",
        "Edges are linear ramps. A rounder edge of the same 10–90 % time can give up to 28 % more "
        "at a matched far end. Near-end, far-end, larger and receiver peaks are for one edge; on a "
        "line that rings the edges of a sequence can add up to more. Only the peaks of a sequence "
        "and what the receiver counts know the bit time.",
        "One aggressor switches unless a chapter says that there are more; neighbours that switch "
        "together add their contributions.",
    };
    flow_heading(flow, 1, "Cautions", "part.cautions", 120.0);
    for (size_t i = 0; i < sizeof paragraphs / sizeof *paragraphs; i++) {
        flow_text(flow, THEME_BODY, paragraphs[i]);
        flow_gap(flow, 5.0);
    }
}

void pages_appendices(struct flow *flow) {
    methods(flow);
    glossary(flow);
    cautions(flow);
    inputs(flow);
}

#include "keys.h"

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))
#define TABLE(stem, text, rest)                                                                    \
    const struct key_table keys_##stem = {                                                         \
        .name = (text), .keys = stem, .count = COUNT(stem), .others = (rest)}

/* The order of the words is that of the enumerations in study.h. */
const char *const keys_pages[] = {"A4", "letter", NULL};
const char *const keys_lengths[] = {"mm", "mil", NULL};
const char *const keys_roles[] = {"signal", "plane", NULL};
const char *const keys_receivers[] = {"far", "near", "either", NULL};
const char *const keys_strengths[] = {"must", "should", "may", NULL};
const char *const keys_tolerances[] = {"corners", "nominal", NULL};
const char *const keys_kept[] = {"width", "impedance", NULL};
const char *const keys_aggressors[] = {"1", "2", "4", NULL};
const char *const keys_switching[] = {"together", "independent", NULL};
const char *const keys_scales[] = {"linear", "log", NULL};

static const struct key document[] = {
    {.name = "number", .kind = KEY_TEXT, .required = true, .meaning = "number of the document"},
    {.name = "title", .kind = KEY_TEXT, .required = true, .meaning = "title on the cover"},
    {.name = "subtitle", .kind = KEY_TEXT, .meaning = "second line of the title"},
    {.name = "revision", .kind = KEY_TEXT, .required = true, .meaning = "revision of the document"},
    {.name = "status", .kind = KEY_TEXT, .meaning = "\"for review\", \"released\""},
    {.name = "date", .kind = KEY_CODED, .required = true, .meaning = "date of issue, YYYY-MM-DD"},
    {.name = "owner", .kind = KEY_TEXT, .meaning = "who answers for the rules"},
    {.name = "organisation", .kind = KEY_TEXT, .meaning = "whose rules they are"},
    {.name = "reviewers", .kind = KEY_TEXTS, .most = 20, .meaning = "who checks the document"},
    {.name = "page", .kind = KEY_WORD, .words = keys_pages, .meaning = "paper; standard: A4"},
    {.name = "lengths",
     .kind = KEY_WORD,
     .words = keys_lengths,
     .meaning = "unit in which lengths are printed; standard: mm"},
};
TABLE(document, "the document", NULL);

static const struct key layer[] = {
    {.name = "copper",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_LENGTH,
     .meaning = "finished thickness of a copper layer"},
    {.name = "role",
     .kind = KEY_WORD,
     .words = keys_roles,
     .meaning = "what the copper is for (with \"copper\")"},
    {.name = "dielectric",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_LENGTH,
     .meaning = "pressed thickness of a dielectric layer"},
    {.name = "dk",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_NUMBER,
     .meaning = "relative permittivity (with \"dielectric\")"},
    {.name = "name", .kind = KEY_TEXT, .meaning = "name in the drawing"},
    {.name = "df",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_NUMBER,
     .meaning = "loss tangent (with \"dielectric\"); standard: 0, lossless"},
    {.name = "material_frequency",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_FREQUENCY,
     .meaning = "frequency at which dk and df hold; standard: 1 GHz"},
};
TABLE(layer, "a layer", NULL);

static const struct key smallest[] = {
    {.name = "width",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_LENGTH,
     .meaning = "narrowest trace that the fab makes"},
    {.name = "gap",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_LENGTH,
     .meaning = "smallest free distance between copper"},
    {.name = "drill",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_LENGTH,
     .meaning = "smallest drill"},
};
TABLE(smallest, "the fab's smallest values", NULL);

static const struct key mask[] = {
    {.name = "thickness",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_LENGTH,
     .required = true,
     .meaning = "thickness on the copper, and on the board beside it"},
    {.name = "dk",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_NUMBER,
     .meaning = "relative permittivity; standard: 3.5"},
};
TABLE(mask, "a solder mask", NULL);

static const struct key stackup[] = {
    {.name = "name", .kind = KEY_TEXT, .meaning = "name in the document; standard: its identifier"},
    {.name = "fab", .kind = KEY_TEXT, .meaning = "sheet that the figures are from"},
    {.name = "layers",
     .kind = KEY_OBJECTS,
     .table = &keys_layer,
     .most = 60,
     .required = true,
     .meaning = "from top to bottom"},
    {.name = "smallest",
     .kind = KEY_OBJECT,
     .table = &keys_smallest,
     .meaning = "what the fab can make"},
    {.name = "etch",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_LENGTH,
     .meaning = "what the top of a trace is narrower, per side; standard: 0"},
    {.name = "mask",
     .kind = KEY_OBJECT,
     .table = &keys_mask,
     .meaning = "solder mask over the outer copper; standard: none"},
};
TABLE(stackup, "a stackup", NULL);

static const struct key victim[] = {
    {.name = "noise_margin",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_VOLTAGE,
     .required = true,
     .meaning = "noise that the receiver stands"},
    {.name = "share",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_RATIO,
     .required = true,
     .meaning = "share of the noise margin that crosstalk may take"},
    {.name = "receiver",
     .kind = KEY_WORD,
     .words = keys_receivers,
     .meaning = "end of the receiver, seen from the aggressor's driver; standard: either"},
    {.name = "settling",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_TIME,
     .meaning = "time from the start of the last edge to the instant of sampling; standard: 0, "
                "every instant counts"},
};
TABLE(victim, "a victim", NULL);

static const struct key signal[] = {
    {.name = "name", .kind = KEY_TEXT, .meaning = "name in the document; standard: its identifier"},
    {.name = "note", .kind = KEY_TEXT, .meaning = "a remark of the author"},
    {.name = "swing",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_VOLTAGE,
     .required = true,
     .meaning = "step of the driver's EMF"},
    {.name = "edge",
     .kind = KEY_CODED,
     .required = true,
     .meaning = "time of an edge, one value or a range, with its levels in percent, such as "
                "\"1 ns .. 3 ns 10-90\""},
    {.name = "source",
     .kind = KEY_CODED,
     .required = true,
     .meaning = "resistance of the driver, one value or a range, such as \"20 ohm .. 40 ohm\""},
    {.name = "load",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_RESISTANCE,
     .required = true,
     .meaning = "resistance at the receiver, or open"},
    {.name = "load_capacitance",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_CAPACITANCE,
     .meaning = "capacitance at the receiver; standard: 0"},
    {.name = "victim",
     .kind = KEY_OBJECT,
     .table = &keys_victim,
     .meaning = "what the signal stands as a victim"},
    {.name = "bit_time",
     .kind = KEY_VALUE,
     .dimension = DIMENSION_TIME,
     .meaning = "least time between two edges; standard: a single edge"},
    {.name = "aggressors",
     .kind = KEY_WORD,
     .words = keys_aggressors,
     .meaning = "its lines beside a victim: on one side, on both, two on each; standard: 1"},
    {.name = "switching",
     .kind = KEY_WORD,
     .words = keys_switching,
     .meaning = "whether they switch together or each on its own; standard: together"},
};
TABLE(signal, "a signal", NULL);

static const struct key product[] = {
    {.name = "name", .kind = KEY_TEXT, .required = true, .meaning = "name of the product"},
    {.name = "stackup", .kind = KEY_NAME, .required = true, .meaning = "its board"},
    {.name = "note", .kind = KEY_TEXT, .meaning = "a remark of the author"},
};
TABLE(product, "a product", NULL);

#define SOURCES                                                                                    \
    {.name = "stackup",                                                                            \
     .kind = KEY_NAME,                                                                             \
     .meaning = "sets height, thickness, dk, df, mask and etch"},                                  \
        {.name = "aggressor",                                                                      \
         .kind = KEY_NAME,                                                                         \
         .meaning = "sets swing, edge, source, load, load_capacitance, bit_time, aggressors and "  \
                    "switching"},                                                                  \
    {                                                                                              \
        .name = "victim", .kind = KEY_NAME,                                                        \
        .meaning = "sets victim_source, victim_load, victim_load_capacitance, receiver, settling " \
                   "and the budget"                                                                \
    }

static const struct key given[] = {SOURCES};
TABLE(given, "what is given", "inputs of the model, each with its value");

static const struct key compare[] = {
    {.name = "stackup",
     .kind = KEY_TEXTS,
     .most = STUDY_MOST_VARIANTS,
     .meaning = "boards side by side"},
    {.name = "aggressor",
     .kind = KEY_TEXTS,
     .most = STUDY_MOST_VARIANTS,
     .meaning = "aggressors side by side"},
    {.name = "victim",
     .kind = KEY_TEXTS,
     .most = STUDY_MOST_VARIANTS,
     .meaning = "victims side by side"},
};
TABLE(compare, "what is compared", "inputs of the model, each with a list of values");

static const struct key chart[] = {
    {.name = "outputs",
     .kind = KEY_TEXTS,
     .required = true,
     .most = 8,
     .meaning = "outputs of one dimension in one chart"},
    {.name = "title", .kind = KEY_TEXT, .meaning = "standard: made from the outputs"},
    {.name = "x", .kind = KEY_WORD, .words = keys_scales, .meaning = "standard: as the sweep"},
    {.name = "y", .kind = KEY_WORD, .words = keys_scales, .meaning = "standard: linear"},
};
TABLE(chart, "a chart", NULL);

static const struct key reference[] = {
    {.name = "stackup", .kind = KEY_NAME, .meaning = "board of the reference"},
    {.name = "keep",
     .kind = KEY_WORD,
     .words = keys_kept,
     .meaning = "what the reference's traces have in common with the judged ones; standard: width"},
};
TABLE(reference, "a reference", "inputs of the model, each with one value");

static const struct key rule_table[] = {
    {.name = "rows",
     .kind = KEY_FREE,
     .required = true,
     .meaning = "one input with its list of values or ranges, or \"aggressor\" or \"victim\" with "
                "a list of signals"},
    {.name = "columns", .kind = KEY_FREE, .meaning = "another one, likewise"},
};
TABLE(rule_table, "a rule's table", NULL);

/* Beside the model's inputs; rows and columns are read as they come. */
static const struct key cells[] = {
    {.name = "aggressor", .kind = KEY_TEXTS, .meaning = "signals as aggressors"},
    {.name = "victim", .kind = KEY_TEXTS, .meaning = "signals as victims"},
};
TABLE(cells, "an axis of a rule's table", "inputs of the model, each with its values");

static const struct key rule[] = {
    {.name = "id",
     .kind = KEY_NAME,
     .required = true,
     .meaning = "identifier that stays over revisions"},
    {.name = "title", .kind = KEY_TEXT, .meaning = "title of the rule card"},
    {.name = "strength",
     .kind = KEY_WORD,
     .words = keys_strengths,
     .required = true,
     .meaning = "how binding it is"},
    {.name = "find",
     .kind = KEY_CODED,
     .required = true,
     .meaning = "\"smallest INPUT\" or \"largest INPUT\""},
    {.name = "so_that",
     .kind = KEY_CODED,
     .required = true,
     .meaning = "condition: \"OUTPUT <= VALUE\", \"<= budget\" or \"<= reference\"; also >="},
    {.name = "within",
     .kind = KEY_CODED,
     .meaning = "range searched and proven, such as \"0.1 mm .. 12 mm\"; standard: the sweep of "
                "the same input"},
    {.name = "grid",
     .kind = KEY_CODED,
     .required = true,
     .meaning = "step that the bound is rounded to, such as \"0.05 mm\""},
    {.name = "given",
     .kind = KEY_OBJECT,
     .table = &keys_given,
     .meaning = "in place of what the chapter gives"},
    {.name = "reference",
     .kind = KEY_OBJECT,
     .table = &keys_reference,
     .meaning = "the case that must not be exceeded"},
    {.name = "tolerance",
     .kind = KEY_WORD,
     .words = keys_tolerances,
     .meaning = "judged at the adverse corners or at nominal values; standard: corners"},
    {.name = "table",
     .kind = KEY_OBJECT,
     .table = &keys_rule_table,
     .meaning = "the same bound over one or two more inputs"},
    {.name = "applies_to", .kind = KEY_TEXT, .meaning = "to what the rule applies"},
    {.name = "why", .kind = KEY_TEXT, .meaning = "the reason"},
    {.name = "check", .kind = KEY_TEXT, .meaning = "how it is checked"},
};
TABLE(rule, "a rule", NULL);

static const struct key chapter[] = {
    {.name = "id",
     .kind = KEY_NAME,
     .required = true,
     .meaning = "identifier; names the chapter's files"},
    {.name = "title", .kind = KEY_TEXT, .meaning = "standard: the model's title"},
    {.name = "question",
     .kind = KEY_TEXT,
     .required = true,
     .meaning = "what the chapter answers, as one sentence"},
    {.name = "note", .kind = KEY_TEXT, .meaning = "a remark of the author"},
    {.name = "model",
     .kind = KEY_CODED,
     .required = true,
     .meaning = "name of the model that computes the answer"},
    {.name = "given",
     .kind = KEY_OBJECT,
     .table = &keys_given,
     .meaning = "board, signals and inputs that stay"},
    {.name = "vary",
     .kind = KEY_FREE,
     .required = true,
     .meaning = "one input with a sweep or a list of values"},
    {.name = "compare",
     .kind = KEY_OBJECT,
     .table = &keys_compare,
     .meaning = "what is set side by side, one or two keys"},
    {.name = "show",
     .kind = KEY_FREE,
     .required = true,
     .meaning = "the charts, such as [\"worst_peak\"]"},
    {.name = "limits", .kind = KEY_FREE, .meaning = "lines drawn in the charts, by output"},
    {.name = "table",
     .kind = KEY_FREE,
     .meaning = "values of the varied input for the table's rows; standard: some of the points"},
    {.name = "practice",
     .kind = KEY_TEXTS,
     .most = 20,
     .meaning = "sayings of the trade, quoted as such"},
    {.name = "rules",
     .kind = KEY_OBJECTS,
     .table = &keys_rule,
     .most = 100,
     .meaning = "the rules that follow"},
};
TABLE(chapter, "a chapter", NULL);

static const struct key study[] = {
    {.name = "document",
     .kind = KEY_OBJECT,
     .table = &keys_document,
     .required = true,
     .meaning = "the cover"},
    {.name = "stackups",
     .kind = KEY_MAP,
     .table = &keys_stackup,
     .most = 50,
     .meaning = "boards as the fab makes them"},
    {.name = "signals",
     .kind = KEY_MAP,
     .table = &keys_signal,
     .most = 100,
     .meaning = "signal classes"},
    {.name = "products",
     .kind = KEY_MAP,
     .table = &keys_product,
     .most = 100,
     .meaning = "which product has which board"},
    {.name = "previous",
     .kind = KEY_TEXT,
     .meaning = "rules.json of the last issue, from the study's folder"},
    {.name = "chapters",
     .kind = KEY_OBJECTS,
     .table = &keys_chapter,
     .required = true,
     .most = 100,
     .meaning = "the chapters, one question each"},
};
TABLE(study, "the study", NULL);

const struct key_table *const keys_all[] = {
    &keys_study,  &keys_document, &keys_stackup,   &keys_layer,      &keys_mask,  &keys_smallest,
    &keys_signal, &keys_victim,   &keys_product,   &keys_chapter,    &keys_given, &keys_compare,
    &keys_chart,  &keys_rule,     &keys_reference, &keys_rule_table,
};
const size_t keys_all_count = COUNT(keys_all);

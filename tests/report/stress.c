#include "stress.h"

#include "groundrules/text.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* ---- the study's text ---- */

static const char *const words[] = {
    "valve",    "controller", "of",        "the",     "northern",     "orchard",  "with",
    "buffered", "clock",      "tree",      "and",     "differential", "sampling", "of",
    "moisture", "under",      "condensed", "morning", "temperature",  "readings", "for",
};
enum { WORDS = sizeof words / sizeof *words };

/* `length` characters or a few more of words, from the one of `start` on. */
static void prose(struct text *text, const char *lead, size_t start, size_t length) {
    size_t written = strlen(lead);
    text_add(text, lead);
    for (size_t i = start; written < length; i++) {
        const char *word = words[i % WORDS];
        text_format(text, "%s%s", written > 0 ? " " : "", word);
        written += strlen(word) + 1;
    }
}

static void named(struct text *text, const char *key, const char *lead, size_t start,
                  size_t length) {
    text_format(text, "\"%s\": \"", key);
    prose(text, lead, start, length);
    text_add(text, "\"");
}

static void document(struct text *text, const struct stress *stress) {
    text_format(text, "{\"document\": {\"page\": \"%s\", ", stress->letter ? "letter" : "A4");
    named(text, "number", "PO-LR-", 0, stress->name / 2);
    text_add(text, ", ");
    named(text, "title", "Ground and spacing", 0, stress->name);
    text_add(text, ", ");
    named(text, "subtitle", "Rules for boards", 3, stress->name);
    text_add(text, ", \"revision\": \"B\", ");
    named(text, "status", "for review", 4, stress->name / 2);
    text_add(text, ", ");
    named(text, "organisation", "Pemberwick Orchard Instruments", 9, stress->name);
    text_add(text, ", \"date\": \"2026-11-30\", \"owner\": \"M. Larkspur\", \"reviewers\": [");
    for (size_t i = 0; i < 8; i++)
        text_format(text, "%s\"T. Bramble the %zu., layout\"", i > 0 ? ", " : "", i + 1);
    text_add(text, "]},\n");
}

static void boards(struct text *text, const struct stress *stress) {
    text_add(text, "\"stackups\": {");
    for (size_t b = 0; b < stress->boards; b++) {
        char lead[32];
        snprintf(lead, sizeof lead, "Board %zu", b + 1);
        text_format(text, "%s\"b%zu\": {", b > 0 ? ",\n" : "", b + 1);
        named(text, "name", lead, b, stress->name);
        text_add(text, ", ");
        named(text, "fab", "sheet", b + 2, stress->name);
        text_add(text, ", \"layers\": [{\"copper\": \"35 um\", \"role\": \"signal\", ");
        named(text, "name", "top", b + 5, stress->name);
        text_format(text, "}, {\"dielectric\": \"%g mm +15 %% -10 %%\", \"dk\": \"4.3 ± 0.2\", ",
                    0.2 + 0.13 * (double)b);
        named(text, "name", "core", b + 1, stress->name);
        text_add(text, "}, {\"copper\": \"35 um\", \"role\": \"plane\"}], \"smallest\": "
                       "{\"width\": \"0.15 mm\", \"gap\": \"0.15 mm\", \"drill\": \"0.3 mm\"}}");
    }
    text_add(text, "},\n\"products\": {");
    for (size_t b = 0; b < stress->boards; b++) {
        text_format(text, "%s\"P%zu\": {\"stackup\": \"b%zu\", ", b > 0 ? ", " : "", b + 1, b + 1);
        named(text, "name", "Quince", b + 7, stress->name);
        text_add(text, "}");
    }
    text_add(text, "},\n");
}

static void signals(struct text *text, const struct stress *stress) {
    text_add(text, "\"signals\": {");
    for (size_t s = 0; s < stress->classes; s++) {
        char lead[32];
        snprintf(lead, sizeof lead, "Class %zu", s + 1);
        text_format(text, "%s\"s%zu\": {", s > 0 ? ",\n" : "", s + 1);
        named(text, "name", lead, s, stress->name);
        text_add(text, ", \"swing\": \"3.3 V\", \"edge\": \"1.2 ns .. 3 ns 10-90\", \"source\": "
                       "\"25 ohm .. 45 ohm\", \"load\": \"open\", \"load_capacitance\": \"5 pF\", "
                       "\"victim\": {\"noise_margin\": \"0.8 V\", \"share\": \"40 %\", "
                       "\"receiver\": \"either\"}}");
    }
    text_add(text, "},\n");
}

static void class_list(struct text *text, size_t count) {
    for (size_t s = 0; s < count; s++)
        text_format(text, "%s\"s%zu\"", s > 0 ? ", " : "", s + 1);
}

static void rule(struct text *text, const struct stress *stress, size_t c, size_t r) {
    char lead[64];
    snprintf(lead, sizeof lead, "Rule %zu of chapter %zu", r + 1, c + 1);
    text_format(text, "%s{\"id\": \"C%zu-%zu\", \"strength\": \"must\", ", r > 0 ? ",\n  " : "",
                c + 1, r + 1);
    named(text, "title", lead, r, stress->name);
    text_add(text, ", \"find\": \"smallest gap\", \"so_that\": \"worst_peak <= budget\", \"grid\": "
                   "\"0.05 mm\", ");
    named(text, "why", "Because", r, stress->note);
    text_add(text, ", ");
    named(text, "check", "By looking", r + 1, stress->note);
    if (r == 0 && stress->classes > 1) {
        text_add(text, ", \"table\": {\"rows\": {\"aggressor\": [");
        class_list(text, stress->classes);
        text_add(text, "]}, \"columns\": {\"victim\": [");
        class_list(text, stress->classes);
        text_add(text, "]}}");
    }
    text_add(text, "}");
}

static void chapter(struct text *text, const struct stress *stress, size_t c) {
    char lead[32];
    snprintf(lead, sizeof lead, "Chapter %zu", c + 1);
    text_format(text, "%s{\"id\": \"c%zu\", ", c > 0 ? ",\n" : "", c + 1);
    named(text, "title", lead, c, stress->name);
    text_add(text, ", ");
    named(text, "question", "How far", c, stress->note);
    text_add(text, ", ");
    named(text, "note", "A remark", c, stress->note);
    text_add(text, ", \"model\": \"coupled-traces\", \"given\": {\"aggressor\": \"s1\", "
                   "\"victim\": \"s1\", \"width\": \"0.3 mm\", \"length\": \"up to 100 mm\"}, "
                   "\"vary\": {\"gap\": \"0.2 mm .. 12 mm in 20 points log\"}, \"compare\": "
                   "{\"stackup\": [");
    for (size_t b = 0; b < stress->boards && b < STUDY_MOST_VARIANTS; b++)
        text_format(text, "%s\"b%zu\"", b > 0 ? ", " : "", b + 1);
    text_add(text, "]}, \"show\": [{\"outputs\": [\"worst_peak\"], \"y\": \"log\", ");
    named(text, "title", "Worst peak", c, stress->name);
    text_add(text, "}], \"limits\": {\"worst_peak\": \"150 mV\"}, \"table\": [\"0.2 mm\", \"1 "
                   "mm\", \"3 mm\", \"12 mm\"], \"rules\": [\n  ");
    for (size_t r = 0; r < stress->rules; r++)
        rule(text, stress, c, r);
    text_add(text, "]}");
}

static bool read(const struct stress *stress, struct arena *arena, struct study *study,
                 struct error *error) {
    struct text text = text_start(arena, error);
    document(&text, stress);
    boards(&text, stress);
    signals(&text, stress);
    text_add(&text, "\"chapters\": [");
    for (size_t c = 0; c < stress->chapters; c++)
        chapter(&text, stress, c);
    text_add(&text, "]}\n");
    const char *whole = text_end(&text);
    struct study_problems problems = {0};
    if (whole == NULL)
        return false;
    if (study_read_text("stress.json", whole, strlen(whole), arena, study, &problems, error))
        return true;
    for (size_t i = 0; i < problems.count; i++)
        error_set(error, ERROR_INPUT, "%u:%u: %s: %s", problems.items[i].line,
                  problems.items[i].column, problems.items[i].path, problems.items[i].message);
    return false;
}

/* ---- what would have been computed ---- */

/* Falls with the gap; the boards' curves end close together. */
static double peak(double gap, size_t variant) {
    return 0.9 / (1 + pow(gap / (0.4e-3 + 0.02e-3 * (double)variant), 1.4));
}

static bool fill_curves(const struct study_chapter *asked, struct arena *arena,
                        struct guideline_chapter *chapter, struct error *error) {
    size_t points = asked->vary.point_count;
    struct guideline_curve *curves =
        arena_new(arena, asked->variant_count, struct guideline_curve, error);
    double *values = arena_new(arena, 3 * points * asked->variant_count, double, error);
    unsigned *flags = arena_new(arena, points, unsigned, error);
    if (curves == NULL || values == NULL || flags == NULL)
        return false;
    for (size_t v = 0; v < asked->variant_count; v++) {
        double *y = values + 3 * points * v, *low = y + points, *high = low + points;
        for (size_t i = 0; i < points; i++) {
            y[i] = peak(asked->vary.points[i], v);
            low[i] = 0.93 * y[i];
            high[i] = 1.08 * y[i];
        }
        curves[v] =
            (struct guideline_curve){v, asked->charts[0].outputs[0], y, low, high, flags, 1e-4};
    }
    chapter->curves = curves;
    chapter->curve_count = asked->variant_count;
    return true;
}

static struct guideline_finding finding(const struct study_rule *rule, size_t k) {
    static const enum guideline_status kinds[] = {GUIDELINE_FOUND,          GUIDELINE_FOUND,
                                                  GUIDELINE_MET_EVERYWHERE, GUIDELINE_FOUND,
                                                  GUIDELINE_CANNOT_BE_MET,  GUIDELINE_FOUND};
    long multiple = 20 + 7 * (long)(k % 23);
    struct guideline_finding made = {.status = kinds[k % 6],
                                     .multiple = multiple,
                                     .value = rule->grid * (double)multiple,
                                     .limit = 0.32,
                                     .worst = 0.31,
                                     .solutions = 400 + k};
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        made.worst_inputs[i] = rule->variants[0].settings[i].range.to;
    made.worst_inputs[rule->find] = made.value;
    return made;
}

static bool fill_rule(const struct study_rule *rule, size_t seed, struct arena *arena,
                      struct guideline_rule *filled, struct error *error) {
    size_t cells = rule->variant_count * rule->rows.count *
                   (rule->columns.count > 0 ? rule->columns.count : 1);
    struct guideline_finding *findings =
        arena_new(arena, rule->variant_count + cells, struct guideline_finding, error);
    if (findings == NULL)
        return false;
    for (size_t i = 0; i < rule->variant_count + cells; i++)
        findings[i] = finding(rule, seed + i);
    *filled =
        (struct guideline_rule){rule, findings, cells > 0 ? findings + rule->variant_count : NULL};
    return true;
}

static bool fill_chapter(const struct study_chapter *asked, struct arena *arena,
                         struct guideline_chapter *chapter, struct error *error) {
    struct guideline_rule *rules =
        arena_new(arena, asked->rule_count, struct guideline_rule, error);
    *chapter = (struct guideline_chapter){.chapter = asked, .rules = rules};
    if (rules == NULL || !fill_curves(asked, arena, chapter, error))
        return false;
    for (size_t r = 0; r < asked->rule_count; r++)
        if (!fill_rule(&asked->rules[r], 5 * r, arena, &rules[r], error))
            return false;
    return true;
}

bool stress_make(const struct stress *stress, struct arena *arena, struct guideline *guideline,
                 struct error *error) {
    struct study *study = arena_new(arena, 1, struct study, error);
    if (study == NULL || !read(stress, arena, study, error))
        return false;
    struct guideline_chapter *chapters =
        arena_new(arena, study->chapter_count, struct guideline_chapter, error);
    *guideline = (struct guideline){.study = study, .chapters = chapters};
    memset(guideline->fingerprint, '0', sizeof guideline->fingerprint - 1);
    for (size_t c = 0; chapters != NULL && c < study->chapter_count; c++)
        if (!fill_chapter(&study->chapters[c], arena, &chapters[c], error))
            return false;
    return chapters != NULL;
}

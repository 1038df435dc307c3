/* 1. Samples of the found input over the whole of `within`, on the grid, from the permitted end
 * inwards, each judged by its worst case until one fails.  Local maxima on the way that come near
 * the limit are climbed; one that fails moves the first failure there.
 * 2. Every bad case met is kept as a witness.  A multiple of the grid at which a witness fails is
 * no answer, and one solution says so: the candidate is the first multiple outwards of the failure
 * at which all witnesses hold.
 * 3. Proof of the candidate with the full search; if it fails there are new witnesses and a new
 * candidate further out.
 * 4. Proof of what it permits: the witnesses at every sample beyond and between the nearest two,
 * and the full search where that comes near the limit.  A failure moves the candidate past it: what
 * holds further in is an island and never the answer. */

#include "find.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { MOST_SAMPLES = 64, MOST_WITNESSES = 16 };
/* Badness above which a hump is climbed, a sample beyond the bound proven, a case kept as witness.
 */
static const double NEAR_HUMP = -0.25, NEAR_PROOF = -0.15, NEAR_WITNESS = -0.5, QUITE_FAR = -0.8,
                    VERY_FAR = -0.96;
/* What lies on the limit holds; rounding must not decide. */
static const double ROUNDING = 1e-9;

struct finder {
    const struct study_rule *rule;
    const struct judge *judge;
    const struct region *region;
    long first, last; /* multiples of the grid: first = the permitted end, last = the other end */
    int inward;       /* +1 or -1: from first towards last */
    long samples[MOST_SAMPLES]; /* from first to last */
    struct worst worst[MOST_SAMPLES];
    bool proven[MOST_SAMPLES];
    bool wavy;            /* the found input makes resonances */
    size_t count, judged; /* judged: samples up to the first that fails */
    struct worst witnesses[MOST_WITNESSES];
    size_t witness_count, oldest;
    struct worst hint; /* the worst case seen last */
    bool has_hint;
    struct worst stop; /* what fails one step inwards of the candidate */
};

double find_fab_smallest(const struct model *model, size_t input,
                         const struct study_stackup *stackup) {
    const char *name = model->inputs[input].name;
    if (stackup == NULL)
        return 0.0;
    if (strcmp(name, "gap") == 0)
        return stackup->smallest_gap;
    if (strcmp(name, "width") == 0 || strcmp(name, "victim_width") == 0 ||
        strcmp(name, "between_width") == 0)
        return stackup->smallest_width;
    if (strcmp(name, "via_diameter") == 0)
        return stackup->smallest_drill;
    return 0.0;
}

static bool holds(const struct worst *worst) {
    return worst->verdict.badness <= ROUNDING;
}

/* ---- witnesses ---- */

static bool same_case(const struct finder *finder, const double *a, const double *b) {
    for (size_t i = 0; i < finder->region->axis_count; i++) {
        const struct region_axis *axis = &finder->region->axes[i];
        if (fabs(a[axis->input] - b[axis->input]) > 0.01 * fabs(b[axis->input]))
            return false;
    }
    return true;
}

static void keep_witness(struct finder *finder, const struct worst *worst) {
    for (size_t i = 0; i < finder->witness_count; i++)
        if (same_case(finder, finder->witnesses[i].inputs, worst->inputs)) {
            finder->witnesses[i] = *worst;
            return;
        }
    if (finder->witness_count < MOST_WITNESSES) {
        finder->witnesses[finder->witness_count++] = *worst;
        return;
    }
    finder->witnesses[finder->oldest] = *worst;
    finder->oldest = (finder->oldest + 1) % MOST_WITNESSES;
}

/* The worst of all witnesses at this multiple; mild when there is none. */
static bool worst_witness(const struct finder *finder, long multiple, struct worst *worst,
                          struct error *error) {
    worst->verdict = (struct verdict){.badness = -INFINITY};
    for (size_t i = 0; i < finder->witness_count; i++) {
        struct worst tried = finder->witnesses[i];
        tried.inputs[finder->rule->find] = (double)multiple * finder->rule->grid;
        if (!judge_case(finder->judge, tried.inputs, &tried.verdict, error))
            return false;
        if (i == 0 || tried.verdict.badness > worst->verdict.badness)
            *worst = tried;
    }
    return true;
}

static bool search_at(struct finder *finder, long multiple, enum worst_effort effort,
                      struct worst *worst, struct error *error) {
    struct region region = *finder->region;
    struct worst_cases found;
    region.base[finder->rule->find] = (double)multiple * finder->rule->grid;
    if (!worst_of(finder->judge, &region, effort, finder->has_hint ? &finder->hint : NULL, &found,
                  error))
        return false;
    *worst = finder->hint = found.cases[0];
    finder->has_hint = true;
    for (size_t i = found.count; i > 0; i--)
        if (found.cases[i - 1].verdict.badness > NEAR_WITNESS)
            keep_witness(finder, &found.cases[i - 1]);
    return true;
}

/* Witnesses first: a failure needs no search. */
static bool probe_at(struct finder *finder, long multiple, struct worst *worst,
                     struct error *error) {
    struct worst witness;
    if (!worst_witness(finder, multiple, &witness, error))
        return false;
    if (!holds(&witness)) {
        *worst = witness;
        return true;
    }
    if (!search_at(finder, multiple, WORST_PROBE, worst, error))
        return false;
    if (witness.verdict.badness > worst->verdict.badness)
        *worst = witness;
    return true;
}

/* ---- from the permitted end inwards ---- */

/* Logarithmic where the range spans much; always on the grid, no value twice.  Inputs that make
 * resonances are sampled more finely. */
static void place_samples(struct finder *finder) {
    const char *name = finder->judge->solver->model->inputs[finder->rule->find].name;
    bool wavy = strcmp(name, "length") == 0 || strcmp(name, "edge") == 0;
    finder->wavy = wavy;
    double from = (double)finder->first, to = (double)finder->last;
    double spread = fabs(log(fmax(from, to) / fmax(1.0, fmin(from, to))));
    size_t wanted = spread > 1.0 ? 5 + (size_t)((wavy ? 10.0 : 4.0) * spread) : wavy ? 15 : 8;
    if (wanted > MOST_SAMPLES)
        wanted = MOST_SAMPLES;
    for (size_t i = 0; i < wanted; i++) {
        double part = (double)i / (double)(wanted - 1);
        double at = spread > 1.0 && fmin(from, to) > 0.0 ? from * pow(to / from, part)
                                                         : from + (to - from) * part;
        long multiple = i + 1 == wanted ? finder->last : lround(at);
        if (finder->count == 0 || finder->samples[finder->count - 1] != multiple)
            finder->samples[finder->count++] = multiple;
    }
}

/* A hump between samples a and b that comes near the limit, seen at `top`: its top by halving the
 * grid on both sides. */
static bool climb_hump(struct finder *finder, long a, long b, long *top, struct worst *worst,
                       struct error *error) {
    while (labs(b - a) > 2 && holds(worst)) {
        long left = *top - (*top - a) / 2, right = *top + (b - *top) / 2;
        struct worst at_left = *worst, at_right = *worst;
        if ((left != *top && !probe_at(finder, left, &at_left, error)) ||
            (right != *top && !probe_at(finder, right, &at_right, error)))
            return false;
        if (left != *top && at_left.verdict.badness > worst->verdict.badness) {
            b = *top, *top = left, *worst = at_left;
        } else if (right != *top && at_right.verdict.badness > worst->verdict.badness) {
            a = *top, *top = right, *worst = at_right;
        } else {
            if ((left == a || left == *top) && (right == b || right == *top))
                break;
            a = left, b = right;
        }
    }
    return true;
}

/* Sample i is judged, and so are its neighbours as far as there are any. */
static bool is_hump(const struct finder *finder, size_t i) {
    double here = finder->worst[i].verdict.badness;
    return here > NEAR_HUMP && holds(&finder->worst[i]) &&
           (i == 0 || here >= finder->worst[i - 1].verdict.badness) &&
           (i + 1 == finder->count || here >= finder->worst[i + 1].verdict.badness);
}

static bool hump_fails(struct finder *finder, size_t i, long *bad, struct error *error) {
    long top = finder->samples[i];
    struct worst worst = finder->worst[i];
    if (!is_hump(finder, i))
        return true;
    if (!climb_hump(finder, finder->samples[i > 0 ? i - 1 : i],
                    finder->samples[i + 1 < finder->count ? i + 1 : i], &top, &worst, error))
        return false;
    if (holds(&worst))
        finder->worst[i] = worst;
    else
        *bad = top, finder->stop = worst;
    return true;
}

/* Far from the limit, where what is found makes no resonances, every second sample is left out, and
 * very far three of four. */
static void thin_out(struct finder *finder, size_t i) {
    double badness = finder->worst[i].verdict.badness;
    size_t out = badness < VERY_FAR ? 3 : badness < QUITE_FAR ? 1 : 0;
    if (finder->wavy || i == 0 || !(badness >= finder->worst[i - 1].verdict.badness))
        return;
    while (out > 0 && i + 1 + out >= finder->count)
        out--;
    memmove(&finder->samples[i + 1], &finder->samples[i + 1 + out],
            (finder->count - i - 1 - out) * sizeof finder->samples[0]);
    finder->count -= out;
}

/* *bad: the first multiple seen to fail; unchanged when none does. */
static bool first_failure(struct finder *finder, long *bad, struct error *error) {
    const long none = *bad;
    for (size_t i = 0; i < finder->count; i++) {
        if (!probe_at(finder, finder->samples[i], &finder->worst[i], error))
            return false;
        finder->judged = i + 1;
        thin_out(finder, i);
        if (i > 0 && !hump_fails(finder, i - 1, bad, error))
            return false;
        if (*bad == none && i + 1 == finder->count && !hump_fails(finder, i, bad, error))
            return false;
        if (*bad == none && !holds(&finder->worst[i]))
            *bad = finder->samples[i], finder->stop = finder->worst[i];
        if (*bad != none)
            return true;
    }
    return true;
}

/* ---- candidates ---- */

static bool is_beyond(const struct finder *finder, long multiple, long other) {
    return finder->inward < 0 ? multiple > other : multiple < other;
}

/* From a multiple at which a witness fails: the next outwards at which all hold; *found false: not
 * even the permitted end. */
static bool outwards(struct finder *finder, long bad, long *candidate, bool *found,
                     struct error *error) {
    struct worst worst;
    long good = bad;
    for (long step = 1; good == bad; step *= 2) {
        long next = bad - finder->inward * step;
        if (is_beyond(finder, next, finder->first))
            next = finder->first;
        *found = next != bad;
        if (!*found)
            return true;
        if (!worst_witness(finder, next, &worst, error))
            return false;
        good = next;
        if (!holds(&worst))
            bad = next, finder->stop = worst;
    }
    while (labs(bad - good) > 1) {
        long middle = good + (bad - good) / 2;
        if (!worst_witness(finder, middle, &worst, error))
            return false;
        if (holds(&worst))
            good = middle;
        else
            bad = middle, finder->stop = worst;
    }
    *candidate = good;
    return true;
}

struct proof {
    long failed; /* where something failed */
    bool held;
    struct worst worst; /* of all that was judged, or what failed */
};

static void note(struct proof *proof, long multiple, const struct worst *worst) {
    if (holds(worst) && worst->verdict.badness <= proof->worst.verdict.badness)
        return;
    proof->worst = *worst;
    if (!holds(worst)) {
        proof->held = false;
        proof->failed = multiple;
    }
}

static bool prove_sample(struct finder *finder, size_t i, struct proof *proof,
                         struct error *error) {
    struct worst worst;
    if (!worst_witness(finder, finder->samples[i], &worst, error))
        return false;
    if (worst.verdict.badness > finder->worst[i].verdict.badness)
        finder->worst[i] = worst;
    if (holds(&finder->worst[i]) && !finder->proven[i] &&
        finder->worst[i].verdict.badness > NEAR_PROOF) {
        if (!search_at(finder, finder->samples[i], WORST_FULL, &worst, error))
            return false;
        finder->proven[i] = true;
        if (worst.verdict.badness > finder->worst[i].verdict.badness)
            finder->worst[i] = worst;
    }
    note(proof, finder->samples[i], &finder->worst[i]);
    return true;
}

/* The next multiple outwards, and half way to the next sample. */
static bool prove_nearby(struct finder *finder, long candidate, long next, struct proof *proof,
                         struct error *error) {
    long beside = candidate - finder->inward, between = candidate + (next - candidate) / 2;
    struct worst worst;
    if (is_beyond(finder, beside, next))
        return true;
    if (!worst_witness(finder, beside, &worst, error))
        return false;
    note(proof, beside, &worst);
    if (!proof->held || between == candidate || between == next)
        return true;
    if (!probe_at(finder, between, &worst, error))
        return false;
    note(proof, between, &worst);
    return true;
}

/* Everything that `candidate` permits. */
static bool prove(struct finder *finder, long candidate, struct proof *proof, struct error *error) {
    *proof = (struct proof){.held = true, .worst = {.verdict = {.badness = -INFINITY}}};
    struct worst worst;
    size_t beyond = 0;
    while (beyond < finder->judged && is_beyond(finder, finder->samples[beyond], candidate))
        beyond++;
    bool probed = beyond < finder->judged && finder->samples[beyond] == candidate;
    bool far = probed && finder->judge->reference == NULL &&
               finder->worst[beyond].verdict.badness < WORST_IS_FAR;
    if (!search_at(finder, candidate, far ? WORST_FAR : WORST_FULL, &worst, error))
        return false;
    note(proof, candidate, &worst);
    if (proof->held && beyond > 0 &&
        !prove_nearby(finder, candidate, finder->samples[beyond - 1], proof, error))
        return false;
    for (size_t i = beyond; i > 0 && proof->held; i--)
        if (!prove_sample(finder, i - 1, proof, error))
            return false;
    return true;
}

static void record(const struct finder *finder, const struct worst *worst,
                   struct guideline_finding *finding) {
    finding->worst = worst->verdict.value;
    finding->limit = worst->verdict.limit;
    finding->flags = worst->verdict.flags;
    finding->error =
        worst->verdict.value != 0.0 ? worst->verdict.error / fabs(worst->verdict.value) : 0.0;
    double beyond = finder->rule->condition.at_most ? finding->worst - finding->limit
                                                    : finding->limit - finding->worst;
    finding->margin = -beyond / fmax(fabs(finding->limit), 1e-30);
    memcpy(finding->worst_inputs, worst->inputs, sizeof finding->worst_inputs);
    struct error ignored = {0}; /* these inputs were solved, so they resolve */
    model_resolve(finder->judge->solver->model, finding->worst_inputs, &ignored);
}

/* `region`: what is given, and a width that keeps the reference's impedance. */
static bool below_fab(const struct finder *finder, const struct study_variant *variant,
                      double fab) {
    const struct model *model = finder->judge->solver->model;
    for (size_t i = 0; i < model->input_count; i++) {
        double smallest = find_fab_smallest(model, i, variant->stackup);
        double value = finder->region->base[i];
        if (i != finder->rule->find && smallest > 0.0 && value > 0.0 &&
            variant->settings[i].origin != STUDY_STANDARD && value < smallest * (1.0 - 1e-9))
            return true;
    }
    return !finder->rule->find_smallest && fab > 0.0 &&
           finder->rule->within.to < fab * (1.0 - 1e-9);
}

/* Nothing on the grid that the fab can make holds; would something that it cannot? */
static bool only_below_fab(struct finder *finder, bool *below, struct error *error) {
    const struct study_rule *rule = finder->rule;
    long from = quantity_grid_up(rule->within.from, rule->grid);
    struct worst worst;
    *below = false;
    if (rule->find_smallest || from >= finder->first)
        return true;
    if (!probe_at(finder, from, &worst, error))
        return false;
    *below = holds(&worst);
    return true;
}

static bool refuse(struct finder *finder, struct guideline_finding *finding, struct error *error) {
    struct worst worst;
    bool below;
    if (!only_below_fab(finder, &below, error))
        return false;
    finding->status = below ? GUIDELINE_BELOW_FAB : GUIDELINE_CANNOT_BE_MET;
    if (below)
        return true;
    /* The witness that fails at the permitted end need not be the worst there. */
    if (!search_at(finder, finder->first, WORST_PROBE, &worst, error))
        return false;
    if (finder->stop.verdict.badness > worst.verdict.badness)
        worst = finder->stop;
    record(finder, &worst, finding);
    return true;
}

static bool answer(struct finder *finder, struct guideline_finding *finding, struct error *error) {
    const long none = finder->last + finder->inward;
    long bad = none, candidate = finder->last;
    bool found = true;
    struct proof proof;
    if (!first_failure(finder, &bad, error))
        return false;
    while (found) {
        if (bad != none && !outwards(finder, bad, &candidate, &found, error))
            return false;
        if (!found)
            break;
        if (!prove(finder, candidate, &proof, error))
            return false;
        if (proof.held)
            break;
        bad = proof.failed;
        finder->stop = proof.worst;
    }
    if (!found)
        return refuse(finder, finding, error);
    finding->status = candidate == finder->last ? GUIDELINE_MET_EVERYWHERE : GUIDELINE_FOUND;
    finding->multiple = candidate;
    finding->value = (double)candidate * finder->rule->grid;
    record(finder, &proof.worst, finding);
    if (finding->status == GUIDELINE_FOUND)
        finding->nearest = finder->stop.verdict.value;
    return true;
}

static double shortest_edge(const struct study_rule *rule, const struct region *region) {
    size_t edge = model_input_index(region->model, "edge");
    if (edge >= region->model->input_count)
        return 0.0;
    double shortest = rule->find == edge ? rule->within.from : region->base[edge];
    for (size_t i = 0; i < region->axis_count; i++)
        if (region->axes[i].input == edge)
            shortest = region->axes[i].low;
    return shortest;
}

bool find_bound(const struct study_rule *rule, const struct study_variant *variant,
                struct judge *judge, const struct region *region, struct guideline_finding *finding,
                struct error *error) {
    struct finder *finder = calloc(1, sizeof *finder);
    struct guideline_finding made = {
        .worst = NAN, .limit = NAN, .nearest = NAN, .margin = NAN, .value = NAN};
    if (finder == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    *finder = (struct finder){.rule = rule, .judge = judge, .region = region};
    solver_expect(judge->solver, shortest_edge(rule, region));
    made.fab_smallest = find_fab_smallest(judge->solver->model, rule->find, variant->stackup);
    double from = rule->within.from, to = rule->within.to;
    if (made.fab_smallest > from)
        from = made.fab_smallest;
    long low = quantity_grid_up(from, rule->grid), high = quantity_grid_down(to, rule->grid);
    bool ok = true;
    if (below_fab(finder, variant, made.fab_smallest) || low > high) {
        made.status = GUIDELINE_BELOW_FAB;
    } else {
        finder->first = rule->find_smallest ? high : low;
        finder->last = rule->find_smallest ? low : high;
        finder->inward = rule->find_smallest ? -1 : 1;
        place_samples(finder);
        ok = answer(finder, &made, error);
    }
    made.solutions = judge->solver->solved;
    free(finder);
    if (ok)
        *finding = made;
    return ok;
}

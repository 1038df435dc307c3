/* The stated errors of lossless responses attacked: random boards, ends and runs, prepared for a
 * shortest edge and asked for longer ones, against long responses of an edge so many times as
 * short.  Slow; by hand.
 * usage: attack_response PROBLEMS CONDUCTORS [SEED [FINER]] */
#include "groundrules/line.h"
#include "groundrules/section.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

enum { EDGES = 4, KINDS = 4 };
/* Of the EMF: peaks below it are counted apart. */
static const double VISIBLE = 1e-4, LARGE = 0.05;
static const char *const kind_names[KINDS] = {"peak", "free", "clocked", "settled"};

struct count {
    size_t asked, unsure, uncovered, visible, visible_uncovered, visible_large;
    double excess_of_emf, excess_of_value; /* the most beyond what is stated */
};

struct answer {
    double value[KINDS][2], error[KINDS][2]; /* V per volt, near and far end */
};

struct question {
    double edge, bit_time, settling;
};

static double draw(uint64_t *seed) {
    *seed = *seed * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
    return (double)(*seed >> 11) / 9007199254740992.0;
}

static double between(double low, double high, uint64_t *seed) {
    return low * pow(high / low, draw(seed));
}

static bool draw_section(size_t count, struct line_problem *problem, uint64_t *seed,
                         struct error *error) {
    struct section_problem section = {
        .height = between(1e-4, 1.6e-3, seed), .dk = 2 + 3 * draw(seed), .count = count};
    struct section_solution solution;
    double left = 0;
    for (size_t k = 0; k < count; k++) {
        double width = between(1e-4, 1e-3, seed);
        section.conductors[k] =
            (struct section_conductor){.left = left, .width = width, .thickness = 3.5e-5};
        left += width + between(1e-4, 1e-2, seed);
    }
    if (!section_solve_once(&section, &solution, error))
        return false;
    for (size_t i = 0; i < count * count; i++) {
        problem->inductance[i] = solution.inductance[i];
        problem->capacitance[i] = solution.capacitance[i];
    }
    return true;
}

static struct line_end draw_end(bool far, uint64_t *seed) {
    struct line_end end = {.resistance = between(5, 500, seed)};
    if (far && draw(seed) < 0.5)
        end.resistance = INFINITY;
    if (draw(seed) < (far ? 0.85 : 0.3))
        end.capacitance = between(2e-13, 5e-11, seed);
    return end;
}

/* Half of the victims are turned round: their receiver is at the near end. */
static void draw_ends(struct line_problem *problem, size_t victim, uint64_t *seed) {
    for (size_t k = 0; k < problem->count; k++) {
        problem->near[k] = draw_end(false, seed);
        problem->far[k] = draw_end(true, seed);
        problem->near[k].emf = k == victim ? 0 : draw(seed) < 0.3 ? -1 : draw(seed) < 0.7 ? 1 : 0;
    }
    problem->near[victim == 0 ? 1 : 0].emf = 1;
    if (draw(seed) < 0.5) {
        struct line_end kept = problem->near[victim];
        problem->near[victim] = problem->far[victim];
        problem->far[victim] = kept;
    }
}

static bool ask(const struct line_response *response, size_t victim, struct question question,
                struct answer *answer, struct error *error) {
    struct line_peak peak[2];
    struct line_sequence sequence[2];
    struct line_settled settled[2];
    if (!line_response_peaks(response, victim, question.edge, &peak[0], &peak[1], error) ||
        (question.bit_time > 0 &&
         (!line_response_sequences(response, victim, question.edge, question.bit_time, &sequence[0],
                                   &sequence[1], error) ||
          !line_response_settled(response, victim, question.edge, question.bit_time,
                                 question.settling, &settled[0], &settled[1], error))))
        return false;
    for (size_t end = 0; end < 2; end++) {
        answer->value[0][end] = peak[end].highest;
        answer->error[0][end] = peak[end].error * peak[end].highest;
        if (!(question.bit_time > 0))
            continue;
        double larger = fmax(sequence[end].free, sequence[end].clocked);
        answer->value[1][end] = sequence[end].free;
        answer->value[2][end] = sequence[end].clocked;
        answer->value[3][end] = settled[end].free;
        answer->error[1][end] = answer->error[2][end] = sequence[end].error * larger;
        answer->error[3][end] = settled[end].error;
    }
    return true;
}

static void compare(const struct answer *stated, const struct answer *fine, size_t kind,
                    struct question question, struct count *count, const char *which) {
    for (size_t end = 0; end < 2; end++) {
        double value = stated->value[kind][end], error = stated->error[kind][end];
        double truth = fine->value[kind][end], unsure = fine->error[kind][end];
        double off = fabs(value - truth);
        count->asked++;
        bool visible = truth > VISIBLE;
        count->visible += visible;
        if (visible && error > LARGE * truth) {
            count->visible_large++;
            printf("  large %s %s end %zu edge %.4g bit %.4g settling %.4g value %.6g truth %.6g "
                   "stated %.3g\n",
                   which, kind_names[kind], end, question.edge, question.bit_time,
                   question.settling, value, truth, error);
        }
        if (!(off > error))
            continue;
        if (off <= error + unsure) {
            count->unsure++;
            continue;
        }
        count->uncovered++;
        count->visible_uncovered += visible;
        count->excess_of_emf = fmax(count->excess_of_emf, off - error);
        if (!visible)
            continue;
        count->excess_of_value = fmax(count->excess_of_value, (off - error) / truth);
        printf("  uncovered %s %s end %zu edge %.4g bit %.4g settling %.4g value %.9g truth %.9g "
               "(%.2g) stated %.3g off %.3g\n",
               which, kind_names[kind], end, question.edge, question.bit_time, question.settling,
               value, truth, unsure, error, off);
    }
}

static void print_problem(const struct line_problem *problem, double shortest) {
    printf("  problem length %.17g shortest %.17g\n", problem->length, shortest);
    for (size_t k = 0; k < problem->count; k++)
        printf("   %zu near %g ohm %g F emf %g far %g ohm %g F\n", k, problem->near[k].resistance,
               problem->near[k].capacitance, problem->near[k].emf, problem->far[k].resistance,
               problem->far[k].capacitance);
}

static size_t trouble(const struct count counts[2][KINDS]) {
    size_t sum = 0;
    for (size_t i = 0; i < 2; i++)
        for (size_t k = 0; k < KINDS; k++)
            sum += counts[i][k].visible_uncovered + counts[i][k].visible_large;
    return sum;
}

static bool attack(size_t number, size_t conductors, double finer, uint64_t *seed,
                   struct arena *arena, struct count counts[2][KINDS], struct error *error) {
    struct line_problem problem = {.count = conductors, .length = between(2e-3, 0.5, seed)};
    size_t victim = (size_t)(draw(seed) * (double)conductors);
    double shortest = between(2e-10, 1e-8, seed);
    size_t before = trouble((const struct count(*)[KINDS])counts);
    if (!draw_section(conductors, &problem, seed, error))
        return false;
    draw_ends(&problem, victim, seed);
    arena_rewind(arena, (struct arena_mark){0, 0});
    const struct line_response *plain = line_response_create(&problem, shortest, arena, error),
                               *lasting =
                                   line_response_create_long(&problem, shortest, arena, error),
                               *fine = line_response_create_long(&problem, shortest / finer, arena,
                                                                 error);
    if (plain == NULL || lasting == NULL || fine == NULL)
        return false;
    for (size_t i = 0; i < EDGES; i++) {
        struct question question = {.edge = i == 0 ? shortest
                                                   : shortest * between(1, i == 3 ? 60 : 8, seed)};
        struct answer stated, truth;
        question.bit_time = question.edge * between(1, 20, seed);
        question.settling = question.edge * between(0.5, 20, seed);
        struct question single = {.edge = question.edge};
        if (!ask(fine, victim, question, &truth, error)) {
            *error = (struct error){0}; /* too many samples */
            question = single;
            if (!ask(fine, victim, question, &truth, error))
                return false;
        }
        if (!ask(plain, victim, single, &stated, error))
            return false;
        compare(&stated, &truth, 0, single, &counts[0][0], "plain");
        if (!ask(lasting, victim, question, &stated, error))
            return false;
        for (size_t kind = 0; kind < (question.bit_time > 0 ? KINDS : 1); kind++)
            compare(&stated, &truth, kind, question, &counts[1][kind], "long");
    }
    if (trouble((const struct count(*)[KINDS])counts) > before) {
        printf("  in problem %zu victim %zu\n", number, victim);
        print_problem(&problem, shortest);
    }
    return true;
}

static void print_counts(const struct count *count, const char *which, const char *kind) {
    printf("%s %s: %zu asked, %zu not covered (%zu more within the finer one's own error), the "
           "most by %.2g of the EMF; visible %zu, of these not covered %zu (by up to %.2g of the "
           "value), stated above 5 %%: %zu\n",
           which, kind, count->asked, count->uncovered, count->unsure, count->excess_of_emf,
           count->visible, count->visible_uncovered, count->excess_of_value, count->visible_large);
}

int main(int count, char **arguments) {
    if (count < 3)
        return 2;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct count counts[2][KINDS] = {0};
    uint64_t seed = count > 3 ? (uint64_t)atol(arguments[3]) : 1;
    double finer = count > 4 ? atof(arguments[4]) : 8;
    bool ok = arena != NULL;
    for (size_t i = 0; ok && i < (size_t)atol(arguments[1]); i++)
        ok = attack(i, (size_t)atol(arguments[2]), finer, &seed, arena, counts, &error);
    if (!ok)
        fprintf(stderr, "%s\n", error.message);
    print_counts(&counts[0][0], "plain", kind_names[0]);
    for (size_t kind = 0; kind < KINDS; kind++)
        print_counts(&counts[1][kind], "long", kind_names[kind]);
    arena_free(arena);
    return ok ? 0 : 1;
}

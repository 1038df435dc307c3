/* Microseconds for one prepared response with both peaks: logic ends, by length. */
#include "groundrules/line.h"

#include <math.h>
#include <stdio.h>
#include <time.h>

static double now(void) {
    struct timespec time;
    clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

static bool run(double length, bool resistive, double *micro, double *claimed) {
    enum { ROUNDS = 200 };
    struct line_problem problem = {.count = 2,
                                   .length = length,
                                   .inductance = {7.1e-7, 2.3e-7, 2.3e-7, 7.1e-7},
                                   .capacitance = {4.7e-11, -1.1e-11, -1.1e-11, 4.7e-11}};
    for (size_t i = 0; i < 2; i++) {
        problem.near[i] = (struct line_end){25, 0};
        problem.far[i] = resistive ? (struct line_end){100, 0} : (struct line_end){INFINITY, 5e-12};
    }
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    bool ok = arena != NULL;
    double start = now();
    for (int k = 0; ok && k < ROUNDS; k++) {
        struct line_peak near, far;
        arena_rewind(arena, (struct arena_mark){0, 0});
        struct line_response *response = line_response_create(&problem, 0, 1e-9, arena, &error);
        ok = response != NULL && line_response_peaks(response, 1, 1e-9, &near, &far, &error);
        *claimed = ok ? fmax(near.error, far.error) : NAN;
    }
    *micro = (now() - start) / ROUNDS * 1e6;
    if (!ok)
        fprintf(stderr, "%s\n", error.message);
    arena_free(arena);
    return ok;
}

int main(void) {
    static const double lengths[] = {1e-3, 5e-3, 20e-3, 100e-3, 300e-3};
    for (int resistive = 1; resistive >= 0; resistive--)
        for (size_t k = 0; k < sizeof lengths / sizeof *lengths; k++) {
            double micro, claimed;
            if (!run(lengths[k], resistive != 0, &micro, &claimed))
                return 1;
            printf("%-10s %5.0f mm: %6.1f us, claimed error %.1e\n",
                   resistive ? "resistive" : "capacitive", lengths[k] * 1e3, micro, claimed);
        }
    return 0;
}

/* Microseconds for one prepared response with both peaks: logic ends, by length; without and with
 * loss. */
#include "groundrules/line.h"

#include <math.h>
#include <stdio.h>
#include <time.h>

static double now(void) {
    struct timespec time;
    clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

static bool run(double length, bool resistive, bool lossy, double *micro, double *claimed) {
    const int rounds = lossy ? 20 : 200;
    struct line_problem problem = {.count = 2,
                                   .length = length,
                                   .inductance = {7.1e-7, 2.3e-7, 2.3e-7, 7.1e-7},
                                   .capacitance = {4.7e-11, -1.1e-11, -1.1e-11, 4.7e-11}};
    for (size_t i = 0; i < 2; i++) {
        problem.near[i] = (struct line_end){25, 0, i == 0};
        problem.far[i] =
            resistive ? (struct line_end){100, 0, 0} : (struct line_end){INFINITY, 5e-12, 0};
    }
    if (lossy) {
        problem.dc_resistance[0] = problem.dc_resistance[3] = 1.6;
        problem.skin_resistance[0] = problem.skin_resistance[3] = 5e-4;
        problem.skin_resistance[1] = problem.skin_resistance[2] = 3e-5;
        for (size_t i = 0; i < 4; i++)
            problem.dielectric_capacitance[i] = 0.8 * problem.capacitance[i];
        problem.df = 0.02;
        problem.material_frequency = 1e9;
    }
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    bool ok = arena != NULL;
    double start = now();
    for (int k = 0; ok && k < rounds; k++) {
        struct line_peak near, far;
        arena_rewind(arena, (struct arena_mark){0, 0});
        struct line_response *response = line_response_create(&problem, 1e-9, arena, &error);
        ok = response != NULL && line_response_peaks(response, 1, 1e-9, &near, &far, &error);
        *claimed = ok ? fmax(near.error, far.error) : NAN;
    }
    *micro = (now() - start) / rounds * 1e6;
    if (!ok)
        fprintf(stderr, "%s\n", error.message);
    arena_free(arena);
    return ok;
}

int main(void) {
    static const double lengths[] = {1e-3, 5e-3, 20e-3, 100e-3, 300e-3};
    for (int kind = 0; kind < 4; kind++)
        for (size_t k = 0; k < sizeof lengths / sizeof *lengths; k++) {
            bool resistive = kind % 2 == 0, lossy = kind >= 2;
            double micro, claimed;
            if (!run(lengths[k], resistive, lossy, &micro, &claimed))
                return 1;
            printf("%-8s %-10s %5.0f mm: %6.1f us, claimed error %.1e\n",
                   lossy ? "lossy" : "lossless", resistive ? "resistive" : "capacitive",
                   lengths[k] * 1e3, micro, claimed);
        }
    return 0;
}

#ifndef MODEL_COUPLED_SET_H
#define MODEL_COUPLED_SET_H

#include "groundrules/line.h"

/* A victim and the traces beside it. */

enum { COUPLED_MOST = 5, COUPLED_AGGRESSOR = 0, COUPLED_VICTIM = 1 };

/* Matrices per metre [count * count], row major, C of Maxwell.  Trace 0 is the nearest aggressor, 1
 * the victim, 2 the nearest on the victim's other side, 3 and 4 those outside of 0 and of 2. */
struct coupled_set {
    size_t count;  /* 2, 3 or 5 */
    bool mirrored; /* the section is its own mirror image about the victim: 0 is as 2, 3 as 4 */
    double inductance[COUPLED_MOST * COUPLED_MOST];  /* H/m */
    double capacitance[COUPLED_MOST * COUPLED_MOST]; /* F/m */
    double error;                                    /* relative, of the entries */
    /* Loss as in line.h, all zero without. */
    double dc_resistance[COUPLED_MOST * COUPLED_MOST];          /* ohm/m */
    double skin_resistance[COUPLED_MOST * COUPLED_MOST];        /* ohm/m/sqrt(Hz) */
    double dielectric_capacitance[COUPLED_MOST * COUPLED_MOST]; /* F/m */
    double df, material_frequency;
};

/* What of it can reach the victim.  In a mirrored set only what is alike on both sides does: with
 * the orthonormal combinations (0 + 2)/sqrt 2 and (3 + 4)/sqrt 2 in place of the traces, L, C
 * and loss fall apart into a set with the victim, of 2 or 3, and one without it, which is left out.
 * Ends that are alike keep their values, EMFs of 1 V on both sides become sqrt 2.  The victim stays
 * conductor 1. */
struct coupled_fold {
    size_t count;
    double inductance[COUPLED_MOST * COUPLED_MOST];
    double capacitance[COUPLED_MOST * COUPLED_MOST];
    double dc_resistance[COUPLED_MOST * COUPLED_MOST];
    double skin_resistance[COUPLED_MOST * COUPLED_MOST];
    double dielectric_capacitance[COUPLED_MOST * COUPLED_MOST];
    double df, material_frequency;
    double emf[COUPLED_MOST]; /* V per volt of swing, of an aggressor that switches */
};
struct coupled_fold coupled_fold(const struct coupled_set *set);

/* A line of it without ends. */
struct line_problem coupled_fold_line(const struct coupled_fold *fold, double length);

/* The victim's voltage over its current in one wave in which the neighbours' voltages are all as
 * its own (even) or all opposite to it (odd): 1 / (Yvv +- sum of the other Y of its row). */
bool coupled_fold_impedances(const struct coupled_fold *fold, double *even, double *odd,
                             struct error *error);

#endif

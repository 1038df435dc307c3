#ifndef LINE_ENDS_H
#define LINE_ENDS_H

#include "groundrules/line.h"

/* One set of ends as a linear system driven by the modal waves b that arrive and by the EMFs,
 * all of them their share times e:
 *     dx/dt = A x + B b + Be e          x: voltages of the ends that have a capacitance
 *     V     = Vx x + Vb b + Ve e        node voltages
 *     a     = Ax x + Ab b + Ae e        modal waves that leave
 * From  Cend dV/dt + (G + Yc) V = 2 Yc T b + G emf e  and  a = T' C V - b.  An end of 0 ohm has V =
 * emf e; an open one has G = 0; both are ordinary. All matrices row major. */
struct end_system {
    size_t count;                                                      /* conductors = modes */
    size_t states;                                                     /* ends with a capacitance */
    double state[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];         /* A [states][states] */
    double state_of_wave[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* B [states][count] */
    double state_of_emf[LINE_MOST_CONDUCTORS];                         /* Be */
    double voltage_of_state[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* Vx [count][states] */
    double voltage_of_wave[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];  /* Vb [count][count] */
    double voltage_of_emf[LINE_MOST_CONDUCTORS];                          /* Ve */
    double leaving_of_state[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS]; /* Ax [count][states] */
    double leaving_of_wave[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];  /* Ab [count][count] */
    double leaving_of_emf[LINE_MOST_CONDUCTORS];                          /* Ae */
    double fastest; /* s, smallest time constant of the states; INFINITY when there are none */
};

/* Capacitances whose time constant with their own end is
 * below `negligible` seconds are left out. */
bool end_system_build(const struct line_problem *problem, const struct line_modes *modes,
                      const struct line_end *ends, double negligible, struct end_system *system,
                      struct error *error);

#endif

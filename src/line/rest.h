#ifndef LINE_REST_H
#define LINE_REST_H

#include <stdbool.h>
#include <stddef.h>

/* Whether a sampled step response has told all that ramps will ask, judged on its integral R less
 * the part of its final value:
 *   - of a ramp as short as is asked for, (R(t) - R(t - e)) / e, what the last window still shows
 * is far below the peak already seen, or a small share of it;
 *   - R itself, to which slow ramps come down, swings by a small share of its range about the mean
 *     of the last window.
 * Fast ringing that no ramp will show (capacitances at both ends of a lossless line keep it up) is
 * no reason to go on. */
struct rest {
    double final; /* V */
    double error; /* what may still come, as a share of any peak */
    double range; /* of the integral */
    double late;  /* by how much it still swings in the last window */
    bool reached;
};

/* Extremes of the samples looked at before, so that none is looked at twice; starts zeroed. */
struct rest_seen {
    size_t samples;
    double ramp_low, ramp_high, integral_low, integral_high;
};

/* sum[samples]: running sum of the samples by trapezoids; `window` < samples; `edge` in samples;
 * `final` NAN where it is not known: the mean of the last window; `settled`: the share of its range
 * by which the integral may still swing.  All but `sum` and `samples` are the same from call to
 * call.
 */
struct rest rest_of(const double *sum, size_t samples, size_t window, size_t edge, double final,
                    double settled, struct rest_seen *seen);

/* Where integral - final * time settles, V s: the mean of the last window, weighed so that a swing
 * hardly enters. */
double rest_settled(const double *integral, size_t samples, size_t window, double step,
                    double final);

#endif

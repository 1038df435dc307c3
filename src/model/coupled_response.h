#ifndef MODEL_COUPLED_RESPONSE_H
#define MODEL_COUPLED_RESPONSE_H

#include "coupled_set.h"
#include "groundrules/model.h"

/* What coupled-traces and coupled-lines share: the terminated traces' inputs, and every output that
 * follows from their matrices. */

struct coupled_drive {
    double length, swing, edge;
    double bit_time;  /* s; 0 = a single edge */
    double settling;  /* s; 0 = every instant counts */
    bool independent; /* aggressors switch each on its own: their worst cases add up */
    double source, load, load_capacitance;
    double victim_source, victim_load, victim_load_capacitance;
    bool receiver_near; /* the victim's load sits at the near end, its driver at the far end */
};

enum coupled_output {
    COUPLED_NEAR_END_PEAK,
    COUPLED_FAR_END_PEAK,
    COUPLED_WORST_PEAK,
    COUPLED_RECEIVER_PEAK,
    COUPLED_PATTERN_PEAK,
    COUPLED_CLOCKED_PEAK,
    COUPLED_NOISE_PEAK,
    COUPLED_NEAR_END_RATIO,
    COUPLED_FAR_END_RATIO,
    COUPLED_NEAR_END_LEVEL,
    COUPLED_FAR_END_LEVEL,
    COUPLED_BACKWARD_COEFFICIENT,
    COUPLED_FORWARD_COEFFICIENT,
    COUPLED_INDUCTIVE_COEFFICIENT,
    COUPLED_CAPACITIVE_COEFFICIENT,
    COUPLED_IMPEDANCE,
    COUPLED_EVEN_IMPEDANCE,
    COUPLED_ODD_IMPEDANCE,
    COUPLED_DELAY,
    COUPLED_INDUCTANCE,
    COUPLED_VICTIM_INDUCTANCE,
    COUPLED_MUTUAL_INDUCTANCE,
    COUPLED_CAPACITANCE,
    COUPLED_VICTIM_CAPACITANCE,
    COUPLED_MUTUAL_CAPACITANCE,
    COUPLED_OUTPUT_COUNT,
};
extern const struct model_output coupled_outputs[COUPLED_OUTPUT_COUNT];

bool coupled_respond(const struct coupled_set *set, const struct coupled_drive *drive,
                     struct model_worker *worker, double *outputs, double *errors,
                     struct error *error);

/* Inputs of the terminated traces, in the same words for both models. */
#define COUPLED_LENGTH                                                                             \
    {                                                                                              \
        "length", "length over which the traces run side by side", DIMENSION_LENGTH, MODEL_DRIVE,  \
            0.1, 1e-3, 10, false, NULL, NULL, 0, NULL                                              \
    }
#define COUPLED_SWING                                                                              \
    {                                                                                              \
        "swing", "step of the aggressor's EMF", DIMENSION_VOLTAGE, MODEL_DRIVE, 3.3, 1e-3, 1e3,    \
            false, NULL, NULL, 0, NULL                                                             \
    }
#define COUPLED_EDGE                                                                               \
    {                                                                                              \
        "edge", "time of the EMF's linear ramp, 0 to 100 %", DIMENSION_TIME, MODEL_DRIVE, 1e-9,    \
            10e-12, 10e-6, false, NULL, NULL, 0, NULL                                              \
    }
#define COUPLED_BIT_TIME                                                                           \
    {                                                                                              \
        "bit_time", "least time between two edges; 0 = a single edge", DIMENSION_TIME,             \
            MODEL_DRIVE, 0, 0, 1, false, NULL, NULL, 0, NULL                                       \
    }
#define COUPLED_SETTLING                                                                           \
    {                                                                                              \
        "settling",                                                                                \
            "start of the aggressor's last edge to the instant at which the victim is sampled; 0 " \
            "= "                                                                                   \
            "edge-sensitive, every instant counts",                                                \
            DIMENSION_TIME, MODEL_DRIVE, 0, 0, 1, false, NULL, NULL, 0, NULL                       \
    }
#define COUPLED_SOURCE                                                                             \
    {                                                                                              \
        "source", "resistance of the aggressor's driver", DIMENSION_RESISTANCE, MODEL_DRIVE, 50,   \
            0, 1e6, false, NULL, NULL, 0, NULL                                                     \
    }
#define COUPLED_LOAD                                                                               \
    {                                                                                              \
        "load", "resistance to ground at the aggressor's far end", DIMENSION_RESISTANCE,           \
            MODEL_DRIVE, 50, 0, 1e9, true, NULL, NULL, 0, NULL                                     \
    }
#define COUPLED_LOAD_CAPACITANCE                                                                   \
    {                                                                                              \
        "load_capacitance", "capacitance to ground at the aggressor's far end",                    \
            DIMENSION_CAPACITANCE, MODEL_DRIVE, 0, 0, 1e-6, false, NULL, NULL, 0, NULL             \
    }
#define COUPLED_VICTIM_SOURCE                                                                      \
    {                                                                                              \
        "victim_source", "resistance of the victim's own driver", DIMENSION_RESISTANCE,            \
            MODEL_DRIVE, 50, 0, 1e9, true, NULL, NULL, 0, NULL                                     \
    }
#define COUPLED_VICTIM_LOAD                                                                        \
    {                                                                                              \
        "victim_load", "resistance to ground at the victim's receiver", DIMENSION_RESISTANCE,      \
            MODEL_DRIVE, 50, 0, 1e9, true, NULL, NULL, 0, NULL                                     \
    }
#define COUPLED_VICTIM_LOAD_CAPACITANCE                                                            \
    {                                                                                              \
        "victim_load_capacitance", "capacitance to ground at the victim's receiver",               \
            DIMENSION_CAPACITANCE, MODEL_DRIVE, 0, 0, 1e-6, false, NULL, NULL, 0, NULL             \
    }
#define COUPLED_RECEIVER                                                                           \
    {                                                                                              \
        "receiver", "end of the victim where its receiver sits, seen from the aggressor's driver", \
            DIMENSION_WORD, MODEL_CHOICE, 0, 0, 1, false, NULL, coupled_receiver_words, 0, NULL    \
    }
#define COUPLED_RESISTIVITY                                                                        \
    {                                                                                              \
        "copper_resistivity",                                                                      \
            "resistivity of the copper, 1.72e-8 ohm m at 20 C; 0 = lossless, which bounds the "    \
            "peaks "                                                                               \
            "from above and is some ten times faster",                                             \
            DIMENSION_RESISTIVITY, MODEL_SHAPE, 0, 0, 1e-5, false, NULL, NULL, 0, NULL             \
    }
#define COUPLED_FREQUENCY                                                                          \
    {                                                                                              \
        "frequency", "frequency of outputs at one frequency", DIMENSION_FREQUENCY, MODEL_DRIVE,    \
            1e9, 1e3, 100e9, false, NULL, NULL, 0,                                                 \
            "no output of this version depends on a frequency"                                     \
    }
extern const char *const coupled_receiver_words[];

#define COUPLED_LINE_METHOD                                                                        \
    "The traces are then solved as a coupled line between their real ends in the time "            \
    "domain: without loss by bounces and characteristics, with loss (skin effect by the "          \
    "incremental-inductance rule of Wheeler 1942, dielectric by the causal model of Djordjevic "   \
    "et al. 2001) by inversion of the Laplace transform; the peak is the "                         \
    "largest voltage of the whole ringing, found between the samples as well. Sequences of edges " \
    "are searched exactly over the sampled response; a victim that settles counts what is left "   \
    "at its sampling instant."

#define COUPLED_LOSS_VALIDITY                                                                      \
    "Loss: copper thicker than a few skin depths, smooth; one loss tangent for all dielectrics."

#define COUPLED_SEVERAL_METHOD                                                                     \
    "Several aggressors have all the same ends; where both sides of the victim are alike, only "   \
    "what is alike on both sides reaches it, and the line is solved for that. A strip between "    \
    "lies on both sides of the victim, none between aggressors. Aggressors that switch each on "   \
    "its "                                                                                         \
    "own add up their worst cases."

#endif

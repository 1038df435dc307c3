#ifndef MODEL_REGISTRY_H
#define MODEL_REGISTRY_H

#include "groundrules/model.h"

extern const struct model model_trace;
extern const struct model model_coupled_traces;
extern const struct model model_coupled_lines;
extern const struct model model_ground_vias;
extern const struct model model_signal_via;
extern const struct model model_trace_loop;
extern const struct model model_loop_pair;

#endif

#ifndef RULE_STATUS_H
#define RULE_STATUS_H

#include "groundrules/guideline.h"

/* The words of the exports; they do not change from issue to issue. */
const char *status_name(enum guideline_status status);
const char *status_strength(enum study_strength strength);
const char *status_origin(enum study_origin origin);

#endif

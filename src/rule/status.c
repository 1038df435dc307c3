#include "status.h"

const char *status_name(enum guideline_status status) {
    switch (status) {
    case GUIDELINE_FOUND:
        return "found";
    case GUIDELINE_MET_EVERYWHERE:
        return "met everywhere";
    case GUIDELINE_CANNOT_BE_MET:
        return "cannot be met";
    case GUIDELINE_BELOW_FAB:
        break;
    }
    return "below the fab's capability";
}

const char *status_strength(enum study_strength strength) {
    switch (strength) {
    case STUDY_MUST:
        return "must";
    case STUDY_SHOULD:
        return "should";
    case STUDY_MAY:
        break;
    }
    return "may";
}

const char *status_origin(enum study_origin origin) {
    switch (origin) {
    case STUDY_GIVEN:
        return "given";
    case STUDY_VARIED:
        return "varied";
    case STUDY_COMPARED:
        return "compared";
    case STUDY_FROM_STACKUP:
        return "stackup";
    case STUDY_FROM_SIGNAL:
        return "signal";
    case STUDY_STANDARD:
        break;
    }
    return "standard";
}

#ifndef RULE_FINGERPRINT_H
#define RULE_FINGERPRINT_H

#include "groundrules/study.h"

/* SHA-256 as 64 hexadecimal digits and a zero. */
bool fingerprint_bytes(const unsigned char *bytes, size_t length, char digest[65],
                       struct error *error);

/* Over all resolved inputs of every chapter and rule, with the revisions of their models: what the
 * numbers depend on, and not titles or remarks.  Lines are sorted, so the order of chapters does
 * not matter. */
bool fingerprint_of(const struct study *study, char digest[65], struct arena *arena,
                    struct error *error);

#endif

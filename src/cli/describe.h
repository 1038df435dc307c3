#ifndef CLI_DESCRIBE_H
#define CLI_DESCRIBE_H

#include "groundrules/model.h"

/* One model's declaration on standard output: for a terminal, and as a section of docs/models.md.
 */
void describe_text(const struct model *model);
void describe_markdown(const struct model *model);

#endif

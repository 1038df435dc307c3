#ifndef STUDY_SECTIONS_H
#define STUDY_SECTIONS_H

#include "keys.h"

/* The sections of a study, each read from its node into reader->study.  The nodes have passed
 * keys_check.  NULL nodes are sections that are not there.  They return false only when memory ran
 * out; what is wrong with the study is among the findings. */
bool document_read(const struct reader *reader, const struct node *node);
bool boards_read(const struct reader *reader, const struct node *node);
bool signals_read(const struct reader *reader, const struct node *node);
bool products_read(const struct reader *reader, const struct node *node);
bool chapters_read(const struct reader *reader, const struct node *node);

/* By identifier; NULL: a finding was added at the node, or the whole section was refused. */
const struct study_stackup *boards_find(const struct reader *reader, const struct node *node);
const struct study_signal *signals_find(const struct reader *reader, const struct node *node);

#endif

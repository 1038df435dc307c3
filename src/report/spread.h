#ifndef REPORT_SPREAD_H
#define REPORT_SPREAD_H

#include <stddef.h>

enum { SPREAD_MOST = 64 };

/* Moves `centres` (ascending targets) as little as possible, least squares, so that neighbours are
 * at least half the sum of their `heights` apart and all lie within low .. high, which must have
 * room for them. */
void spread_apart(double *centres, const double *heights, size_t count, double low, double high);

#endif

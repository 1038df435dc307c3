#ifndef FIELD_DENSE_H
#define FIELD_DENSE_H

#include "groundrules/error.h"

#include <stddef.h>

/* a: rows x stride, row major, the upper triangle of a symmetric positive definite matrix in
 * columns 0 .. rows - 1 and `extra` right-hand sides R behind them.  Leaves U with U'U = A in the
 * triangle and Y with U'Y = R behind it, so that Y'Y = R' inverse(A) R.  Below 64 rows by a plain
 * loop (LAPACK needs longer to start than to factor), above by dpotrf and dtrsm. Fails:
 * ERROR_SINGULAR. */
bool dense_eliminate(size_t rows, size_t extra, size_t stride, double *a, struct error *error);

#endif

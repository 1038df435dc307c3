#include "dense.h"

#include "vector.h"

#include <cblas.h>
#include <lapacke.h>
#include <math.h>

enum { SMALL = 64 };

VECTOR_CLONES
static bool eliminate(size_t rows, size_t extra, size_t stride, double *a) {
    size_t width = rows + extra;
    for (size_t k = 0; k < rows; k++) {
        double *restrict pivot = a + k * stride;
        if (!(pivot[k] > 0))
            return false;
        double scale = 1 / sqrt(pivot[k]);
        for (size_t j = k; j < width; j++)
            pivot[j] *= scale;
        for (size_t i = k + 1; i < rows; i++) {
            double *restrict row = a + i * stride;
            double factor = pivot[i];
            for (size_t j = i; j < width; j++)
                row[j] -= factor * pivot[j];
        }
    }
    return true;
}

bool dense_eliminate(size_t rows, size_t extra, size_t stride, double *a, struct error *error) {
    bool ok = true;
    if (rows <= SMALL) {
        ok = eliminate(rows, extra, stride, a);
    } else {
        /* Row-major upper is column-major lower; R becomes X with X L' = R' on the right. */
        ok = LAPACKE_dpotrf_work(LAPACK_COL_MAJOR, 'L', (lapack_int)rows, a, (lapack_int)stride) ==
             0;
        if (ok)
            cblas_dtrsm(CblasColMajor, CblasRight, CblasLower, CblasTrans, CblasNonUnit, (int)extra,
                        (int)rows, 1.0, a, (int)stride, a + rows, (int)stride);
    }
    if (!ok)
        return error_set(error, ERROR_SINGULAR, "section: system of %zu unknowns is singular",
                         rows);
    return true;
}

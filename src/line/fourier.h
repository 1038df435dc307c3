#ifndef LINE_FOURIER_H
#define LINE_FOURIER_H

#include "groundrules/arena.h"

#include <complex.h>

/* Sums over k of data[k] exp(+j 2 pi k m / size), for one size, a power of two. */
struct fourier {
    size_t size;
    const double complex *roots; /* [size / 2] */
    double complex *scratch;     /* [size] */
};

/* Memory from `arena`.  Fails: ERROR_MEMORY. */
bool fourier_prepare(size_t size, struct arena *arena, struct fourier *fourier,
                     struct error *error);

/* data[size] becomes its sums. */
void fourier_sum(const struct fourier *fourier, double complex *data);

#endif

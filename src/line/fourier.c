/* Self-sorting radix-2 steps (Stockham): each reads one array in two halves and writes the other in
 * order, so no bits are reversed and the inner loop is contiguous. */
#include "fourier.h"

#include "complex_matrix.h"

#include <math.h>
#include <string.h>

static void step(const double complex *from, double complex *to, size_t half, size_t stride,
                 const double complex *roots) {
    for (size_t p = 0; p < half; p++) {
        double complex root = roots[p * stride];
        const double complex *one = from + stride * p, *other = from + stride * (p + half);
        double complex *even = to + stride * 2 * p, *odd = even + stride;
        for (size_t q = 0; q < stride; q++) {
            even[q] = one[q] + other[q];
            odd[q] = complex_times(root, one[q] - other[q]);
        }
    }
}

bool fourier_prepare(size_t size, struct arena *arena, struct fourier *fourier,
                     struct error *error) {
    const double turn = 2 * 3.14159265358979323846 / (double)size;
    double complex *scratch = arena_new(arena, size, double complex, error);
    double complex *roots = arena_new(arena, size / 2, double complex, error);
    if (scratch == NULL || roots == NULL)
        return false;
    for (size_t k = 0; k < size / 2; k++)
        roots[k] = CMPLX(cos(turn * (double)k), sin(turn * (double)k));
    *fourier = (struct fourier){size, roots, scratch};
    return true;
}

void fourier_sum(const struct fourier *fourier, double complex *data) {
    double complex *from = data, *to = fourier->scratch;
    for (size_t half = fourier->size / 2, stride = 1; half > 0; half /= 2, stride *= 2) {
        step(from, to, half, stride, fourier->roots);
        double complex *swapped = from;
        from = to;
        to = swapped;
    }
    if (from != data)
        memcpy(data, from, fourier->size * sizeof *data);
}

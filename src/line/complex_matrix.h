#ifndef LINE_COMPLEX_MATRIX_H
#define LINE_COMPLEX_MATRIX_H

#include <complex.h>
#include <math.h>
#include <stddef.h>

/* The C library's header gives it to one compiler only. */
#ifndef CMPLX
#define CMPLX(real, imaginary) __builtin_complex((double)(real), (double)(imaginary))
#endif

/* Complex matrices of a few rows, row major.  Everything is inline with the size as an argument:
 * called with a constant 2 the loops vanish, which is what a pair's response in time lives on. */

static inline __attribute__((always_inline)) double complex_square(double complex a) {
    return creal(a) * creal(a) + cimag(a) * cimag(a);
}

/* Products and quotients of ordinary numbers: the C library's care for infinities costs as much as
 * the product. */
static inline __attribute__((always_inline)) double complex complex_times(double complex a,
                                                                          double complex b) {
    return CMPLX(creal(a) * creal(b) - cimag(a) * cimag(b),
                 creal(a) * cimag(b) + cimag(a) * creal(b));
}

static inline __attribute__((always_inline)) double complex complex_inverse(double complex a) {
    double scale = 1 / complex_square(a);
    return CMPLX(creal(a) * scale, -cimag(a) * scale);
}

/* The root right of the imaginary axis; for numbers whose squares neither over- nor underflow. */
static inline __attribute__((always_inline)) double complex complex_root(double complex a) {
    double real = creal(a), imaginary = cimag(a), size = sqrt(complex_square(a));
    double greater = sqrt(0.5 * (size + fabs(real)));
    double other = greater > 0 ? 0.5 * imaginary / greater : 0;
    return real >= 0 ? CMPLX(greater, other) : CMPLX(fabs(other), copysign(greater, imaginary));
}

/* to[rows][columns] = a[rows][inner] b[inner][columns]; `to` is neither a nor b. */
static inline __attribute__((always_inline)) void
complex_multiply(size_t rows, size_t inner, size_t columns, const double complex *a,
                 const double complex *b, double complex *to) {
    for (size_t i = 0; i < rows; i++)
        for (size_t j = 0; j < columns; j++) {
            double complex sum = 0;
            for (size_t k = 0; k < inner; k++)
                sum += complex_times(a[i * inner + k], b[k * columns + j]);
            to[i * columns + j] = sum;
        }
}

/* Solves a[n][n] x = b[n][columns] in place of b, by elimination with row pivots; a is lost.  A
 * singular matrix gives numbers that are not finite. */
static inline __attribute__((always_inline)) void
complex_solve(size_t n, size_t columns, double complex *a, double complex *b) {
    for (size_t k = 0; k < n; k++) {
        size_t pivot = k;
        for (size_t i = k + 1; i < n; i++)
            if (complex_square(a[i * n + k]) > complex_square(a[pivot * n + k]))
                pivot = i;
        for (size_t j = 0; pivot != k && j < n; j++) {
            double complex swapped = a[k * n + j];
            a[k * n + j] = a[pivot * n + j];
            a[pivot * n + j] = swapped;
        }
        for (size_t j = 0; pivot != k && j < columns; j++) {
            double complex swapped = b[k * columns + j];
            b[k * columns + j] = b[pivot * columns + j];
            b[pivot * columns + j] = swapped;
        }
        double complex inverse = complex_inverse(a[k * n + k]);
        for (size_t j = 0; j < columns; j++)
            b[k * columns + j] = complex_times(b[k * columns + j], inverse);
        for (size_t j = k + 1; j < n; j++)
            a[k * n + j] = complex_times(a[k * n + j], inverse);
        for (size_t i = 0; i < n; i++) {
            if (i == k)
                continue;
            double complex factor = a[i * n + k];
            for (size_t j = k + 1; j < n; j++)
                a[i * n + j] -= complex_times(factor, a[k * n + j]);
            for (size_t j = 0; j < columns; j++)
                b[i * columns + j] -= complex_times(factor, b[k * columns + j]);
        }
    }
}

#endif

/* Two conductors in closed form: with eigenvalues m1, m2 of A,
 *     f(A) = (f(m1) + f(m2))/2 + (f(m1) - f(m2))/(m1 - m2) (A - (m1 + m2)/2),
 * the divided difference by its series where m1 is near m2.  More by the iteration of Denman and
 * Beavers (1976) for the square root (its eigenvalues stay right of the imaginary axis) and scaling
 * and squaring for the exponential (the squared matrices do not grow: |exp(-Gamma x)| <= 1). */
#include "propagation.h"

#include "complex_matrix.h"

#include <math.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS, SQUARE_ROOT_STEPS = 40 };

/* roots[2]: of the eigenvalues. */
static void root_of_two(const double complex *a, double complex *root, double complex *roots) {
    double complex half = 0.5 * (a[0] + a[3]), split = 0.5 * (a[0] - a[3]);
    double complex spread = complex_root(complex_times(split, split) + complex_times(a[1], a[2]));
    if (creal(spread) * creal(half) + cimag(spread) * cimag(half) < 0)
        spread = -spread;
    /* The smaller eigenvalue through the determinant: no cancellation. */
    double complex greater = half + spread;
    double complex determinant = complex_times(a[0], a[3]) - complex_times(a[1], a[2]);
    roots[0] = complex_root(greater);
    roots[1] = complex_root(complex_times(determinant, complex_inverse(greater)));
    double complex product = complex_times(roots[0], roots[1]);
    double complex inverse = complex_inverse(roots[0] + roots[1]);
    for (size_t k = 0; k < 4; k++)
        root[k] = complex_times(a[k] + (k == 0 || k == 3 ? product : 0), inverse);
}

static double complex exponential(double complex x) {
    double size = exp(creal(x));
    return CMPLX(size * cos(cimag(x)), size * sin(cimag(x)));
}

/* (exp(d) - exp(-d)) / (2 d), for |d| < 1/2. */
static double complex sine_over(double complex d) {
    double complex square = complex_times(d, d), sum = 0;
    static const double factor[] = {
        1.0 / 6227020800, 1.0 / 39916800, 1.0 / 362880, 1.0 / 5040, 1.0 / 120, 1.0 / 6, 1};
    for (size_t k = 0; k < sizeof factor / sizeof *factor; k++)
        sum = complex_times(sum, square) + factor[k];
    return sum;
}

/* x has the eigenvalues mean + half and mean - half. */
static void exponential_of_two(const double complex *x, double complex half,
                               double complex *result) {
    double complex mean = 0.5 * (x[0] + x[3]), split = 0.5 * (x[0] - x[3]);
    double complex even, over;
    if (complex_square(half) < 0.25) {
        double complex base = exponential(mean), sine = sine_over(half);
        double complex odd = complex_times(half, sine); /* sinh */
        even = complex_times(base, complex_root(1 + complex_times(odd, odd)));
        over = complex_times(base, sine);
    } else {
        double complex one = exponential(mean + half), other = exponential(mean - half);
        even = 0.5 * (one + other);
        over = complex_times(0.5 * (one - other), complex_inverse(half));
    }
    result[0] = even + complex_times(over, split);
    result[1] = complex_times(over, x[1]);
    result[2] = complex_times(over, x[2]);
    result[3] = even - complex_times(over, split);
}

static double complex mean_of_diagonal(size_t n, const double complex *a) {
    double complex sum = 0;
    for (size_t i = 0; i < n; i++)
        sum += a[i * n + i];
    return sum / (double)n;
}

static void invert(size_t n, const double complex *a, double complex *inverse) {
    double complex lost[MOST];
    memcpy(lost, a, n * n * sizeof *a);
    for (size_t k = 0; k < n * n; k++)
        inverse[k] = k % (n + 1) == 0;
    complex_solve(n, n, lost, inverse);
}

static void root_of_many(size_t n, const double complex *a, double complex *root) {
    if (n == 1) {
        root[0] = complex_root(a[0]);
        return;
    }
    double complex scale = mean_of_diagonal(n, a), other[MOST], one_inverse[MOST],
                   other_inverse[MOST];
    for (size_t k = 0; k < n * n; k++) {
        root[k] = a[k] / scale;
        other[k] = k % (n + 1) == 0;
    }
    for (size_t step = 0; step < SQUARE_ROOT_STEPS; step++) {
        double change = 0;
        invert(n, root, one_inverse);
        invert(n, other, other_inverse);
        for (size_t k = 0; k < n * n; k++) {
            double complex next = 0.5 * (root[k] + other_inverse[k]);
            change = fmax(change, cabs(next - root[k]));
            root[k] = next;
            other[k] = 0.5 * (other[k] + one_inverse[k]);
        }
        if (!(change > 1e-15))
            break;
    }
    for (size_t k = 0; k < n * n; k++)
        root[k] *= csqrt(scale);
}

static void exponential_of_many(size_t n, const double complex *x, double complex *result) {
    enum { TERMS = 12 };
    double complex mean = mean_of_diagonal(n, x), rest[MOST], product[MOST] = {0};
    double norm = 0;
    for (size_t i = 0; i < n; i++) {
        double row = 0;
        for (size_t j = 0; j < n; j++)
            row += cabs(x[i * n + j] - (i == j ? mean : 0));
        norm = fmax(norm, row);
    }
    int squarings = norm > 0.25 ? (int)ceil(log2(norm / 0.25)) : 0;
    for (size_t k = 0; k < n * n; k++) {
        rest[k] = ldexp(1, -squarings) * (x[k] - (k % (n + 1) == 0 ? mean : 0));
        result[k] = k % (n + 1) == 0;
    }
    for (size_t term = TERMS; term > 0; term--) {
        complex_multiply(n, n, n, rest, result, product);
        for (size_t k = 0; k < n * n; k++)
            result[k] = product[k] / (double)term + (k % (n + 1) == 0 ? 1 : 0);
    }
    double complex base = exponential(ldexp(1, -squarings) * mean);
    for (size_t k = 0; k < n * n; k++)
        result[k] *= base;
    for (int k = 0; k < squarings; k++) {
        complex_multiply(n, n, n, result, result, product);
        memcpy(result, product, n * n * sizeof *result);
    }
}

void propagation_slowness(const struct loss_laws *laws, double complex s,
                          double complex *slowness) {
    size_t n = laws->problem->count;
    double complex inductance[MOST], capacitance[MOST], product[MOST] = {0};
    loss_immittances(laws, s, n, inductance, capacitance);
    complex_multiply(n, n, n, inductance, capacitance, product);
    double complex roots[2];
    if (n == 2)
        root_of_two(product, slowness, roots);
    else
        root_of_many(n, product, slowness);
}

static void across_two(const double complex *slowness, const double complex *roots,
                       double complex length, double complex *across) {
    double complex exponent[4];
    for (size_t k = 0; k < 4; k++)
        exponent[k] = complex_times(slowness[k], length);
    exponential_of_two(exponent, complex_times(0.5 * (roots[0] - roots[1]), length), across);
}

static void propagate_two(const struct loss_laws *laws, double complex s,
                          struct propagation *propagation) {
    double complex inductance[4], capacitance[4], product[4], roots[2];
    loss_immittances(laws, s, 2, inductance, capacitance);
    complex_multiply(2, 2, 2, inductance, capacitance, product);
    root_of_two(product, propagation->admittance, roots);
    across_two(propagation->admittance, roots, -s * laws->problem->length, propagation->across);
    complex_solve(2, 2, inductance, propagation->admittance);
}

static void propagate_many(const struct loss_laws *laws, double complex s, size_t n,
                           struct propagation *propagation) {
    double complex inductance[MOST], capacitance[MOST], exponent[MOST];
    double complex product[MOST] = {0};
    loss_immittances(laws, s, n, inductance, capacitance);
    complex_multiply(n, n, n, inductance, capacitance, product);
    root_of_many(n, product, propagation->admittance);
    for (size_t k = 0; k < n * n; k++)
        exponent[k] = -s * laws->problem->length * propagation->admittance[k];
    exponential_of_many(n, exponent, propagation->across);
    complex_solve(n, n, inductance, propagation->admittance);
}

void propagation_at(const struct loss_laws *laws, double complex s,
                    struct propagation *propagation) {
    if (laws->problem->count == 2)
        propagate_two(laws, s, propagation);
    else
        propagate_many(laws, s, laws->problem->count, propagation);
}

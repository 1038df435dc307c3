#ifndef FIELD_LOGARITHM_H
#define FIELD_LOGARITHM_H

#include <stddef.h>
#include <stdint.h>
#include <string.h>

/* ln x for finite normal x > 0, within 4e-16 absolute plus 2e-16 relative: branch-free, so that
 * loops over arrays become vector code, which the C library's log does not.
 * x = 2^e m, m in [sqrt(1/2), sqrt(2)); ln m = 2 artanh(f), f = (m - 1)/(m + 1), |f| <= 0.1716. */
static inline double logarithm(double x) {
    uint64_t bits;
    memcpy(&bits, &x, sizeof bits);
    /* Adding the distance from sqrt(1/2) to 1 makes the exponent field round where m is cut. */
    uint64_t shifted = bits + (0x3ff0000000000000u - 0x3fe6a09e667f3bcdu);
    uint64_t exponent_bits = (shifted >> 52) | 0x4330000000000000u;
    uint64_t mantissa_bits = (shifted & 0x000fffffffffffffu) + 0x3fe6a09e667f3bcdu;
    double exponent, m;
    memcpy(&exponent, &exponent_bits, sizeof exponent);
    memcpy(&m, &mantissa_bits, sizeof m);
    exponent -= 4503599627370496.0 + 1023.0;
    double f = (m - 1.0) / (m + 1.0);
    double g = f * f;
    double series =
        g * (1.0 / 3 +
             g * (1.0 / 5 +
                  g * (1.0 / 7 +
                       g * (1.0 / 9 +
                            g * (1.0 / 11 +
                                 g * (1.0 / 13 + g * (1.0 / 15 + g * (1.0 / 17 + g / 19))))))));
    return exponent * 0.693147180559945309417 + 2.0 * (f + f * series);
}

#endif

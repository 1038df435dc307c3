#ifndef TESTS_CHECK_H
#define TESTS_CHECK_H

#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>

#include <cmocka.h>

/* |got - want| <= relative * |want|; NaN fails.  cmocka's own float comparison goes through
 * `float`. */
#define assert_close(got, want, relative)                                                          \
    check_close((got), (want), (relative), 0.0, #got, __FILE__, __LINE__)
/* |got - want| <= absolute */
#define assert_near(got, want, absolute)                                                           \
    check_close((got), (want), 0.0, (absolute), #got, __FILE__, __LINE__)
/* A call that must succeed; prints the error's message when it does not.  Needs `struct error
 * error` in sight. */
#define assert_ok(call)                                                                            \
    do {                                                                                           \
        if (!(call)) {                                                                             \
            print_error("%s:%d: %s\n  failed: %s\n", __FILE__, __LINE__, #call, error.message);    \
            fail();                                                                                \
        }                                                                                          \
    } while (0)

static inline void check_close(double got, double want, double relative, double absolute,
                               const char *what, const char *file, int line) {
    double allowed = relative * fabs(want) + absolute;
    if (!(fabs(got - want) <= allowed)) {
        print_error("%s:%d: %s\n  got  %.17g\n  want %.17g\n  off by %.3g, allowed %.3g\n", file,
                    line, what, got, want, fabs(got - want), allowed);
        fail();
    }
}

#endif

/* Lanes of cases side by side, and own exp and log: only +, -, *, / and bits, so that every build gives equal bits.

   LANES cases are solved together, one in each lane of a vector; WIDE is the width in which long rows of numbers
   are worked through. All files are compiled with -ffp-contract=off: a machine with fused multiply-add, two lanes
   or eight, GCC or Clang, one case or many then print the same digits. */
#ifndef REACTOR_LANES_H
#define REACTOR_LANES_H

#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#ifndef LANES
#define LANES 1
#endif
#ifndef WIDE
#define WIDE 2
#endif

typedef double wide __attribute__((vector_size(8 * WIDE)));
typedef int64_t wide_bits __attribute__((vector_size(8 * WIDE)));
typedef uint64_t wide_word __attribute__((vector_size(8 * WIDE)));

#if LANES == 1
typedef double lane;
typedef int64_t mask;
static inline lane pick(mask yes, lane a, lane b) { return yes ? a : b; }
#define MASK(condition) (-(mask)(condition))
#else
typedef double lane __attribute__((vector_size(8 * LANES)));
typedef int64_t mask __attribute__((vector_size(8 * LANES)));
static inline lane pick(mask yes, lane a, lane b) { return (lane)(((mask)a & yes) | ((mask)b & ~yes)); }
#define MASK(condition) ((mask)(condition))
#endif

#define AT(x, l) (((double *)&(x))[l])          /* lane l of a vector, to read or to set */
#define SEEN(x, l) (((const double *)&(x))[l])  /* the same, of a constant */
#define EACH(l) for (int l = 0; l < LANES; l++)
#define SIZED(n) (((size_t)(n) * LANES + 7) / 8 * 8) /* doubles to reserve for n lane vectors */

static inline lane all(double x)
{
    lane v;
    EACH(l) AT(v, l) = x;
    return v;
}

static inline lane larger(lane a, lane b) { return pick(MASK(a > b), a, b); }
static inline lane smaller(lane a, lane b) { return pick(MASK(a < b), a, b); }
static inline double root(double x) { return __builtin_sqrt(x); }

static inline wide choose(wide_bits yes, wide a, wide b)
{
    return (wide)(((wide_bits)a & yes) | ((wide_bits)b & ~yes));
}

static inline wide wide_all(double x)
{
    wide v;
    for (int i = 0; i < WIDE; i++) ((double *)&v)[i] = x;
    return v;
}

/* e^x to 1 unit in the last place; beyond +-708 the value there; nan stays nan. */
static inline wide exp_wide(wide x)
{
    const double magic = 6755399441055744.0; /* 1.5 * 2^52: adding it rounds to a whole number */
    x = choose((wide_bits)(x < -708.0), wide_all(-708.0), x);
    x = choose((wide_bits)(x > 708.0), wide_all(708.0), x);
    wide shifted = x * 1.44269504088896340736 + magic, n = shifted - magic;
    wide r = (x - n * 6.93147180369123816490e-01) - n * 1.90821492927058770002e-10;
    wide r2 = r * r, r4 = r2 * r2;
    wide a = (0.5 + 0.16666666666666669 * r) + (0.041666666666624115 + 0.008333333333329963 * r) * r2;
    wide b = (0.0013888888917217822 + 0.0001984126986335166 * r)
           + (2.480152129100049e-05 + 2.7557268130209233e-06 * r) * r2;
    wide c = 2.7620090429143735e-07 + 2.51005066431842e-08 * r;
    wide p = 1.0 + (r + r2 * (a + r4 * (b + r4 * c)));
    return p * (wide)(((wide_word)shifted + 1023) << 52);
}

/* ln x of a positive number, to 1 unit in the last place; nan stays nan. */
static inline wide log_wide(wide x)
{
    const uint64_t half_root = 0x3fe6a09e667f3bcdULL, one = 0x3ff0000000000000ULL;
    wide_word word = (wide_word)x + (one - half_root);
    wide n = (wide)((word >> 52) | 0x4330000000000000ULL) - (4503599627370496.0 + 1023.0);
    wide f = (wide)((word & 0x000fffffffffffffULL) + half_root) - 1.0;
    wide s = f / (2.0 + f), z = s * s, w = z * z, half = 0.5 * f * f;
    wide even = w * (3.999999999940941908e-01 + w * (2.222219843214978396e-01 + w * 1.531383769920937332e-01));
    wide odd = z * (6.666666666666735130e-01 + w * (2.857142874366239149e-01 + w * (1.818357216161805012e-01
             + w * 1.479819860511658591e-01)));
    wide tail = s * (half + (odd + even)) + n * 1.90821492927058770002e-10;
    return n * 6.93147180369123816490e-01 - ((half - tail) - f) + (x - x);
}

/* Replace n doubles by their exponentials or logarithms; rows are reserved in whole vectors (SIZED). */
static inline void exp_all(double *x, int n)
{
    for (int i = 0; i < n; i += WIDE) *(wide *)(x + i) = exp_wide(*(wide *)(x + i));
}

static inline void log_all(double *x, int n)
{
    for (int i = 0; i < n; i += WIDE) *(wide *)(x + i) = log_wide(*(wide *)(x + i));
}

static inline lane log_lane(lane x)
{
    wide row[(LANES + WIDE - 1) / WIDE];
    for (int i = 0; i < (int)(sizeof row / 8); i++) ((double *)row)[i] = 1.0;
    *(lane *)row = x;
    log_all((double *)row, LANES);
    return *(lane *)row;
}

#endif

/* The exported functions: each hands on to the build that this processor can run. */
#include <stdlib.h>
#include "batch.h"

#define BUILDS(x) \
    int march_##x(const int32_t *, const double *, Batch *); \
    int rates_##x(const int32_t *, const double *, Rates *); \
    int point_##x(const int32_t *, const double *, Batch *, Point *);
BUILDS(plain1)
BUILDS(plain2)
BUILDS(wide1)
BUILDS(wide4)

#if defined(__x86_64__) || defined(_M_X64)
#include <cpuid.h>
#define HAS_WIDE 1

/* AVX2 in the processor, and its registers saved by the system. */
static int wide_runs(void)
{
    unsigned a, b, c, d, low, high;
    if (!__get_cpuid(1, &a, &b, &c, &d) || !(c & (1u << 27)) || !(c & (1u << 28))) return 0;
    __asm__ volatile("xgetbv" : "=a"(low), "=d"(high) : "c"(0));
    if ((low & 6) != 6 || !__get_cpuid_count(7, 0, &a, &b, &c, &d)) return 0;
    return (b & (1u << 5)) != 0;
}
#else
#define HAS_WIDE 0
static int wide_runs(void) { return 0; }
#endif

#ifdef _WIN32
#define FACE __declspec(dllexport)
#else
#define FACE __attribute__((visibility("default")))
#endif

FACE int reactor_kernel_version(void) { return FACE_VERSION; }
FACE int reactor_kernel_lanes(void) { return wide_runs() ? 4 : 2; }
FACE void reactor_kernel_release(double *rows) { free(rows); }

/* lanes: 1, 2 or 4; 4 only where reactor_kernel_lanes() says so. */
FACE int reactor_kernel_march(const int32_t *ints, const double *reals, Batch *batch, int lanes)
{
#if HAS_WIDE
    if (wide_runs() && lanes == 4) return march_wide4(ints, reals, batch);
    if (wide_runs() && lanes == 1) return march_wide1(ints, reals, batch);
#endif
    return lanes == 1 ? march_plain1(ints, reals, batch) : march_plain2(ints, reals, batch);
}

FACE int reactor_kernel_rates(const int32_t *ints, const double *reals, Rates *rates)
{
#if HAS_WIDE
    if (wide_runs()) return rates_wide1(ints, reals, rates);
#endif
    return rates_plain1(ints, reals, rates);
}

FACE int reactor_kernel_point(const int32_t *ints, const double *reals, Batch *batch, Point *at)
{
#if HAS_WIDE
    if (wide_runs()) return point_wide1(ints, reals, batch, at);
#endif
    return point_plain1(ints, reals, batch, at);
}

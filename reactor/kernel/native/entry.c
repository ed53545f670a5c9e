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
BUILDS(wide8)

#if defined(__x86_64__) || defined(_M_X64)
#include <cpuid.h>
#define HAS_WIDE 1

/* How many lanes the processor has registers for, and the system saves: 8 with AVX-512, 4 with AVX2, else 2. */
static int widest(void)
{
    unsigned a, b, c, d, low, high;
    if (!__get_cpuid(1, &a, &b, &c, &d) || !(c & (1u << 27)) || !(c & (1u << 28))) return 2;
    __asm__ volatile("xgetbv" : "=a"(low), "=d"(high) : "c"(0));
    if ((low & 6) != 6 || !__get_cpuid_count(7, 0, &a, &b, &c, &d) || !(b & (1u << 5))) return 2;
    return (low & 0xe6) == 0xe6 && (b & (1u << 16)) && (b & (1u << 17)) && (b & (1u << 31)) ? 8 : 4;
}
#else
#define HAS_WIDE 0
static int widest(void) { return 2; }
#endif

#ifdef _WIN32
#define FACE __declspec(dllexport)
#else
#define FACE __attribute__((visibility("default")))
#endif

FACE int reactor_kernel_version(void) { return FACE_VERSION; }
FACE int reactor_kernel_lanes(void) { return widest(); }
FACE void reactor_kernel_release(double *rows) { free(rows); }

/* lanes: 1, 2, 4 or 8; more than the processor has are not taken. */
FACE int reactor_kernel_march(const int32_t *ints, const double *reals, Batch *batch, int lanes)
{
#if HAS_WIDE
    int most = widest();
    if (most >= 8 && lanes == 8) return march_wide8(ints, reals, batch);
    if (most >= 4 && lanes >= 4) return march_wide4(ints, reals, batch);
    if (most >= 4 && lanes == 1) return march_wide1(ints, reals, batch);
#endif
    return lanes == 1 ? march_plain1(ints, reals, batch) : march_plain2(ints, reals, batch);
}

FACE int reactor_kernel_rates(const int32_t *ints, const double *reals, Rates *rates)
{
#if HAS_WIDE
    if (widest() >= 4) return rates_wide1(ints, reals, rates);
#endif
    return rates_plain1(ints, reals, rates);
}

FACE int reactor_kernel_point(const int32_t *ints, const double *reals, Batch *batch, Point *at)
{
#if HAS_WIDE
    if (widest() >= 4) return point_wide1(ints, reals, batch, at);
#endif
    return point_plain1(ints, reals, batch, at);
}

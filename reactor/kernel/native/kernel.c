/* One build of the kernel for LANES cases side by side; entry.c chooses among the builds when it is loaded. */
#include "march.h"
#include "points.h"

#define NAME_(base, build) base##_##build
#define NAME(base, build) NAME_(base, build)
#ifndef BUILD
#define BUILD plain
#endif

int NAME(march, BUILD)(const int32_t *ints, const double *reals, Batch *batch)
{
    Plan p;
    read_plan(&p, ints, reals);
    return march(&p, batch);
}

#if LANES == 1
int NAME(rates, BUILD)(const int32_t *ints, const double *reals, Rates *r)
{
    Plan p;
    read_plan(&p, ints, reals);
    return rates_at(&p, r);
}

int NAME(point, BUILD)(const int32_t *ints, const double *reals, Batch *batch, Point *at)
{
    Plan p;
    read_plan(&p, ints, reals);
    return point(&p, batch, at);
}
#endif

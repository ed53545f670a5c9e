/* The plain C face of the kernel: flat arrays in, flat arrays out. native.py mirrors the order of every list here. */
#ifndef REACTOR_BATCH_H
#define REACTOR_BATCH_H

#include <stdint.h>
#include <time.h>

enum { C_WALL_LOSS, C_AREA, C_DRAG, C_INVERSE_COOLANT, C_FLOW, C_T, C_TC, C_P, C_RTOL, C_SECONDS, C_LENGTH,
       C_FEED_HEAT, C_COOLANT, C_LIMITED, CASE_REALS };
enum { L_SECTION, L_SECTIONS, L_N, L_FEED, L_A, L_LOW_A, L_CONDUCTANCE, L_SHARE, L_STEPS, CASE_LINKS };
enum { S_START, S_STOP, S_SLEEVE, S_HEAT, S_ADDED, S_PATH, S_AREA, S_MIDDLE, S_HALF, S_FIXED, S_MEAN_ENERGY,
       SECTION_REALS };
enum { S_LINES, S_DEGREE, S_ENTERING, S_ENERGY, S_SIGMA, S_ABSORBED, S_TRANSMITTED, S_EVEN, S_ALONG,
       S_MOVES, S_IS_FIXED, S_INJECTED,
       SECTION_LINKS };
enum { STATUS_DONE, STATUS_STEPS, STATUS_SECONDS, STATUS_STUCK, STATUS_NEGATIVE, STATUS_WRONG, STATUS_MIXING,
       STATUS_MEMORY, STATUS_PRESSURE };

#define FACE_VERSION 4   /* changes with every change of this file or of plan.h */
#define RESULT_REALS 7   /* z, T, P where it stopped; hottest T, its z; z of exhaustion or -1; last step */
#define RESULT_COUNTS 4  /* status, steps, evaluations, stations kept */
#define ROW_MORE 14      /* a station: z, flow, n..., T, Tc, P, totals */

typedef struct {
    int64_t count, tank, lines, degree, stations; /* stations: 0 the end only; 1 every step; more: some between */
    const double *cases, *sections, *pool, *const *tables; /* curves: start, step, points, then y and step y' in turn */
    const int64_t *links, *section_links;
    double *results;
    int64_t *counts;
    double **paths; /* rows of each case, to be given back with release() */
} Batch;

/* Rates at concentrations c [mol/m3] and T [K]; any of the outputs may be NULL. */
typedef struct {
    const double *A, *low_A, *c;
    double T, J, wall_loss;
    double *cp, *cp_slope, *h, *g, *forward, *reverse, *production, *by_c, *by_T, *by_J;
} Rates;

/* What is done at a point of a case. HELD: the composition at rest at each of `count` temperatures, one after the
   other from y (NEAR: y is at rest close by); SLOPE: slopes f, totals and, where `jacobian` is given, df/dy without S (K + 3 unknowns). */
typedef struct {
    int64_t task, count;
    double *y, *f, *totals, *jacobian; /* y: n..., P, Tc, T; for HELD rows of y and f */
} Point;

enum { TASK_SLOPE, TASK_HELD, TASK_NEAR };

static inline double seconds_now(void)
{
    struct timespec t;
#ifdef CLOCK_MONOTONIC
    clock_gettime(CLOCK_MONOTONIC, &t);
#else
    timespec_get(&t, TIME_UTC);
#endif
    return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

#endif

/* One step of Rodas4: six stages, order 4 with an error of order 3, stiffly accurate, dense output.

   E. Hairer and G. Wanner, Solving Ordinary Differential Equations II, 2nd ed., Springer 1996, section IV.10. */
#ifndef REACTOR_RODAS_H
#define REACTOR_RODAS_H

#include "balance.h"
#include "sparse.h"

#define STAGES 6
#define GAMMA 0.25

static const double STAGE_A[4][4] = {
    {1.544},
    {0.9466785280815826, 0.2557011698983284},
    {3.314825187068521, 2.896124015972201, 0.9986419139977817},
    {1.221224509226641, 6.019134481288629, 12.53708332932087, -0.6878860361058950},
};
static const double STAGE_C[5][5] = {
    {-5.6688},
    {-2.430093356833875, -0.2063599157091915},
    {-0.1073529058151375, -9.594562251023355, -20.47028614809616},
    {7.496443313967647, -10.24680431464352, -33.99990352819905, 11.70890893206160},
    {8.083246795921522, -7.981132988064893, -31.52159432874371, 16.31930543123136, -6.058818238834054},
};
static const double STAGE_Z[STAGES] = {0.0, 0.386, 0.21, 0.63, 1.0, 1.0}; /* where the stages stand in the step */
static const double STAGE_BY_Z[STAGES] = {0.25, -0.1043, 0.1035, -0.0362, 0.0, 0.0}; /* weight of h df/dz */
static const double DENSE[2][5] = {
    {10.12623508344586, -7.487995877610167, -34.80091861555747, -7.992771707568823, 1.025137723295662},
    {-0.6762803392801253, 6.087714651680015, 16.43084320892478, 24.76722511418386, -6.594389125716872},
};

/* How the totals answer to a move of the unknowns, frozen at the start of a step. */
typedef struct {
    lane *row;                  /* thermal starts by concentration */
    lane by_M, by_T, along;     /* by the usual collider, by T, along the density */
    lane warmth;                /* sum cp f */
    lane rate[TOTALS], k[STAGES][TOTALS];
    lane by_z[TOTALS];          /* their slopes by position where the light moves */
} Totals;

/* Row of the thermal starts: how 2 A sum q answers to concentrations and T. */
static void start_row(const Plan *p, const Case *cs, const Found *at, Work *w, Totals *t)
{
    int K = p->species;
    lane scale = 2.0 * cs->area, *row = t->row;
    const lane *c = w->c;
    for (int s = 0; s <= K; s++) row[s] = all(0.0);
    t->by_M = t->by_T = all(0.0);
    for (int i = 0; i < p->starts; i++) {
        int j = p->start_back[i], body = p->start_body[i];
        int a = p->back_slot[0][j], b = p->back_slot[1][j], d = p->back_slot[2][j];
        lane k = scale * w->k[p->reactions + j], q = scale * w->q[p->reactions + j];
        row[a] += k * c[b] * c[d], row[b] += k * c[a] * c[d], row[d] += k * c[a] * c[b];
        t->by_T += (w->slope[p->first_back + j] - w->e[j]) * q;
        if (body < 0) continue;
        lane by = w->order_M[body] * q / larger(w->M[body], all(FEWEST));
        for (int e = p->special_first[body]; e < p->special_first[body + 1]; e++)
            row[p->special_species[e]] += p->special_by[e] * by;
        t->by_M += by * p->usual[body] * at->heat.concentration;
    }
    row[K] = all(0.0);
    t->along = dot(row, c, K);
}

/* Change of the totals' slopes along a stage k, in the linear picture of the start of the step. */
static void respond(const Plan *p, const Case *cs, const Found *at, const Work *w, const Totals *t, const lane *k,
                    lane chlorine, lane heat, lane *out)
{
    int K = p->species;
    lane k_T = k[K + 3], warmer = k_T * at->heat.inverse, pressure = k[K + 1] / at->P - warmer;
    lane density = pressure - k[K] / at->S, c = at->density * k[p->chlorine] + chlorine * density;
    const Light *light = &at->light;
    lane wall = at->wall_T * k_T + at->wall_Tc * k[K + 2], lamp = at->lamp_T * k_T;
    out[0] = light->photons_c * c + light->photons_T * k_T, out[1] = light->power_c * c + light->power_T * k_T;
    out[2] = light->outer_c * c + light->outer_T * k_T;
    out[3] = at->density * dot(t->row, k, K) + t->along * density + t->by_M * pressure + t->by_T * k_T;
    out[4] = -cs->flow * (dot(w->base_h, k, K) * heat + t->warmth * k_T);
    out[5] = wall, out[6] = lamp, out[7] = wall - lamp;
    out[8] = t->rate[8] * density;
}

/* Read the light at a position; leaves its slope by position. */
static lane move_light(Case *cs, lane z)
{
    lane scale, slope;
    read_curves(cs->beam.along, z, &scale, &slope);
    mask lit = MASK(scale > 0.0);
    cs->beam.scale = pick(lit, scale, all(0.0));
    return pick(lit, slope, all(0.0));
}

/* Prepare a step from w->y: slopes, derivatives, and what the stages will need of this point. Where the light moves
   along the section, also df/dz and that of the totals, from light of one unit more: both are linear in it. */
static void prepare(const Plan *p, Case *cs, Work *w, Found *at, Totals *t)
{
    int K = p->species, moves = cs->beam.moves;
    lane slope = all(0.0);
    if (moves) {
        slope = move_light(cs, cs->z);
        lane here = cs->beam.scale;
        cs->beam.scale = here + 1.0;
        evaluate(p, cs, w->y, w->by_z, t->by_z, w, at, 0);
        cs->beam.scale = here;
    }
    evaluate(p, cs, w->y, w->base_f, t->rate, w, at, 1);
    differentiate(p, at, w);
    for (int n = 0; moves && n < K + BORDER; n++) w->by_z[n] = slope * (w->by_z[n] - w->base_f[n]);
    for (int n = 0; moves && n < TOTALS; n++) t->by_z[n] = slope * (t->by_z[n] - t->rate[n]);
    t->warmth = dot(w->cp, w->base_f, K);
    if (!cs->tank) start_row(p, cs, at, w, t);
}

static void total_stage(const Plan *p, const Case *cs, const Found *at, const Work *w, Totals *t, int i, lane h,
                        lane h_r, const lane *slope)
{
    lane answer[TOTALS], shift = 1.0 / (GAMMA * h);
    respond(p, cs, at, w, t, w->stage[i], at->density * w->y[p->chlorine], shift, answer);
    answer[4] += cs->flow * h_r;
    for (int n = 0; n < TOTALS; n++) {
        lane sum = h * (slope[n] + answer[n]);
        for (int j = 0; j < i; j++) sum += STAGE_C[i - 1][j] * t->k[j][n];
        t->k[i][n] = GAMMA * sum;
    }
}

/* Take the step h prepared above: w->next = the new state, w->stage[5] its error, t->k the totals' stages. */
static void take_step(const Plan *p, Case *cs, lane h, Work *w, const Found *at, Totals *t)
{
    int N = p->species + BORDER;
    lane shift = 1.0 / (GAMMA * h), each = 1.0 / h, slope[TOTALS];
    Found passing;
    form(p, cs, at, w->y, w->base_f, shift, w);
    factor(p, w);
    for (int i = 0; i < STAGES; i++) {
        lane *k = w->stage[i], *arg = w->arg;
        if (i == 0) {
            for (int n = 0; n < N; n++) k[n] = w->base_f[n];
            memcpy(slope, t->rate, sizeof slope);
        } else {
            for (int n = 0; n < N; n++) {
                lane sum = i < 5 ? w->y[n] : arg[n] + w->stage[4][n], back = all(0.0);
                if (i < 5)
                    for (int j = 0; j < i; j++) sum += STAGE_A[i - 1][j] * w->stage[j][n];
                for (int j = 0; j < i; j++) back += STAGE_C[i - 1][j] * w->stage[j][n];
                arg[n] = sum, w->rhs[n] = back * each;
            }
            if (cs->beam.moves) move_light(cs, cs->z + STAGE_Z[i] * h);
            evaluate(p, cs, arg, k, slope, w, &passing, 0);
            for (int n = 0; n < N; n++) k[n] += w->rhs[n];
        }
        if (cs->beam.moves && STAGE_BY_Z[i] != 0.0) {
            for (int n = 0; n < N; n++) k[n] += STAGE_BY_Z[i] * h * w->by_z[n];
            for (int n = 0; n < TOTALS; n++) slope[n] += STAGE_BY_Z[i] * h * t->by_z[n];
        }
        lane h_r = combine(p, w->base_h, at->capacity, k);
        solve(p, w, k);
        if (!cs->tank) total_stage(p, cs, at, w, t, i, h, h_r, slope);
    }
    for (int n = 0; n < N; n++) w->next[n] = w->arg[n] + w->stage[5][n];
}

/* Coefficients of the dense output y(s) = a (1 - s) + s (b + (1 - s)(c + s d)), s from 0 to 1 along the step. */
static inline void dense(const double *stages, ptrdiff_t apart, double *c, double *d)
{
    *c = *d = 0.0;
    for (int j = 0; j < 5; j++) *c += DENSE[0][j] * stages[j * apart], *d += DENSE[1][j] * stages[j * apart];
}

static inline double along(double a, double b, double c, double d, double s)
{
    return a * (1.0 - s) + s * (b + (1.0 - s) * (c + s * d));
}

#endif

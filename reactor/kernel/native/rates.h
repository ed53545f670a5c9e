/* Thermo, rate constants, rates and their derivatives, for LANES cases at once. */
#ifndef REACTOR_RATES_H
#define REACTOR_RATES_H

#include "lanes.h"
#include "plan.h"

#define LN10 2.302585092994045684
#define FEWEST 1e-300 /* keeps quotients and logarithms finite where a species is absent */

/* Rows of lane vectors that a step works on; one block, carved up in work_of(). */
typedef struct {
    lane *c, *cp, *h, *g, *e, *k, *M, *order_M, *q, *q_net, *w, *f; /* state and rates */
    lane *items, *jac, *q_S, *q_P, *q_T, *w_S, *w_P, *w_T, *slope; /* derivatives */
    lane *fall_ratio, *fall_log, *fall_power, *fall_slope;
    lane *matrix, *pivot;                                           /* elimination */
    lane *y, *arg, *next, *stage[6], *rhs, *base_f, *by_z, *base_h, *base_cp;
    lane *tau, *photon[4];                                          /* light, line by line */
} Work;

/* What is alike along a whole row: temperature and what follows from it. */
typedef struct {
    lane T, inverse, log, concentration; /* K, 1/K, -, total mol/m3 */
} Heat;

static inline void add_sums(const Sum *sum, lane *restrict out, const lane *restrict in)
{
    for (int i = 0; i < sum->plus; i++) out[sum->plus_to[i]] += in[sum->plus_from[i]];
    for (int i = 0; i < sum->minus; i++) out[sum->minus_to[i]] -= in[sum->minus_from[i]];
    for (int i = 0; i < sum->other; i++) out[sum->other_to[i]] += sum->other_by[i] * in[sum->other_from[i]];
}

/* Three sums over the same list in one pass. */
static inline void add_three(const Sum *sum, lane *restrict a, lane *restrict b, lane *restrict c,
                             const lane *restrict x, const lane *restrict y, const lane *restrict z)
{
    for (int i = 0; i < sum->plus; i++) {
        int to = sum->plus_to[i], from = sum->plus_from[i];
        a[to] += x[from], b[to] += y[from], c[to] += z[from];
    }
    for (int i = 0; i < sum->minus; i++) {
        int to = sum->minus_to[i], from = sum->minus_from[i];
        a[to] -= x[from], b[to] -= y[from], c[to] -= z[from];
    }
    for (int i = 0; i < sum->other; i++) {
        int to = sum->other_to[i], from = sum->other_from[i];
        double by = sum->other_by[i];
        a[to] += by * x[from], b[to] += by * y[from], c[to] += by * z[from];
    }
}

/* cp [J/mol/K], h [J/mol] and g/RT of species s from one set of polynomials. */
static inline void polynomial(const double *restrict a, int K, int s, const Heat *at, lane *cp, lane *h, lane *g)
{
    lane T = at->T;
    a += s;
    *cp = a[0] + T * (a[K] + T * (a[2 * K] + T * (a[3 * K] + T * a[4 * K])));
    *h = a[10 * K] + T * (a[5 * K] + T * (a[6 * K] + T * (a[7 * K] + T * (a[8 * K] + T * a[9 * K]))));
    *g = (a[11 * K] * (1.0 - at->log) + a[16 * K] * at->inverse - a[17 * K])
       + T * (a[12 * K] + T * (a[13 * K] + T * (a[14 * K] + T * a[15 * K])));
}

/* The terms in 1/T and 1/T2, added to those of `polynomial`. */
static inline void inverse_powers(const double *restrict a, int K, int s, const Heat *at, lane *cp, lane *h, lane *g)
{
    lane u = at->inverse;
    a += (THERMO_ROWS - INVERSE_ROWS) * K + s;
    *cp += u * (a[K] + u * a[0]);
    *h += a[K] * at->log - u * a[0];
    *g += u * (a[3 * K] * (1.0 + at->log) + u * a[2 * K]);
}

/* The upper range is worked out only where one of the lanes has reached it. */
static void thermo(const Plan *p, const Heat *at, lane *restrict cp, lane *restrict h, lane *restrict g)
{
    int K = p->species, hot = 0;
    for (int s = 0; s < K; s++) polynomial(p->low, K, s, at, cp + s, h + s, g + s);
    for (int s = 0; p->inverse && s < K; s++) inverse_powers(p->low, K, s, at, cp + s, h + s, g + s);
    EACH(l) hot |= SEEN(at->T, l) > p->t_mid_least;
    for (int s = 0; hot && s < K; s++) {
        lane cp_high, h_high, g_high;
        polynomial(p->high, K, s, at, &cp_high, &h_high, &g_high);
        if (p->inverse) inverse_powers(p->high, K, s, at, &cp_high, &h_high, &g_high);
        mask above = MASK(at->T > p->t_mid[s]);
        cp[s] = pick(above, cp_high, cp[s]), h[s] = pick(above, h_high, h[s]), g[s] = pick(above, g_high, g[s]);
    }
}

/* d cp/dT of species s */
static inline lane capacity_slope(const Plan *p, const Heat *at, int s)
{
    int K = p->species;
    const double *low = p->low + s, *high = p->high + s;
    lane T = at->T;
    lane cold = low[K] + T * (2.0 * low[2 * K] + T * (3.0 * low[3 * K] + T * (4.0 * low[4 * K])));
    lane hot = high[K] + T * (2.0 * high[2 * K] + T * (3.0 * high[3 * K] + T * (4.0 * high[4 * K])));
    if (p->inverse) {
        int first = (THERMO_ROWS - INVERSE_ROWS) * K;
        lane u = at->inverse, u2 = u * u;
        cold -= u2 * (low[first + K] + 2.0 * u * low[first]);
        hot -= u2 * (high[first + K] + 2.0 * u * high[first]);
    }
    return pick(MASK(T > p->t_mid[s]), hot, cold);
}

static void third_bodies(const Plan *p, const Heat *at, Work *w)
{
    for (int b = 0; b < p->bodies; b++) {
        lane M = p->usual[b] * at->concentration;
        for (int i = p->special_first[b]; i < p->special_first[b + 1]; i++)
            M += p->special_by[i] * w->c[p->special_species[i]];
        w->M[b] = M;
        w->order_M[b] = all(1.0);
    }
}

static void fall_slopes(const Plan *p, const Heat *at, int f, const lane *e, lane log_center, lane u, lane n,
                        lane below, lane spread, Work *w)
{
    const double *troe = p->troe + 5 * f;
    int i = p->fall_reaction[f] - p->fixed;
    lane inverse2 = at->inverse * at->inverse, third = (1.0 - troe[0]) * e[1], first = troe[0] * e[2];
    lane center = larger(third + first + e[3], all(FEWEST)), ratio = w->fall_ratio[f];
    lane bend = log_center * 2.0 * u / (spread * spread);
    lane log_x = (p->low_b[f] - p->b[i]) * at->inverse + (p->low_E[f] - p->E[i]) * inverse2;
    lane log_c = troe[4] * ((troe[3] * inverse2 * e[3] - troe[1] * third - troe[2] * first) / (center * LN10));
    lane x_T = log_x / LN10 - 0.67 * log_c, below_T = -1.27 * log_c - 0.14 * x_T;
    lane u_T = (x_T - u * below_T) / below;
    w->fall_slope[f] = log_x / (1.0 + ratio) + LN10 * (log_c / spread - bend * u_T);
    w->order_M[p->colliders + f] = 1.0 / (1.0 + ratio) - bend * (n / (below * below));
}

/* Troe's fall-off blends the high limits in k; if `deep`, also d ln k/dT and d ln k/d ln M beyond the limit's. The
   exponentials e stand in fours: low limit, and the three terms of the center. Logarithms are taken in one row. */
static void fall_off(const Plan *p, const lane *low_A, const Heat *at, const lane *e, Work *w, int deep)
{
    int F = p->falloffs;
    lane *logs = w->fall_log, *power = w->fall_power;
    for (int f = 0; f < F; f++) {
        const double *troe = p->troe + 5 * f; /* a, 1/T3, 1/T1, T2, 1 or 0 where Lindemann */
        const lane *own = e + 4 * f;
        lane center = (1.0 - troe[0]) * own[1] + troe[0] * own[2] + own[3];
        w->fall_ratio[f] = larger(low_A[f] * own[0] * w->M[p->colliders + f] / w->k[p->fall_reaction[f]], all(FEWEST));
        logs[f] = w->fall_ratio[f], logs[F + f] = larger(center, all(FEWEST));
    }
    log_all((double *)logs, 2 * F * LANES);
    for (int f = 0; f < F; f++) {
        lane log_center = p->troe[5 * f + 4] / LN10 * logs[F + f], n = 0.75 - 1.27 * log_center;
        lane x = logs[f] / LN10 - 0.4 - 0.67 * log_center, below = n - 0.14 * x, u = x / below;
        lane spread = 1.0 + u * u;
        power[f] = log_center / spread * LN10;
        if (deep) fall_slopes(p, at, f, e + 4 * f, log_center, u, n, below, spread, w);
    }
    exp_all((double *)power, F * LANES);
    for (int f = 0; f < F; f++) {
        lane ratio = w->fall_ratio[f];
        w->k[p->fall_reaction[f]] *= ratio / (1.0 + ratio) * power[f];
    }
}

/* Rate constants, M included: forward in k[r], reverse in k[reactions + j]; if `deep`, what slopes() needs. */
static inline void constants(const Plan *p, const lane *A, const lane *low_A, const Heat *at, lane J, lane loss,
                             Work *w, int deep)
{
    int arrhenius = p->reactions - p->fixed, moving = arrhenius + p->back;
    lane *e = w->e, *fall = e + moving;
    lane volume = log_lane(R_GAS / p->p_ref * at->T);
    for (int i = 0; i < arrhenius; i++) e[i] = p->b[i] * at->log - p->E[i] * at->inverse;
    for (int j = 0; j < p->back; j++) e[arrhenius + j] = p->change[j] * volume;
    add_sums(&p->equilibrium, e + arrhenius, w->g);
    for (int f = 0; f < p->falloffs; f++) {
        const double *troe = p->troe + 5 * f;
        fall[4 * f] = p->low_b[f] * at->log - p->low_E[f] * at->inverse;
        fall[4 * f + 1] = -at->T * troe[1], fall[4 * f + 2] = -at->T * troe[2];
        fall[4 * f + 3] = -troe[3] * at->inverse;
    }
    exp_all((double *)e, (moving + 4 * p->falloffs) * LANES);
    third_bodies(p, at, w);
    for (int r = 0; r < p->fixed; r++) w->k[r] = A[r];
    w->k[p->photolysis] = J, w->k[p->wall] = loss;
    for (int i = 0; i < arrhenius; i++) w->k[p->fixed + i] = A[p->fixed + i] * e[i];
    fall_off(p, low_A, at, fall, w, deep);
    for (int j = 0; j < p->back; j++) w->k[p->reactions + j] = w->k[p->first_back + j] * e[arrhenius + j];
    for (int i = 0; i < p->colliders; i++) {
        int r = p->collider_reaction[i], j = r - p->first_back;
        w->k[r] *= w->M[i];
        if (j >= 0) w->k[p->reactions + j] *= w->M[i];
    }
}

/* Rates q of all steps, forward then reverse, q_net, and the production w [mol/m3/s] of every species. */
static void rates(const Plan *p, Work *w)
{
    const lane *c = w->c;
    lane *q = w->q, *back = q + p->reactions;
    for (int r = 0; r < p->reactions; r++)
        q[r] = w->k[r] * c[p->slot[0][r]] * c[p->slot[1][r]] * c[p->slot[2][r]];
    for (int j = 0; j < p->back; j++)
        back[j] = w->k[p->reactions + j] * c[p->back_slot[0][j]] * c[p->back_slot[1][j]] * c[p->back_slot[2][j]];
    for (int r = 0; r < p->first_back; r++) w->q_net[r] = q[r];
    for (int j = 0; j < p->back; j++) w->q_net[p->first_back + j] = q[p->first_back + j] - back[j];
    for (int s = 0; s < p->species; s++) w->w[s] = all(0.0);
    add_sums(&p->production, w->w, w->q_net);
}

/* d ln k/dT of every forward step in `slope`, and d ln K/dT of every equilibrium in w->e. */
static void slopes(const Plan *p, const Heat *at, Work *w)
{
    lane inverse2 = at->inverse * at->inverse;
    for (int r = 0; r < p->fixed; r++) w->slope[r] = all(0.0);
    for (int r = p->fixed; r < p->reactions; r++)
        w->slope[r] = p->b[r - p->fixed] * at->inverse + p->E[r - p->fixed] * inverse2;
    for (int f = 0; f < p->falloffs; f++) w->slope[p->fall_reaction[f]] += w->fall_slope[f];
    for (int j = 0; j < p->back; j++) w->e[j] = all(0.0);
    add_sums(&p->equilibrium, w->e, w->h);
    for (int j = 0; j < p->back; j++) w->e[j] = (w->e[j] * at->inverse / R_GAS - p->change[j]) * at->inverse;
}

/* Derivatives of the production: jac (sparse) by concentration at given M-defaults; w_S, w_P, w_T along total moles,
   pressure and temperature, on which the density P/(R T S) hangs. Call after constants(deep), rates() and slopes(). */
static void derivatives(const Plan *p, const Heat *at, lane J_c, lane J_T, lane S, lane P, Work *w)
{
    const lane *c = w->c, *q = w->q, *back = q + p->reactions;
    lane absorber = c[p->chlorine];
    for (int i = 0; i < p->items; i++)
        w->items[i] = p->item_by[i] * w->k[p->item_k[i]] * c[p->item_1[i]] * c[p->item_2[i]];
    int ph = p->photolysis;
    w->items[p->items] = J_c * c[p->slot[0][ph]] * c[p->slot[1][ph]] * c[p->slot[2][ph]];
    for (int r = 0; r < p->reactions; r++) w->q_S[r] = p->order[r] * q[r], w->q_T[r] = w->slope[r] * q[r];
    for (int j = 0; j < p->back; j++) {
        int r = p->first_back + j;
        w->q_S[r] -= p->back_order[j] * back[j];
        w->q_T[r] -= (w->slope[r] - w->e[j]) * back[j];
    }
    w->q_S[ph] += w->items[p->items] * absorber;
    w->q_T[ph] = J_T * c[p->slot[0][ph]] * c[p->slot[1][ph]] * c[p->slot[2][ph]];
    for (int r = 0; r < p->reactions; r++) w->q_P[r] = w->q_S[r];
    for (int i = 0; i < p->colliders + p->falloffs; i++) {
        int fall = i - p->colliders, r = fall < 0 ? p->collider_reaction[i] : p->fall_reaction[fall];
        lane M = larger(w->M[i], all(FEWEST)), by_M = w->order_M[i] * w->q_net[r] / M;
        w->items[p->items + 1 + i] = by_M;
        w->q_P[r] += by_M * M;
        w->q_S[r] += by_M * (M - p->usual[i] * at->concentration);
    }
    for (int r = 0; r < p->reactions; r++) {
        w->q_T[r] -= w->q_P[r] * at->inverse;
        w->q_S[r] = -w->q_S[r] / S, w->q_P[r] = w->q_P[r] / P;
    }
    for (int s = 0; s < p->species; s++) w->w_S[s] = w->w_P[s] = w->w_T[s] = all(0.0);
    add_three(&p->production, w->w_S, w->w_P, w->w_T, w->q_S, w->q_P, w->q_T);
    for (int i = 0; i < p->entries; i++) w->jac[i] = all(0.0);
    add_sums(&p->jacobian, w->jac, w->items);
}

#endif

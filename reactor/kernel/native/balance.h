/* Balances of a tube (along its length) and of a stirred tank (in time): slopes, totals, the matrix of a step. */
#ifndef REACTOR_BALANCE_H
#define REACTOR_BALANCE_H

#include "light.h"

/* The case in each lane. A tube's unknowns change along z [m], a tank's in time [s] at constant P and Tc. */
typedef struct {
    int tank; /* all lanes alike */
    lane flow, wall_loss, sleeve, inverse_coolant;                 /* kg/s, 1/s, W/m, K/W */
    lane area, drag;                                               /* m2; friction flow^2/(2 D A^2) */
    lane volume, length, feed_heat, inlet, coolant, limited;       /* tank: m3, m, W, K, W/K, 1 where finite */
    lane *feed, *A, *low_A;                                        /* mol/kg, and rate constants in their own unit */
    Curve conductance[LANES], share[LANES];
    Beam beam;
    lane z; /* position at the start of the step [m] */
} Case;

/* What evaluate() found besides the slopes, for the matrix and the totals. */
typedef struct {
    Heat heat;
    Light light;
    lane S, P, Tc, density, capacity, carried, E, E_c, E_T, E_Tc, renewal, wall, wall_T, wall_Tc, lamp, lamp_T, starts;
} Found;

static void cool(const Case *cs, Found *at)
{
    lane ua, ua_T, share, share_T, T = at->heat.T;
    read_curves(cs->conductance, T, &ua, &ua_T);
    read_curves(cs->share, T, &share, &share_T);
    if (cs->tank) { /* the coolant warms along the wall */
        lane factor[(LANES + 7) / LANES] __attribute__((aligned(64)));
        ua = ua * cs->length, ua_T = ua_T * cs->length;
        for (int j = 0; j < (LANES + 7) / LANES; j++) factor[j] = all(0.0);
        factor[0] = -ua * cs->inverse_coolant;
        exp_all((double *)factor, LANES);
        mask finite = MASK(cs->limited > 0.5);
        lane effective = pick(finite, cs->coolant * (1.0 - factor[0]), ua), reach = T - cs->inlet;
        at->wall = effective * reach, at->wall_Tc = all(0.0);
        at->wall_T = effective + pick(finite, factor[0], all(1.0)) * ua_T * reach;
        share = share * cs->length, share_T = share_T * cs->length;
    } else {
        lane reach = T - at->Tc;
        at->wall = ua * reach, at->wall_T = ua + ua_T * reach, at->wall_Tc = -ua;
    }
    at->lamp = share * cs->sleeve, at->lamp_T = share_T * cs->sleeve;
}

/* Four partial sums, so that no addition waits for the one before. */
static inline lane dot(const lane *restrict a, const lane *restrict b, int n)
{
    lane s0 = all(0.0), s1 = s0, s2 = s0, s3 = s0;
    int i = 0;
    for (; i + 3 < n; i += 4) {
        s0 += a[i] * b[i], s1 += a[i + 1] * b[i + 1], s2 += a[i + 2] * b[i + 2], s3 += a[i + 3] * b[i + 3];
    }
    for (; i < n; i++) s0 += a[i] * b[i];
    return (s0 + s1) + (s2 + s3);
}

/* Energy that enters [W per kg/s, or W/kg], with its slopes, apart from what the reactions set free. */
static void enter(const Case *cs, const lane *h, const lane *n, int K, Found *at)
{
    lane per = 1.0 / (cs->tank ? at->density * cs->volume : cs->flow);
    lane metres = cs->tank ? cs->length : all(1.0);
    at->E = (metres * at->light.power + at->lamp - at->wall) * per;
    at->E_c = metres * at->light.power_c * per;
    at->E_T = (metres * at->light.power_T + at->lamp_T - at->wall_T) * per;
    at->E_Tc = -at->wall_Tc * per;
    at->renewal = cs->tank ? cs->flow * per : all(0.0);
    if (cs->tank) at->E += cs->feed_heat * per - at->renewal * dot(n, h, K);
}

static lane thermal_starts(const Plan *p, const Case *cs, const Work *w)
{
    lane sum = all(0.0);
    for (int i = 0; i < p->starts; i++) sum += w->q[p->reactions + p->start_back[i]];
    return 2.0 * cs->area * sum;
}

/* Totals per metre (tube) or of the vessel: photons, their power, what passes, starts, heat of reaction, wall,
   lamp heat, coolant, residence. */
static void totals(const Plan *p, const Case *cs, const Found *at, const Work *w, lane heat, lane *out)
{
    lane metres = cs->tank ? cs->length : all(1.0), mass = at->density * (cs->tank ? cs->volume : cs->area);
    out[0] = metres * at->light.photons, out[1] = metres * at->light.power, out[2] = metres * at->light.outer;
    out[3] = thermal_starts(p, cs, w);
    out[4] = heat;
    out[5] = at->wall, out[6] = at->lamp, out[7] = at->wall + metres * cs->sleeve - at->lamp;
    out[8] = mass / cs->flow;
}

/* Slopes f of the unknowns y (species, S, P, Tc, T) and the totals; leaves rates in w, the rest in `at`. */
static inline void evaluate(const Plan *p, const Case *cs, const lane *y, lane *f, lane *total, Work *w, Found *at,
                            int deep)
{
    int K = p->species;
    lane T = y[K + 3];
    at->S = y[K], at->P = y[K + 1], at->Tc = y[K + 2];
    mask real = MASK(T > 50.0) & MASK(T < 10000.0) & MASK(at->S > 0.0) & MASK(at->P > 0.0);
    T = pick(real, T, all(__builtin_nan("")));
    at->heat.T = T, at->heat.inverse = 1.0 / T, at->heat.log = log_lane(T);
    at->heat.concentration = at->P * at->heat.inverse / R_GAS;
    at->density = at->heat.concentration / at->S;
    for (int s = 0; s < K; s++) w->c[s] = at->density * y[s];
    w->c[K] = all(1.0);
    thermo(p, &at->heat, w->cp, w->h, w->g);
    absorb(&cs->beam, w->c[p->chlorine], T, w, &at->light);
    constants(p, cs->A, cs->low_A, &at->heat, at->light.J, cs->wall_loss, w, deep);
    rates(p, w);
    cool(cs, at);
    enter(cs, w->h, y, K, at);
    at->capacity = dot(y, w->cp, K);
    lane scale = cs->tank ? 1.0 / at->density : cs->area / cs->flow, h_f;
    for (int s = 0; s < K; s++) f[s] = scale * w->w[s];
    if (cs->tank)
        for (int s = 0; s < K; s++) f[s] += at->renewal * (cs->feed[s] - y[s]);
    h_f = dot(w->h, f, K);
    f[K] = all(0.0);
    f[K + 1] = cs->tank ? all(0.0) : -cs->drag / at->density;
    f[K + 2] = cs->tank ? all(0.0) : (at->wall + cs->sleeve - at->lamp) * cs->inverse_coolant;
    f[K + 3] = (at->E - h_f) / at->capacity;
    if (total) totals(p, cs, at, w, cs->tank ? -cs->volume * dot(w->h, w->w, K) : -cs->flow * h_f, total);
}

/* Derivatives at the state just evaluated (deep); what form() needs of it is kept while the stages move on. */
static void differentiate(const Plan *p, const Found *at, Work *w)
{
    slopes(p, &at->heat, w);
    derivatives(p, &at->heat, at->light.J_c, at->light.J_T, at->S, at->P, w);
    for (int s = 0; s < p->species; s++) w->base_h[s] = w->h[s], w->base_cp[s] = w->cp[s];
}

/* Rows of S, P, Tc and the corner of the matrix. */
static void border(const Plan *p, const Case *cs, const Found *at, const lane *f, lane shift, const lane *n, Work *w,
                   lane *m)
{
    int K = p->species;
    const int32_t *x = p->corner;
    lane by_density = at->E_c * at->density * n[p->chlorine] - (cs->tank ? at->E : all(0.0)), drag = f[K + 1];
    lane warmth = dot(w->base_cp, f, K), warming = all(0.0);
    for (int s = 0; s < K; s++) warming += n[s] * capacity_slope(p, &at->heat, s);
    warmth += f[K + 3] * warming;
    m[x[0]] = all(1.0);
    m[x[4]] = -drag / at->S, m[x[5]] = shift + drag / at->P, m[x[7]] = -drag * at->heat.inverse;
    m[x[10]] = shift, m[x[15]] = at->capacity * (shift + at->renewal) + warmth - at->E_T;
    m[x[15]] += by_density * at->heat.inverse;
    m[x[12]] = by_density / at->S, m[x[13]] = -by_density / at->P, m[x[14]] = -at->E_Tc;
    if (cs->tank) return;
    m[x[10]] -= at->wall_Tc * cs->inverse_coolant;
    m[x[11]] = -(at->wall_T - at->lamp_T) * cs->inverse_coolant;
}

/* shift I - J over the unknowns; the row of T is cp * (row of T) + sum h * (row of species), see combine(). */
static void form(const Plan *p, const Case *cs, const Found *at, const lane *y, const lane *f, lane shift, Work *w)
{
    int K = p->species;
    lane *m = w->matrix, scale = cs->tank ? 1.0 / at->density : cs->area / cs->flow, by_n = -scale * at->density;
    for (int i = 0; i < p->filled; i++) m[i] = all(0.0);
    for (int i = 0; i < p->entries; i++) m[p->entry_at[i]] = by_n * w->jac[i];
    for (int s = 0; s < K; s++) {
        lane moving = cs->tank ? f[s] : all(0.0);
        m[p->diagonal[s]] += shift + at->renewal;
        m[p->species_S[s]] = -scale * w->w_S[s] - moving / at->S;
        m[p->species_P[s]] = -scale * w->w_P[s] + moving / at->P;
        m[p->species_T[s]] = -scale * w->w_T[s] - moving * at->heat.inverse;
        m[p->S_species[s]] = all(-1.0);
        m[p->T_species[s]] = w->base_h[s] * (shift + at->renewal) + f[K + 3] * w->base_cp[s];
    }
    m[p->T_species[p->chlorine]] -= at->E_c * at->density;
    border(p, cs, at, f, shift, y, w, m);
}

/* Right-hand side r of the unknowns -> that of the matrix made by form(); returns sum h r over species. */
static inline lane combine(const Plan *p, const lane *h, lane capacity, lane *r)
{
    int K = p->species;
    lane h_r = dot(h, r, K);
    r[K] = all(0.0);
    r[K + 3] = capacity * r[K + 3] + h_r;
    return h_r;
}

#endif

/* Single points for Python: rates at any composition, and a case's slopes, matrix and steady composition. */
#ifndef REACTOR_POINTS_H
#define REACTOR_POINTS_H

#include "march.h"

#if LANES == 1

#define COLD 1e-3   /* s; first time step towards rest, from anywhere */
#define WARM 1e3    /* s; the same from a composition at rest close by */
#define PATIENCE 60 /* steps from a composition close by before the search begins again from the feed */
#define FASTER 10.0  /* by which it grows as long as it holds */

static void dense_rates(const Plan *p, const Heat *at, Work *w, Rates *r)
{
    int K = p->species;
    slopes(p, at, w);
    derivatives(p, at, all(0.0), all(0.0), all(1.0), all(1.0), w);
    for (int i = 0; i < p->entries; i++) w->matrix[p->entry_at[i]] = w->jac[i];
    for (int s = 0; s < K; s++)
        for (int e = p->row[s]; e < p->row[s + 1]; e++)
            if (p->column[e] < K) r->by_c[s * K + p->column[e]] = w->matrix[e];
    /* the usual collider acts through the total: the same for every species */
    for (int i = 0; i < p->reactions; i++) w->q_S[i] = all(0.0);
    for (int b = 0; b < p->bodies; b++) {
        int reaction = b < p->colliders ? p->collider_reaction[b] : p->fall_reaction[b - p->colliders];
        w->q_S[reaction] = p->usual[b] * w->items[p->items + 1 + b];
    }
    for (int j = 0; j < p->reactions; j++) {
        w->q_T[j] = w->slope[j] * w->q[j], w->q_P[j] = all(0.0);
        if (j >= p->first_back)
            w->q_T[j] -= (w->slope[j] - w->e[j - p->first_back]) * w->q[p->reactions + j - p->first_back];
    }
    const lane *c = w->c;
    int ph = p->photolysis;
    w->q_T[ph] = all(0.0), w->q_P[ph] = c[p->slot[0][ph]] * c[p->slot[1][ph]] * c[p->slot[2][ph]];
    for (int s = 0; s < K; s++) w->w_S[s] = w->w_P[s] = w->w_T[s] = all(0.0);
    add_three(&p->production, w->w_S, w->w_P, w->w_T, w->q_S, w->q_P, w->q_T);
    for (int s = 0; s < K; s++) {
        for (int k = 0; k < K; k++) r->by_c[s * K + k] += w->w_S[s];
        r->by_T[s] = w->w_T[s], r->by_J[s] = w->w_P[s];
    }
}

static int rates_at(const Plan *p, Rates *r)
{
    Work w;
    Case cs;
    Totals t;
    Room room;
    int K = p->species;
    if (!make_room(&room, p, 1, 1, &w, &cs, &t)) return 0;
    Heat at = {.T = r->T, .inverse = 1.0 / r->T, .log = log_lane(r->T), .concentration = all(0.0)};
    for (int s = 0; s < K; s++) w.c[s] = r->c[s], at.concentration += r->c[s];
    w.c[K] = 1.0;
    thermo(p, &at, w.cp, w.h, w.g);
    constants(p, r->A, r->low_A, &at, r->J, r->wall_loss, &w, 1);
    rates(p, &w);
    for (int s = 0; s < K; s++) r->cp_slope[s] = capacity_slope(p, &at, s);
    memcpy(r->cp, w.cp, K * sizeof(double)), memcpy(r->h, w.h, K * sizeof(double));
    memcpy(r->g, w.g, K * sizeof(double)), memcpy(r->production, w.w, K * sizeof(double));
    memcpy(r->forward, w.q, p->reactions * sizeof(double));
    memset(r->reverse, 0, p->reactions * sizeof(double));
    memcpy(r->reverse + p->first_back, w.q + p->reactions, p->back * sizeof(double));
    if (r->by_c) dense_rates(p, &at, &w, r);
    free(room.block);
    return 1;
}

/* Undo combine() and the bordering: the dense Jacobian of the unknowns n, P, Tc, T. */
static void dense_jacobian(const March *m, double *jacobian)
{
    const Plan *p = m->p;
    int K = p->species, N = K + BORDER, M = N - 1;
    const double *matrix = m->w->matrix;
    double by_S[K + BORDER], *full = calloc((size_t)N * N, sizeof(double));
    if (!full) return;
    for (int i = 0; i < N; i++)
        for (int e = p->row[i]; e < p->row[i + 1]; e++) full[i * N + p->column[e]] = -matrix[e];
    for (int i = 0; i < N; i++) by_S[i] = full[i * N + K];
    for (int i = 0; i < N; i++)
        for (int k = 0; k < N; k++) {
            if (i == K || k == K) continue;
            double value = full[i * N + k] + (k < K ? by_S[i] : 0.0);
            if (i == K + 3) {
                for (int s = 0; s < K; s++)
                    value -= m->w->base_h[s] * (full[s * N + k] + (k < K ? by_S[s] : 0.0));
                value /= m->at->capacity;
            }
            jacobian[(i < K ? i : i - 1) * M + (k < K ? k : k - 1)] = value;
        }
    free(full);
}

static void set_point(March *m, const double *y)
{
    int K = m->p->species;
    double total = 0.0;
    for (int s = 0; s < K; s++) m->w->y[s] = y[s], total += y[s];
    m->w->y[K] = total;
    for (int i = 0; i < 3; i++) m->w->y[K + 1 + i] = y[K + i];
}

static void slope_at(March *m, const Point *at)
{
    int K = m->p->species;
    set_point(m, at->y);
    evaluate(m->p, m->cs, m->w->y, m->w->base_f, at->totals, m->w, m->at, 1);
    for (int i = 0; i < K + 3; i++) at->f[i] = m->w->base_f[i < K ? i : i + 1];
    if (!at->jacobian) return;
    differentiate(m->p, m->at, m->w);
    form(m->p, m->cs, m->at, m->w->y, m->w->base_f, 0.0, m->w);
    dense_jacobian(m, at->jacobian);
}

/* Row of T out of the matrix: temperature is held. */
static void hold(const Plan *p, lane *matrix)
{
    int row = p->species + 3;
    for (int e = p->row[row]; e < p->row[row + 1]; e++) matrix[e] = p->column[e] == row ? 1.0 : 0.0;
}

/* Newton's rule damped by a time step that grows as the balance closes; y holds the start and takes the answer.
   It ends when nothing moves by 1e-9, or when traces move by less than 1e-4 and no less than before: rounding. */
static int rest(March *m, double T, double step, int64_t steps)
{
    const Plan *p = m->p;
    Work *w = m->w;
    int K = p->species, fresh = 1;
    double biggest = 0.0, last = 1e300, least = 1e-6 * w->y[K]; /* a gas of real atoms cannot vanish */
    w->y[K + 3] = T;
    for (int64_t turn = 0; turn < steps; turn++) {
        if (fresh) evaluate(p, m->cs, w->y, w->base_f, NULL, w, m->at, 1), differentiate(p, m->at, w);
        form(p, m->cs, m->at, w->y, w->base_f, 1.0 / step, w);
        hold(p, w->matrix);
        factor(p, w);
        for (int s = 0; s < K; s++) w->rhs[s] = w->base_f[s];
        for (int i = K; i < K + BORDER; i++) w->rhs[i] = 0.0;
        solve(p, w, w->rhs);
        double lowest = 0.0, most = 0.0;
        biggest = 0.0;
        for (int s = 0; s < K; s++) {
            double new = w->y[s] + w->rhs[s], change = w->rhs[s] < 0.0 ? -w->rhs[s] : w->rhs[s];
            lowest = new < lowest ? new : lowest, most = w->y[s] > most ? w->y[s] : most;
            double share = change / ((new < 0.0 ? 0.0 : new) + 1e-14);
            biggest = share > biggest || share != share ? share : biggest;
        }
        fresh = lowest >= -1e-3 * most && biggest == biggest;
        if (!fresh) {
            step *= 0.2;
            continue;
        }
        double total = 0.0;
        for (int s = 0; s < K; s++) {
            double new = w->y[s] + w->rhs[s];
            w->y[s] = new > 0.0 ? new : 0.0, total += w->y[s];
        }
        w->y[K] = total;
        if (!(total > least)) return 0;
        if (step > 1e6 && (biggest < 1e-9 || (biggest > 0.5 * last && biggest < 1e-4))) return 1;
        last = biggest;
        step = step * FASTER < 1e12 ? step * FASTER : 1e12;
    }
    return 0;
}

static int64_t held(March *m, const Point *at, int64_t steps)
{
    int K = m->p->species, M = K + 3;
    set_point(m, at->y);
    for (int64_t i = 0; i < at->count; i++) {
        double T = at->y[i * M + K + 2];
        int near = i > 0 || at->task == TASK_NEAR;
        if (!rest(m, T, near ? WARM : COLD, near ? PATIENCE : steps)) {
            for (int s = 0; s <= K; s++) m->w->y[s] = s < K ? m->cs->feed[s] : 0.0;
            for (int s = 0; s < K; s++) m->w->y[K] += m->w->y[s];
            if (!near || !rest(m, T, COLD, steps)) return i;
        }
        evaluate(m->p, m->cs, m->w->y, m->w->base_f, NULL, m->w, m->at, 0);
        if (!(m->w->base_f[K + 3] - m->w->base_f[K + 3] == 0.0)) return i;
        for (int s = 0; s < M; s++)
            at->y[i * M + s] = m->w->y[s < K ? s : s + 1], at->f[i * M + s] = m->w->base_f[s < K ? s : s + 1];
    }
    return at->count;
}

/* Do a task on the first case of the batch; returns how many points were done, -1 without memory. */
static int point(const Plan *p, Batch *batch, Point *at)
{
    Work w;
    Case cs;
    Found found;
    Totals totals;
    Room room;
    if (!make_room(&room, p, (int)batch->lines, (int)batch->degree, &w, &cs, &totals)) return -1;
    March m = {.p = p, .batch = batch, .w = &w, .cs = &cs, .at = &found, .totals = &totals};
    int64_t done = 1, stations = batch->stations;
    cs.tank = (int)batch->tank, cs.beam.degree = (int)batch->degree;
    m.seat[0].job = -1, batch->stations = 0;
    refill(&m, 0);
    batch->stations = stations;
    if (m.seat[0].job >= 0) {
        if (at->task == TASK_SLOPE) slope_at(&m, at); else done = held(&m, at, m.seat[0].limit);
    }
    free(room.block);
    return (int)done;
}

#endif
#endif

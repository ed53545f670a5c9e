/* Marches cases from a queue: each lane holds one case until it is done or dropped, then takes the next.

   What happens in a lane depends on its own case alone, never on its neighbours, so the digits are the same for any
   order, any number of lanes and any number of threads. */
#ifndef REACTOR_MARCH_H
#define REACTOR_MARCH_H

#include "seat.h"

#define ABSOLUTE 1e-13     /* mol/kg; small and fixed: it must not grow with the relative tolerance */
#define BELOW_ZERO (-1e-14) /* mol/kg; a step that leaves less of a species is taken again, shorter */
#define PROGRESS 1e-13     /* share of a section below which a step counts as stuck */
#define THINNEST 1e-3      /* share of the inlet pressure below which friction has used it up */
#define LIGHT 1e-6           /* error of a step that is let pass in the light that enters, of that of the section */
#define GROWTH 10.0         /* the most by which a step may grow */

/* Weighted error of lane l, nan or huge where the step went wrong; *below: a species went negative. */
static double error_of(const March *m, int l, int *below)
{
    const Work *w = m->w;
    int K = m->p->species;
    double sum = 0.0, rtol = m->seat[l].rtol;
    *below = 0;
    for (int n = 0; n < K + BORDER; n++) {
        if (n == K) continue;
        double old = SEEN(w->y[n], l), new = SEEN(w->next[n], l), size = old < 0.0 ? -old : old;
        double other = new < 0.0 ? -new : new, floor = n < K ? ABSOLUTE : n == K + 1 ? 1e-5 : 1e-8;
        double share = SEEN(w->stage[5][n], l) / (floor + rtol * (other > size ? other : size));
        sum += share * share;
        *below |= n < K && new < BELOW_ZERO;
    }
    double error = root(sum / (K + BORDER - 1)), whole = SEEN(m->cs->beam.whole, l);
    if (m->cs->beam.moves && !m->cs->tank && whole > 0.0) { /* what enters along the step is to be found too */
        double light = SEEN(m->totals->k[5][0], l) + SEEN(m->totals->k[5][2], l);
        light = (light < 0.0 ? -light : light) / (LIGHT * whole);
        error = light > error ? light : error;
    }
    return error;
}

/* Bring T of the accepted lanes onto the enthalpy that light, lamp and wall have left in the gas. */
static void settle(March *m, const mask accepted)
{
    const Plan *p = m->p;
    int K = p->species;
    lane target = all(0.0), found, capacity, *y = m->w->next, total = all(0.0);
    Heat at = {.T = y[K + 3], .inverse = 1.0 / y[K + 3], .log = all(0.0)};
    if (p->inverse) at.log = log_lane(at.T);
    thermo(p, &at, m->w->cp, m->w->h, m->w->g);
    found = dot(y, m->w->h, K), capacity = dot(y, m->w->cp, K);
    EACH(l) {
        const Seat *s = m->seat + l;
        AT(target, l) = s->enthalpy + (s->total[1] + s->total[6] - s->total[5]) / s->flow;
    }
    lane moved = y[K + 3] + (target - found) / capacity;
    if (!m->cs->tank) y[K + 3] = pick(accepted, moved, y[K + 3]);
    for (int s = 0; s < K; s++) total += y[s];
    y[K] = total;
}

/* Look for the hottest point and the end of the chlorine inside the step of lane l, by its dense output.
   Further events on the path (a change of class, say) belong here: read them from along() in the same way. */
static void look(March *m, int l, double h)
{
    Seat *seat = m->seat + l;
    const Work *w = m->w;
    int T = m->p->species + 3, cl = m->p->chlorine;
    double a = SEEN(w->y[T], l), b = SEEN(w->next[T], l), c, d, low = 0.0, high = 1.0;
    dense((const double *)&w->stage[0][T] + l, (w->stage[1] - w->stage[0]) * LANES, &c, &d);
    double A = -3.0 * d, B = 2.0 * (d - c), C = b - a + c, D = B * B - 4.0 * A * C; /* slope A s2 + B s + C */
    double place[3] = {1.0, 1.0, 1.0};
    if (D >= 0.0) {
        double q = -0.5 * (B + (B < 0.0 ? -root(D) : root(D)));
        place[1] = q / A, place[2] = C / q;
    }
    for (int i = 0; i < 3; i++) {
        if (!(place[i] >= 0.0 && place[i] <= 1.0)) continue;
        double there = along(a, b, c, d, place[i]);
        if (there > seat->hottest) seat->hottest = there, seat->hottest_at = seat->z + place[i] * h;
    }
    double limit = EXHAUSTED * seat->most_chlorine;
    a = SEEN(w->y[cl], l), b = SEEN(w->next[cl], l);
    if (!(a > limit && b <= limit) || seat->exhausted_at >= 0.0) return;
    dense((const double *)&w->stage[0][cl] + l, (w->stage[1] - w->stage[0]) * LANES, &c, &d);
    for (int i = 0; i < 50; i++) {
        double s = 0.5 * (low + high);
        if (along(a, b, c, d, s) > limit) low = s; else high = s;
    }
    seat->exhausted_at = seat->z + high * h;
}

/* Take over the accepted step of lane l; the next section or the next case where it ends one. */
static void commit(March *m, int l, double error)
{
    Seat *seat = m->seat + l;
    const double *section = section_of(m, seat);
    int N = m->p->species + BORDER, fill = m->batch->stations - 1;
    double h = SEEN(m->h, l), left = section[S_STOP] - seat->z, held = error < 1e-12 ? 1e-12 : error;
    double by = 0.9 / root(root(held));
    int ends = h >= left * (1.0 - 1e-12);
    look(m, l, h);
    if (m->cs->tank) for (int n = 0; n < TOTALS; n++) seat->total[n] = 0.0;
    for (int i = 1; m->batch->stations && i <= fill; i++)
        if (!keep(m, l, seat->z + h * i / (fill + 1), (double)i / (fill + 1), m->w->next))
            return finish(m, l, STATUS_MEMORY);
    seat->z = ends ? section[S_STOP] : seat->z + h;
    for (int n = 0; n < N; n++) AT(m->w->y[n], l) = SEEN(m->w->next[n], l);
    int keeps = m->batch->stations || (ends && seat->section + 1 == links_of(m, seat->job)[L_SECTIONS]);
    if (keeps && !keep(m, l, seat->z, 1.0, m->w->y)) return finish(m, l, STATUS_MEMORY);
    by = by > GROWTH ? GROWTH : by < 0.2 ? 0.2 : by;
    seat->h = h * (seat->again && by > 1.0 ? 1.0 : by), seat->again = 0, seat->rejections = 0;
    if (SEEN(m->w->y[N - 3], l) < THINNEST * case_of(m, seat->job)[C_P]) {
        finish(m, l, STATUS_PRESSURE);
        return refill(m, l);
    }
    if (!ends) return;
    if (++seat->section == links_of(m, seat->job)[L_SECTIONS]) {
        finish(m, l, STATUS_DONE);
        refill(m, l);
    } else if (!begin(m, l)) {
        finish(m, l, STATUS_MIXING);
        refill(m, l);
    }
}

/* Shorten the step of lane l and try again; drop the case where it gets nowhere. */
static void refuse(March *m, int l, double error, int below)
{
    Seat *seat = m->seat + l;
    const double *section = section_of(m, seat);
    double by = error < 1e8 ? 0.9 / root(root(error)) : 0.1, length = section[S_STOP] - section[S_START];
    by = below && by > 0.5 ? 0.5 : by < 0.1 ? 0.1 : by > 0.9 ? 0.9 : by;
    seat->h = SEEN(m->h, l) * by, seat->again = 1, seat->rejections++;
    if (seat->h > PROGRESS * length && seat->rejections < 60) return;
    finish(m, l, below ? STATUS_NEGATIVE : error < 1e300 ? STATUS_STUCK : STATUS_WRONG);
    refill(m, l);
}

static void advance(March *m, double now)
{
    lane h = all(1e-30);
    mask accepted = MASK(h < 0.0);
    double error[LANES] = {0.0}, old[LANES][TOTALS];
    int below[LANES] = {0}, fresh = 0;
    EACH(l) {
        Seat *seat = m->seat + l;
        if (seat->job < 0) continue;
        double left = section_of(m, seat)[S_STOP] - seat->z;
        AT(h, l) = seat->h * 1.01 >= left ? left : seat->h > 0.5 * left ? 0.5 * left : seat->h;
        fresh |= !seat->again;
    }
    m->h = h;
    EACH(l) AT(m->cs->z, l) = m->seat[l].job < 0 ? 0.0 : m->seat[l].z;
    if (fresh) prepare(m->p, m->cs, m->w, m->at, m->totals);
    take_step(m->p, m->cs, h, m->w, m->at, m->totals);
    EACH(l) {
        Seat *seat = m->seat + l;
        if (seat->job < 0) continue;
        error[l] = error_of(m, l, below + l);
        seat->steps++, seat->evaluations += STAGES;
        if (!(error[l] <= 1.0) || below[l]) continue;
        ((int64_t *)&accepted)[l] = -1;
        for (int n = 0; n < TOTALS && !m->cs->tank; n++) {
            double sum = old[l][n] = seat->total[n];
            for (int j = 0; j < 4; j++) sum += STAGE_A[3][j] * SEEN(m->totals->k[j][n], l);
            seat->total[n] = sum + SEEN(m->totals->k[4][n], l) + SEEN(m->totals->k[5][n], l);
            seat->total_before[n] = old[l][n];
        }
    }
    settle(m, accepted);
    EACH(l) {
        Seat *seat = m->seat + l;
        if (seat->job < 0) continue;
        if (((int64_t *)&accepted)[l]) commit(m, l, error[l]); else refuse(m, l, error[l], below[l]);
        if (seat->job < 0 || (seat->steps < seat->limit && now - seat->begun < seat->seconds)) continue;
        finish(m, l, seat->steps >= seat->limit ? STATUS_STEPS : STATUS_SECONDS);
        refill(m, l);
    }
}


/* Solve all cases of a batch; 0 where there is no memory for it. */
static int march(const Plan *p, Batch *batch)
{
    Work w;
    Case cs;
    Found at;
    Totals totals;
    Room room;
    if (!make_room(&room, p, (int)batch->lines, (int)batch->degree, &w, &cs, &totals)) return 0;
    March m = {.p = p, .batch = batch, .w = &w, .cs = &cs, .at = &at, .totals = &totals};
    int busy = 0;
    cs.tank = (int)batch->tank, cs.beam.degree = (int)batch->degree;
    EACH(l) m.seat[l].job = -1;
    EACH(l) refill(&m, l);
    double now = seconds_now();
    for (int turn = 1;; turn++) {
        busy = 0;
        EACH(l) busy |= m.seat[l].job >= 0;
        if (!busy) break;
        if (turn % 16 == 0) now = seconds_now();
        advance(&m, now);
    }
    free(room.block);
    return 1;
}

#endif

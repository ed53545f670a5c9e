/* Marches cases from a queue: each lane holds one case until it is done or dropped, then takes the next.

   What happens in a lane depends on its own case alone, never on its neighbours, so the digits are the same for any
   order, any number of lanes and any number of threads. */
#ifndef REACTOR_MARCH_H
#define REACTOR_MARCH_H

#include "room.h"
#include "batch.h"

#define ABSOLUTE 1e-13     /* mol/kg; small and fixed: it must not grow with the relative tolerance */
#define BELOW_ZERO (-1e-14) /* mol/kg; a step that leaves less of a species is taken again, shorter */
#define PROGRESS 1e-13     /* share of a section below which a step counts as stuck */
#define THINNEST 1e-3      /* share of the inlet pressure below which friction has used it up */
#define FIRST_STEP 1e-6    /* share of a section tried first */
#define GROWTH 6.0         /* the most by which a step may grow */
#define EXHAUSTED 1e-6     /* share of the chlorine met so far at which it counts as gone */

typedef struct {
    int64_t job;           /* -1: idle */
    int section, rejections, again; /* again: the last step was refused */
    double z, h, enthalpy, flow, begun, seconds, rtol, most_chlorine;
    double hottest, hottest_at, exhausted_at;
    int64_t steps, limit, evaluations;
    double total[TOTALS], total_before[TOTALS];
    double *rows;          /* stations kept so far */
    int64_t count, room;
} Seat;

typedef struct {
    const Plan *p;
    Batch *batch;
    Work *w;
    Case *cs;
    Found *at;
    Totals *totals;
    Seat seat[LANES];
    lane h;
    int64_t next;
} March;

static const double *case_of(const March *m, int64_t job) { return m->batch->cases + job * CASE_REALS; }
static const int64_t *links_of(const March *m, int64_t job) { return m->batch->links + job * CASE_LINKS; }
static const double *section_of(const March *m, const Seat *seat)
{
    return m->batch->sections + (links_of(m, seat->job)[L_SECTION] + seat->section) * SECTION_REALS;
}
static const int64_t *section_links(const March *m, const Seat *seat)
{
    return m->batch->section_links + (links_of(m, seat->job)[L_SECTION] + seat->section) * SECTION_LINKS;
}

static Curve curve_of(const March *m, int64_t at)
{
    const double *c = m->batch->pool + at;
    return (Curve){c[0], c[1], c + 3, (int)c[2] - 1};
}

/* Keep the state of lane l, at share s of the step just taken (1: its end). */
static int keep(March *m, int l, double z, double s, const lane *state)
{
    Seat *seat = m->seat + l;
    int K = m->p->species;
    int64_t wide = K + ROW_MORE;
    if (seat->count == seat->room) {
        int64_t room = seat->room ? 2 * seat->room : 64;
        double *rows = realloc(seat->rows, (size_t)(room * wide) * sizeof(double));
        if (!rows) return 0;
        seat->rows = rows, seat->room = room;
    }
    double *row = seat->rows + seat->count++ * wide, *y = row + 2;
    row[0] = z, row[1] = seat->flow;
    for (int n = 0; n < K + BORDER; n++) {
        double value = SEEN(state[n], l), c, d;
        if (s < 1.0) {
            dense((double *)&m->w->stage[0][n] + l, (m->w->stage[1] - m->w->stage[0]) * LANES, &c, &d);
            value = along(SEEN(m->w->y[n], l), value, c, d, s);
        }
        if (n != K) y[n < K ? n : n - 1] = value;
    }
    for (int n = 0; n < TOTALS; n++) {
        double c, d;
        dense((double *)&m->totals->k[0][n] + l, TOTALS * LANES, &c, &d);
        y[K + 3 + n] = s < 1.0 ? along(seat->total_before[n], seat->total[n], c, d, s) : seat->total[n];
    }
    return 1;
}

/* Hand the case in lane l back with its status and free the lane. */
static void finish(March *m, int l, int status)
{
    Seat *seat = m->seat + l;
    double *out = m->batch->results + seat->job * RESULT_REALS;
    int64_t *count = m->batch->counts + seat->job * RESULT_COUNTS;
    const lane *y = m->w->y + m->p->species;
    out[0] = seat->z, out[1] = SEEN(y[3], l), out[2] = SEEN(y[1], l), out[3] = seat->hottest, out[4] = seat->hottest_at;
    out[5] = seat->exhausted_at, out[6] = seat->h;
    count[0] = status, count[1] = seat->steps, count[2] = seat->evaluations, count[3] = seat->count;
    m->batch->paths[seat->job] = seat->rows;
    seat->rows = NULL, seat->room = seat->count = 0, seat->job = -1;
}

static void load_beam(March *m, int l, const double *section, const int64_t *link)
{
    Beam *beam = &m->cs->beam;
    const double *pool = m->batch->pool;
    int lines = (int)link[S_LINES], degree = (int)link[S_DEGREE], all_rows = m->batch->degree + 1;
    AT(beam->path, l) = section[S_PATH], AT(beam->area, l) = section[S_AREA], AT(beam->middle, l) = section[S_MIDDLE];
    AT(beam->half, l) = section[S_HALF], AT(beam->fixed, l) = section[S_FIXED];
    AT(beam->mean_energy, l) = section[S_MEAN_ENERGY];
    AT(beam->is_fixed, l) = 0;
    ((int64_t *)&beam->is_fixed)[l] = -(int64_t)(link[S_IS_FIXED] != 0);
    for (int j = 0; j < m->batch->lines; j++) {
        AT(beam->entering[j], l) = j < lines ? pool[link[S_ENTERING] + j] : 0.0;
        AT(beam->energy[j], l) = j < lines ? pool[link[S_ENERGY] + j] : 0.0;
        for (int i = 0; i < all_rows; i++)
            AT(beam->sigma[j * all_rows + i], l) =
                j < lines && i <= degree ? pool[link[S_SIGMA] + j * (degree + 1) + i] : 0.0;
    }
    beam->absorbed[l] = curve_of(m, link[S_ABSORBED]), beam->transmitted[l] = curve_of(m, link[S_TRANSMITTED]);
    beam->even[l] = curve_of(m, link[S_EVEN]), beam->along[l] = curve_of(m, link[S_ALONG]);
    beam->lines = 0, beam->degree = m->batch->degree, beam->moves = 0;
    EACH(i) {
        const int64_t *its = m->seat[i].job < 0 ? NULL : section_links(m, m->seat + i);
        beam->lines = its && its[S_LINES] > beam->lines ? (int)its[S_LINES] : beam->lines;
        beam->moves |= its && its[S_MOVES];
    }
    lane here = all(section[S_START]), scale, none;
    read_curves(beam->along, here, &scale, &none);
    AT(beam->scale, l) = SEEN(scale, l) > 0.0 ? SEEN(scale, l) : 0.0;
}

/* Enthalpy [J/mol] and cp [J/mol/K] of species s. */
static void heat_of(const Plan *p, int s, double T, double *h, double *cp)
{
    const double *a = (T > p->t_mid[s] ? p->high : p->low) + s;
    int K = p->species;
    *cp = a[0] + T * (a[K] + T * (a[2 * K] + T * (a[3 * K] + T * a[4 * K])));
    *h = a[10 * K] + T * (a[5 * K] + T * (a[6 * K] + T * (a[7 * K] + T * (a[8 * K] + T * a[9 * K]))));
}

static double enthalpy_of(const March *m, int l, double T, double *capacity)
{
    double sum = 0.0, h, cp;
    *capacity = 0.0;
    for (int s = 0; s < m->p->species; s++) {
        double n = SEEN(m->w->y[s], l);
        heat_of(m->p, s, T, &h, &cp);
        sum += n * h, *capacity += n * cp;
    }
    return sum;
}

/* Mix what a section injects into the gas of lane l at constant enthalpy; 0 where no temperature is found. */
static int inject(March *m, int l, const double *section, const double *moles)
{
    const Plan *p = m->p;
    Seat *seat = m->seat + l;
    int K = p->species;
    double T = SEEN(m->w->y[K + 3], l), capacity, total = 0.0;
    double enthalpy = seat->flow * enthalpy_of(m, l, T, &capacity) + section[S_HEAT], flow = seat->flow + section[S_ADDED];
    for (int s = 0; s < K; s++) {
        double n = (seat->flow * SEEN(m->w->y[s], l) + moles[s]) / flow;
        AT(m->w->y[s], l) = n, total += n;
    }
    AT(m->w->y[K], l) = total;
    seat->flow = flow;
    for (int i = 0; i < 50; i++) {
        double step = (enthalpy / flow - enthalpy_of(m, l, T, &capacity)) / capacity, next = T + step;
        next = next < 0.5 * T ? 0.5 * T : next > 2.0 * T ? 2.0 * T : next;
        T = next;
        if (step < 1e-12 * T && step > -1e-12 * T) {
            AT(m->w->y[K + 3], l) = T;
            return 1;
        }
    }
    return 0;
}

/* Start the section that lane l has come to: light, injection, enthalpy account, first step. */
static int begin(March *m, int l)
{
    Seat *seat = m->seat + l;
    const double *section = section_of(m, seat);
    const int64_t *link = section_links(m, seat);
    int K = m->p->species;
    double capacity, length = section[S_STOP] - section[S_START];
    load_beam(m, l, section, link);
    AT(m->cs->sleeve, l) = section[S_SLEEVE];
    if (link[S_INJECTED] >= 0 && !inject(m, l, section, m->batch->pool + link[S_INJECTED])) return 0;
    AT(m->cs->flow, l) = seat->flow;
    AT(m->cs->drag, l) = case_of(m, seat->job)[C_DRAG] * seat->flow * seat->flow;
    seat->enthalpy = enthalpy_of(m, l, SEEN(m->w->y[K + 3], l), &capacity);
    memcpy(seat->total_before, seat->total, sizeof seat->total);
    seat->enthalpy -= (seat->total[1] + seat->total[6] - seat->total[5]) / seat->flow;
    double chlorine = SEEN(m->w->y[m->p->chlorine], l);
    if (chlorine > seat->most_chlorine) seat->most_chlorine = chlorine;
    if (chlorine > EXHAUSTED * seat->most_chlorine) seat->exhausted_at = -1.0;
    seat->z = section[S_START], seat->h = FIRST_STEP * length, seat->again = 0, seat->rejections = 0;
    if (SEEN(m->w->y[K + 3], l) > seat->hottest)
        seat->hottest = SEEN(m->w->y[K + 3], l), seat->hottest_at = seat->z;
    return !m->batch->stations || keep(m, l, seat->z, 1.0, m->w->y);
}

static void load_numbers(March *m, int l, const double *c)
{
    Case *cs = m->cs;
    AT(cs->wall_loss, l) = c[C_WALL_LOSS], AT(cs->inverse_coolant, l) = c[C_INVERSE_COOLANT];
    AT(cs->area, l) = c[C_AREA], AT(cs->volume, l) = c[C_AREA], AT(cs->length, l) = c[C_LENGTH];
    AT(cs->feed_heat, l) = c[C_FEED_HEAT], AT(cs->inlet, l) = c[C_TC], AT(cs->coolant, l) = c[C_COOLANT];
    AT(cs->limited, l) = c[C_LIMITED];
}

/* Seat the next case of the queue in lane l; an idle lane keeps its old numbers and is not looked at. */
static void refill(March *m, int l)
{
    int K = m->p->species;
    Seat *seat = m->seat + l;
    while (m->next < m->batch->count) {
        *seat = (Seat){.job = m->next++, .exhausted_at = -1.0, .hottest = -1.0};
        const double *c = case_of(m, seat->job), *pool = m->batch->pool;
        const int64_t *link = links_of(m, seat->job);
        double total = 0.0;
        load_numbers(m, l, c);
        for (int r = 0; r < m->p->reactions; r++) AT(m->cs->A[r], l) = pool[link[L_A] + r];
        for (int f = 0; f < m->p->falloffs; f++) AT(m->cs->low_A[f], l) = pool[link[L_LOW_A] + f];
        for (int s = 0; s < K; s++) {
            AT(m->w->y[s], l) = pool[link[L_N] + s], total += pool[link[L_N] + s];
            AT(m->cs->feed[s], l) = m->cs->tank ? pool[link[L_FEED] + s] : 0.0;
        }
        AT(m->w->y[K], l) = total, AT(m->w->y[K + 1], l) = c[C_P], AT(m->w->y[K + 2], l) = c[C_TC];
        AT(m->w->y[K + 3], l) = c[C_T];
        m->cs->conductance[l] = curve_of(m, link[L_CONDUCTANCE]), m->cs->share[l] = curve_of(m, link[L_SHARE]);
        seat->flow = c[C_FLOW], seat->rtol = c[C_RTOL], seat->seconds = c[C_SECONDS], seat->limit = link[L_STEPS];
        seat->begun = seconds_now();
        if (begin(m, l)) return;
        finish(m, l, STATUS_MIXING);
    }
}

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
    return root(sum / (K + BORDER - 1));
}

/* Bring T of the accepted lanes onto the enthalpy that light, lamp and wall have left in the gas. */
static void settle(March *m, const mask accepted)
{
    const Plan *p = m->p;
    int K = p->species;
    lane target = all(0.0), found, capacity, *y = m->w->next, total = all(0.0);
    Heat at = {.T = y[K + 3], .inverse = 1.0 / y[K + 3], .log = all(0.0)};
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

/* Seats of the march: a case is seated in a lane, starts its sections there, keeps its stations, and is handed back. */
#ifndef REACTOR_SEAT_H
#define REACTOR_SEAT_H

#include "room.h"
#include "batch.h"

/* The error that steps are judged by is one of third order, of which the solution of fourth order is free: over wide
   random cases ten times the tolerance still leaves conversion, product split and hottest point within it. */
#define LOOSER 10.0
#define LOOSEST 1e-2
#define FIRST_STEP 1e-5    /* share of a section tried first */
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
    const double *c = m->batch->tables[at];
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
    AT(beam->whole, l) = 0.0;
    for (int j = 0; j < lines; j++)
        AT(beam->whole, l) += SEEN(beam->entering[j], l) * (section[S_STOP] - section[S_START]);
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
    if (!p->inverse) return;
    lane log = log_lane(all(T));
    a += (THERMO_ROWS - INVERSE_ROWS) * K;
    *cp += (a[K] + a[0] / T) / T;
    *h += a[K] * SEEN(log, 0) - a[0] / T;
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
        seat->rtol = LOOSER * c[C_RTOL] < LOOSEST ? LOOSER * c[C_RTOL] : LOOSEST;
        seat->flow = c[C_FLOW], seat->seconds = c[C_SECONDS], seat->limit = link[L_STEPS];
        seat->begun = seconds_now();
        if (begin(m, l)) return;
        finish(m, l, STATUS_MIXING);
    }
}

#endif

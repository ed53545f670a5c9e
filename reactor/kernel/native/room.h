/* One block of memory for all rows of a solve, aligned for the widest vectors. */
#ifndef REACTOR_ROOM_H
#define REACTOR_ROOM_H

#include "rodas.h"

typedef struct {
    char *block, *start; /* as reserved, and where it is aligned; NULL while the size is being counted */
    size_t used;
} Room;

static lane *row_of(Room *room, int n)
{
    size_t here = room->used;
    room->used += SIZED(n + 1) * sizeof(double);
    return room->start ? (lane *)(room->start + here) : NULL;
}

static void carve(Room *room, const Plan *p, int lines, int degree, Work *w, Case *cs, Totals *t)
{
    int K = p->species, N = K + BORDER, R = p->reactions, all_steps = R + p->back;
    lane **species[] = {&w->c, &w->cp, &w->h, &w->g, &w->w, &w->w_S, &w->w_P, &w->w_T, &w->base_h, &w->base_cp,
                        &t->row, &cs->feed};
    lane **unknowns[] = {&w->f, &w->y, &w->arg, &w->next, &w->rhs, &w->base_f, &w->pivot, &w->by_z};
    lane **steps[] = {&w->k, &w->q, &w->q_net, &w->q_S, &w->q_P, &w->q_T, &w->slope, &cs->A};
    lane **by_line[] = {&w->tau, w->photon, w->photon + 1, &cs->beam.entering, &cs->beam.energy};
    for (size_t i = 0; i < sizeof species / sizeof *species; i++) *species[i] = row_of(room, K + 1);
    for (size_t i = 0; i < sizeof unknowns / sizeof *unknowns; i++) *unknowns[i] = row_of(room, N);
    for (size_t i = 0; i < sizeof steps / sizeof *steps; i++) *steps[i] = row_of(room, all_steps);
    for (size_t i = 0; i < sizeof by_line / sizeof *by_line; i++) *by_line[i] = row_of(room, lines);
    size_t apart = SIZED(N + 1) / LANES;
    w->stage[0] = row_of(room, (int)(STAGES * apart));
    for (int i = 1; i < STAGES; i++) w->stage[i] = w->stage[0] ? w->stage[0] + i * apart : NULL;
    w->e = row_of(room, all_steps + 4 * p->falloffs);
    w->M = row_of(room, p->bodies), w->order_M = row_of(room, p->bodies), w->fall_slope = row_of(room, p->falloffs);
    w->fall_ratio = row_of(room, p->falloffs), w->fall_power = row_of(room, p->falloffs);
    w->fall_log = row_of(room, 2 * p->falloffs);
    w->items = row_of(room, p->items + 1 + p->bodies), w->jac = row_of(room, p->entries);
    w->matrix = row_of(room, p->filled), cs->low_A = row_of(room, p->falloffs);
    cs->beam.sigma = row_of(room, lines * (degree + 1));
}

static int make_room(Room *room, const Plan *p, int lines, int degree, Work *w, Case *cs, Totals *t)
{
    static const double flat[4] = {0.0};
    memset(w, 0, sizeof *w), memset(cs, 0, sizeof *cs), memset(t, 0, sizeof *t);
    *room = (Room){0};
    carve(room, p, lines, degree, w, cs, t);
    char *block = calloc(room->used + 64, 1);
    if (!block) return 0;
    *room = (Room){.block = block, .start = block + (64 - (uintptr_t)block % 64) % 64};
    carve(room, p, lines, degree, w, cs, t);
    EACH(l) { /* a lane that never gets a case reads these */
        cs->conductance[l] = cs->share[l] = (Curve){0.0, 1.0, flat, 1};
        cs->beam.absorbed[l] = cs->beam.transmitted[l] = cs->conductance[l];
        cs->beam.even[l] = cs->beam.along[l] = cs->conductance[l];
    }
    return 1;
}

#endif

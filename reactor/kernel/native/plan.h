/* The mechanism as flat arrays: what plan.py writes, read in the same order. Species stand in elimination order. */
#ifndef REACTOR_PLAN_H
#define REACTOR_PLAN_H

#include <stdint.h>

#define PLAN_MARK 0x52504b32 /* changes with every change of the order below */
#define THERMO_ROWS 22 /* of which the last INVERSE_ROWS are the terms in 1/T and 1/T2, nought but in NASA9 */
#define INVERSE_ROWS 4
#define BORDER 4 /* unknowns after the species: total moles S, pressure P, coolant temperature Tc, temperature T */
#define TOTALS 9

#define R_GAS 8.31446261815324
#define AVOGADRO 6.02214076e23

/* out[to] += in[from], out[to] -= in[from], out[to] += by * in[from] */
typedef struct {
    int plus, minus, other;
    const int32_t *plus_to, *plus_from, *minus_to, *minus_from, *other_to, *other_from;
    const double *other_by;
} Sum;

typedef struct {
    /* Reactions: [0, fixed) constant rate, then by Arrhenius, of which [first_back, reactions) are reversible.
       k and q hold the forward ones, then the reverse ones. */
    int species, reactions, fixed, first_back, back, photolysis, wall, chlorine;
    int bodies, specials, colliders, falloffs, starts, items, entries, filled, lowers, updates;
    const int32_t *slot[3], *back_slot[3];                      /* species whose product is taken; `species` is 1 */
    const int32_t *special_first, *special_species;             /* third bodies: M = usual * c + sum by * c_k */
    const int32_t *collider_reaction, *fall_reaction;           /* body i: first of colliders, then of fall-offs */
    const int32_t *start_back, *start_body;                     /* reverse steps that free two chlorine atoms */
    Sum equilibrium, production, jacobian;
    const int32_t *item_k, *item_1, *item_2;                    /* dq/dc: by * k[item_k] * c[item_1] * c[item_2] */
    const int32_t *entry_at, *species_S, *species_P, *species_T, *S_species, *T_species, *corner, *diagonal;
    const int32_t *row, *column, *lower_at, *lower_row, *update_first, *update_to; /* sparse elimination */
    const double *b, *E, *change, *order, *back_order, *usual, *special_by, *low_b, *low_E, *troe, *item_by;
    const double *low, *high, *t_mid;                           /* THERMO_ROWS rows of `species` numbers */
    double p_ref, t_mid_least;
    int inverse;                                                /* whether any species has terms in 1/T and 1/T2 */
} Plan;

static inline const int32_t *take(const int32_t **from, int n)
{
    const int32_t *here = *from;
    *from += n;
    return here;
}

static inline const double *take_real(const double **from, int n)
{
    const double *here = *from;
    *from += n;
    return here;
}

static inline void read_sum(Sum *sum, const int32_t **i, const double **x)
{
    sum->plus = *take(i, 1), sum->minus = *take(i, 1), sum->other = *take(i, 1);
    sum->plus_to = take(i, sum->plus), sum->plus_from = take(i, sum->plus);
    sum->minus_to = take(i, sum->minus), sum->minus_from = take(i, sum->minus);
    sum->other_to = take(i, sum->other), sum->other_from = take(i, sum->other);
    sum->other_by = take_real(x, sum->other);
}

static inline void read_sizes(Plan *p, const int32_t **i)
{
    int *sizes[] = {&p->species, &p->reactions, &p->fixed, &p->first_back, &p->back, &p->photolysis, &p->wall,
                    &p->chlorine, &p->bodies, &p->specials, &p->colliders, &p->falloffs, &p->starts, &p->items,
                    &p->entries, &p->filled, &p->lowers, &p->updates};
    for (size_t s = 0; s < sizeof sizes / sizeof *sizes; s++) *sizes[s] = *take(i, 1);
}

static inline void read_lists(Plan *p, const int32_t **i, const double **x)
{
    int K = p->species, N = K + BORDER;
    for (int s = 0; s < 3; s++) p->slot[s] = take(i, p->reactions);
    for (int s = 0; s < 3; s++) p->back_slot[s] = take(i, p->back);
    p->special_first = take(i, p->bodies + 1), p->special_species = take(i, p->specials);
    p->collider_reaction = take(i, p->colliders), p->fall_reaction = take(i, p->falloffs);
    p->start_back = take(i, p->starts), p->start_body = take(i, p->starts);
    read_sum(&p->equilibrium, i, x);
    read_sum(&p->production, i, x);
    read_sum(&p->jacobian, i, x);
    p->item_k = take(i, p->items), p->item_1 = take(i, p->items), p->item_2 = take(i, p->items);
    p->entry_at = take(i, p->entries);
    p->species_S = take(i, K), p->species_P = take(i, K), p->species_T = take(i, K);
    p->S_species = take(i, K), p->T_species = take(i, K), p->corner = take(i, BORDER * BORDER);
    p->diagonal = take(i, N), p->row = take(i, N + 1), p->column = take(i, p->filled);
    p->lower_at = take(i, p->lowers), p->lower_row = take(i, N + 1), p->update_first = take(i, p->lowers + 1);
    p->update_to = take(i, p->updates);
}

static inline void read_plan(Plan *p, const int32_t *ints, const double *reals)
{
    const int32_t *i = ints + 1;
    const double *x = reals;
    read_sizes(p, &i);
    int K = p->species;
    read_lists(p, &i, &x);
    p->b = take_real(&x, p->reactions - p->fixed), p->E = take_real(&x, p->reactions - p->fixed);
    p->change = take_real(&x, p->back);
    p->order = take_real(&x, p->reactions), p->back_order = take_real(&x, p->back);
    p->usual = take_real(&x, p->bodies), p->special_by = take_real(&x, p->specials);
    p->low_b = take_real(&x, p->falloffs), p->low_E = take_real(&x, p->falloffs);
    p->troe = take_real(&x, 5 * p->falloffs), p->item_by = take_real(&x, p->items);
    p->low = take_real(&x, THERMO_ROWS * K), p->high = take_real(&x, THERMO_ROWS * K), p->t_mid = take_real(&x, K);
    p->p_ref = *take_real(&x, 1), p->t_mid_least = *take_real(&x, 1);
    p->inverse = 0;
    for (int n = (THERMO_ROWS - INVERSE_ROWS) * K; n < THERMO_ROWS * K; n++)
        p->inverse |= p->low[n] != 0.0 || p->high[n] != 0.0;
}

#endif

/* Elimination without pivoting in the order and with the fill planned once per mechanism. */
#ifndef REACTOR_SPARSE_H
#define REACTOR_SPARSE_H

#include "rates.h"

/* Factor the matrix in place, row by row; `pivot` receives the reciprocals of the diagonal. */
static void factor(const Plan *p, Work *w)
{
    lane *restrict m = w->matrix, *restrict pivot = w->pivot;
    const int32_t *to = p->update_to;
    for (int i = 0, l = 0; i < p->species + BORDER; i++) {
        for (; l < p->lower_row[i + 1]; l++) {
            int at = p->lower_at[l], k = p->column[at], from = p->diagonal[k] + 1, end = p->row[k + 1];
            lane factor = m[at] * pivot[k];
            m[at] = factor;
            for (; from < end; from++) m[*to++] -= factor * m[from];
        }
        pivot[i] = 1.0 / m[p->diagonal[i]];
    }
}

/* sum of m x over places [from, to) in two partial sums */
static inline lane row_sum(const Plan *p, const lane *restrict m, const lane *restrict x, int from, int to)
{
    lane even = all(0.0), odd = even;
    for (; from + 1 < to; from += 2)
        even += m[from] * x[p->column[from]], odd += m[from + 1] * x[p->column[from + 1]];
    if (from < to) even += m[from] * x[p->column[from]];
    return even + odd;
}

static void solve(const Plan *p, const Work *w, lane *restrict x)
{
    int N = p->species + BORDER;
    for (int i = 0; i < N; i++) x[i] -= row_sum(p, w->matrix, x, p->row[i], p->diagonal[i]);
    for (int i = N - 1; i >= 0; i--)
        x[i] = (x[i] - row_sum(p, w->matrix, x, p->diagonal[i] + 1, p->row[i + 1])) * w->pivot[i];
}

#endif

/* Photolysis in an absorbing gas: every line with its own optical thickness, the field read from a curve. */
#ifndef REACTOR_LIGHT_H
#define REACTOR_LIGHT_H

#include "rates.h"

/* A cubic on an even grid, flat beyond both ends; table holds y, step * dy/dx at every node. */
typedef struct {
    double start, step;
    const double *table;
    int last;
} Curve;

/* The light of one section in each lane; rows over lines, lane by lane. A fixed J replaces the field. */
typedef struct {
    int lines, degree; /* the most of all lanes; missing lines carry no light */
    lane path, area, middle, half, fixed, mean_energy;
    mask is_fixed;
    lane *entering, *energy, *sigma; /* mol/m/s, J/mol, m2 as polynomial: (degree + 1) rows a line, highest last */
    Curve absorbed[LANES], transmitted[LANES];
    Curve even[LANES]; /* J that counts for the radicals over J, by ln of the mean optical thickness */
    Curve along[LANES]; /* what multiplies `entering`, by position [m] */
    lane scale;        /* along[] at the position looked at */
    lane whole;        /* photons of the section where along[] is 1 [mol/s] */
    int moves;         /* whether any along[] is more than a constant */
} Beam;

/* J [1/s] and its derivatives by chlorine c and T; photons [mol/m/s], power [W/m] and what passes, likewise. */
typedef struct {
    lane J, J_c, J_T, photons, photons_c, photons_T, power, power_c, power_T, outer, outer_c, outer_T;
} Light;

/* y and dy/dx of one curve in each lane. */
static inline void read_curves(const Curve *curve, lane x, lane *y, lane *slope)
{
    lane y0, y1, d0, d1, u, step, inside;
    EACH(l) {
        const Curve *own = curve + l;
        double place = (AT(x, l) - own->start) / own->step, held = place > 0.0 ? place : 0.0;
        if (held > own->last) held = own->last;
        int left = (int)held;
        if (left > own->last - 1) left = own->last - 1;
        const double *node = own->table + 2 * left;
        AT(u, l) = held - left, AT(step, l) = own->step, AT(inside, l) = place == held ? 1.0 : 0.0;
        AT(y0, l) = node[0], AT(d0, l) = node[1], AT(y1, l) = node[2], AT(d1, l) = node[3];
    }
    lane a = 3.0 * (y1 - y0) - 2.0 * d0 - d1, b = 2.0 * (y0 - y1) + d0 + d1;
    *y = y0 + u * (d0 + u * (a + u * b));
    *slope = inside * ((d0 + u * (2.0 * a + u * (3.0 * b))) / step);
}

/* Cross-section [m2] of a line and its slope; T is held inside the range of the polynomial. */
static inline lane cross_section(const Beam *beam, int line, lane x, lane *slope)
{
    const lane *a = beam->sigma + line * (beam->degree + 1);
    lane sum = a[beam->degree], by = all(0.0);
    for (int i = beam->degree - 1; i >= 0; i--) by = by * x + sum, sum = sum * x + a[i];
    *slope = by;
    return sum;
}

static inline void add_line(const Beam *beam, int j, lane c, lane log_tau, lane sigma_T, lane sigma,
                            Light *light)
{
    lane g, dg, t, dt;
    read_curves(beam->absorbed, log_tau, &g, &dg);
    read_curves(beam->transmitted, log_tau, &t, &dt);
    lane entering = beam->entering[j] * beam->scale;
    lane thin = entering * AVOGADRO * beam->path / beam->area; /* J over sigma in thin gas */
    lane rate = thin * sigma, both = g + dg, photons = rate * g * c * beam->area;
    lane by_c = rate * both * beam->area, by_T = thin * both * sigma_T;
    lane relative = sigma_T / larger(sigma, all(FEWEST));
    light->J += rate * g, light->J_c += rate * dg, light->J_T += by_T;
    light->photons += photons, light->photons_c += by_c, light->photons_T += by_T * c * beam->area;
    light->power += photons * beam->energy[j], light->power_c += by_c * beam->energy[j];
    light->power_T += by_T * c * beam->area * beam->energy[j];
    light->outer += entering * t, light->outer_c += entering * dt;
    light->outer_T += entering * dt * relative;
}

static void fix_light(const Beam *beam, lane c, Light *light)
{
    lane none = all(0.0), photons = beam->fixed * beam->area;
    mask m = beam->is_fixed;
    light->J = pick(m, beam->fixed, light->J), light->J_c = pick(m, none, light->J_c);
    light->J_T = pick(m, none, light->J_T);
    light->photons = pick(m, photons * c, light->photons), light->photons_c = pick(m, photons, light->photons_c);
    light->photons_T = pick(m, none, light->photons_T);
    light->power = pick(m, photons * c * beam->mean_energy, light->power);
    light->power_c = pick(m, photons * beam->mean_energy, light->power_c);
    light->power_T = pick(m, none, light->power_T), light->outer = pick(m, none, light->outer);
    light->outer_c = pick(m, none, light->outer_c), light->outer_T = pick(m, none, light->outer_T);
}

/* Turn J and its slopes into those that count for radicals which stay where they arise. The mean optical thickness
   is that of each line weighed by entering * sigma. */
static void even_out(const Beam *beam, lane c, const Work *w, Light *light)
{
    lane first = all(0.0), second = all(0.0), first_T = all(0.0), second_T = all(0.0), ratio, slope;
    for (int j = 0; j < beam->lines; j++) {
        lane weight = beam->entering[j] * w->photon[0][j], by = beam->entering[j] * w->photon[1][j];
        first += weight, first_T += by;
        second += weight * w->photon[0][j], second_T += 2.0 * by * w->photon[0][j];
    }
    first = larger(first, all(FEWEST)), second = larger(second, all(FEWEST));
    lane depth = larger(AVOGADRO * c * beam->path * (second / first), all(FEWEST));
    lane log_depth = log_lane(depth);
    read_curves(beam->even, log_depth, &ratio, &slope);
    light->J_c = light->J_c * ratio + light->J * slope / larger(c, all(FEWEST));
    light->J_T = light->J_T * ratio + light->J * slope * (second_T / second - first_T / first);
    light->J *= ratio;
}

/* What chlorine at c [mol/m3] and T [K] makes of the light. */
static void absorb(const Beam *beam, lane c, lane T, Work *w, Light *light)
{
    lane x = (T - beam->middle) / beam->half, none = all(0.0), column = AVOGADRO * c * beam->path;
    mask inside = MASK(x < 1.0) & MASK(x > -1.0);
    x = larger(smaller(x, all(1.0)), all(-1.0));
    memset(light, 0, sizeof *light);
    for (int j = 0; j < beam->lines; j++) {
        lane slope;
        w->photon[0][j] = cross_section(beam, j, x, &slope);
        w->photon[1][j] = pick(inside, slope / beam->half, none);
        w->tau[j] = larger(w->photon[0][j] * column, all(FEWEST));
    }
    log_all((double *)w->tau, beam->lines * LANES);
    for (int j = 0; j < beam->lines; j++)
        add_line(beam, j, c, w->tau[j], w->photon[1][j], w->photon[0][j], light);
    lane by = larger(c, all(FEWEST));
    light->J_c = light->J_c / by, light->outer_c = light->outer_c / by;
    even_out(beam, c, w, light);
    fix_light(beam, c, light);
}

#endif

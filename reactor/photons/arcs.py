r"""
Finite arcs: where along the tube their light enters the gas, and what the ends take.

A photon of slope phi that leaves the lamp at z' enters the gas at z' + h tan(phi), h being the way across, and is
taken up along its way from there to the wall or to an end of the tube. The spread of these ways gives the totals,
exact in a gas of even kappa. Along the tube the light is laid out as a thin gas takes it up (`profile`), and each
station absorbs the share that belongs to its own kappa. What is neglected is that a thick gas takes light up nearer to
where it enters: the tests compare with ray tracing through a gas that bleaches.

A finite isotropic line on the axis of a clear gas, at radius r and height z from the middle of an arc of length L:
G/S = [atan((z + L/2)/r) - atan((z - L/2)/r)]/(4 pi r).
"""

from typing import NamedTuple

import numpy as np

from reactor.curve import Curve, spline_slopes
from reactor.photons import spread
from reactor.photons.laws import gauss

NEAR = (0.3, 0.8, 1.6, 3.2)  # breaks of the sections beside the end of an arc, over the way to mid-gap
FINE, LEAST, MOST = 0.5, 24, 800  # step of the profile over the way to mid-gap; fewest and most steps
INNER = 3  # nodes in each overlap of an arc's light with a section


class Along(NamedTuple):
    """
    The light of one arc along the tube, per photon that passes the window.

    entering: (s,) share entering the gas in each section. wall, ends: (s, lengths) spreads of path of the light of a
    section (adding up to its share) by where it would leave: at a wall or in the lamp, or through an end.
    """

    entering: np.ndarray
    wall: np.ndarray
    ends: np.ndarray


def edges(arcs, reach, length):
    """
    Return the positions of the sections' borders.

    Parameters
    ----------
    arcs : sequence of (start, stop)
        Ends of every arc. [m]
    reach : float
        Way from the lamp to the middle of the gas. [m]
    length : float
        Length of the tube. [m]
    """
    found = {0.0, float(length)}
    for start, stop in arcs:
        for end in (start, stop):
            found |= {end + side * step * reach for step in NEAR for side in (-1, 1)} | {float(end)}
    inner = sorted(z for z in found if 0.0 < z < length)
    kept = [0.0]
    for z in inner:
        hard = any(z in arc for arc in arcs)
        if z - kept[-1] > 0.15 * reach or hard:
            if hard and kept[-1] > 0.0 and z - kept[-1] <= 0.15 * reach and not any(kept[-1] in arc for arc in arcs):
                kept[-1] = z
            else:
                kept.append(z)
    if length - kept[-1] < 0.15 * reach and len(kept) > 1 and not any(kept[-1] in arc for arc in arcs):
        kept.pop()
    return np.array([*kept, float(length)])


def middle(rays):
    """Return, for each ray, its way to the gas and to the middle of its first stretch [m]."""
    first = rays.first
    number = np.cumsum(first) - 1
    whole = np.bincount(number, (rays.after - rays.before) * _opening(rays))
    return rays.reach[first], rays.reach[first] + whole / 2


def _opening(rays):
    """Return whether a stretch belongs to the first crossing of the gas: no gap in the way, no loss so far."""
    start = np.maximum.accumulate(np.where(rays.first, np.arange(len(rays.ray)), 0))
    straight = abs(rays.reach - rays.reach[start] - (rays.before - rays.before[start])) < 1e-9
    return straight & (rays.weight == rays.weight[start])


def along(rays, slope, weight, arc, borders, gap):
    """
    Return the light of one arc, section by section.

    Parameters
    ----------
    rays : Rays
        Rays in the plane across; shares are taken relative to their sum. [-]
    slope : array, shape (q,)
        Elevations of the rays, 0 to pi/2. [rad]
    weight : array, shape (k, q)
        Share of the passing photons in each ray and slope; adds up to one. [-]
    arc : (start, stop)
        Ends of the arc. [m]
    borders : array, shape (s + 1,)
        From `edges`. [m]
    gap : float
        What path lengths are measured in. [m]
    """
    sections = len(borders) - 1
    entry, centre = middle(rays)
    tangent = np.concatenate((np.tan(slope), -np.tan(slope)))
    stretch = np.concatenate((1 / np.cos(slope), 1 / np.cos(slope)))
    both = np.concatenate((weight, weight), axis=1) / 2
    z, w, row = _starts(entry, centre, tangent, both, arc, borders)
    k, q, _, _ = np.indices(z.shape, sparse=True)
    t = tangent[q]
    with np.errstate(divide="ignore"):
        leave = np.where(t > 0, borders[-1] - z, z) / np.maximum(abs(t), 1e-300) + entry[k]  # way across at the end
    parts: dict = {"wall": [], "ends": []}
    for m in _by_step(rays):
        _stretch(rays, m, leave[rays.ray[m]], w[rays.ray[m]], parts)
    spreads = {}
    for fate, pieces in parts.items():
        depth = np.concatenate([(d * stretch[:, None, None] / gap).ravel() for d, _, _ in pieces])
        amount = np.concatenate([x.ravel() for _, x, _ in pieces])
        where = np.concatenate([row[rays_of].ravel() for _, _, rays_of in pieces])
        lit = amount > 0
        spreads[fate] = spread.spread(depth[lit], amount[lit], where[lit], sections)
    return Along(np.bincount(row.ravel(), w.ravel(), sections), spreads["wall"], spreads["ends"])


def _starts(entry, centre, tangent, weight, arc, borders):
    """Return places of entry, photons and section for (ray, slope, section, node)."""
    start, stop = arc
    length = borders[-1]
    shift = entry[:, None] * tangent  # from the lamp to the entry
    low, high = np.maximum(start + shift, 0.0), np.minimum(stop + shift, length)
    lag = (centre - entry)[:, None] * tangent  # from the entry to where the light is counted
    left, right = borders[:-1] - lag[..., None], borders[1:] - lag[..., None]
    left[..., 0], right[..., -1] = -np.inf, np.inf
    a, b = np.maximum(left, low[..., None]), np.minimum(right, high[..., None])
    span = np.maximum(b - a, 0.0)
    node, share = gauss(INNER)
    z = np.where(span[..., None] > 0, a[..., None] + span[..., None] * node, 0.0)
    amount = weight[..., None, None] * span[..., None] * share / (stop - start)
    row = np.broadcast_to(np.arange(len(borders) - 1)[:, None], z.shape)
    return z, amount, row


def _by_step(rays):
    """Return the numbers of the first, second, ... stretches of all rays."""
    order = np.arange(len(rays.ray)) - np.maximum.accumulate(np.where(rays.first, np.arange(len(rays.ray)), 0))
    return [np.flatnonzero(order == step) for step in range(order.max() + 1)]


def _stretch(rays, m, leave, photons, parts):
    """Add what happens to the light on stretches `m`: it dies at their end, leaves by an end of the tube, or goes on."""
    reach, before, after = (x[m][:, None, None, None] for x in (rays.reach, rays.before, rays.after))
    weight, following = (x[m][:, None, None, None] for x in (rays.weight, rays.next_weight))
    follows = rays.follows[m][:, None, None, None]
    next_reach = np.append(rays.reach[1:], 0.0)[m][:, None, None, None]
    stop = reach + after - before
    alive = (leave > reach) | rays.first[m][:, None, None, None]
    through = alive & (leave >= stop)
    cut = alive & ~through
    number = rays.ray[m]
    depth = np.broadcast_to(after, leave.shape)
    parts["wall"].append((depth, photons * (weight - following) * through, number))
    lost = through & follows & (leave <= next_reach)
    parts["ends"].append((depth, photons * following * lost, number))
    parts["ends"].append((np.clip(before + leave - reach, before, after), photons * weight * cut, number))


def profile(rays, slope, weight, arc, grid):
    """
    Return how light is taken up along the tube by a thin gas, per photon that passes the window.

    Each ray is taken up evenly along its way through the gas, from the entry to the wall or to the end of the tube.

    Parameters
    ----------
    rays, slope, weight, arc
        As for `along`.
    grid : array, shape (m,)
        Even, from 0 to the length of the tube. [m]
    """
    up = _taken(rays, slope, weight, arc, grid)
    length = float(grid[-1])
    return up + _taken(rays, slope, weight, (length - arc[1], length - arc[0]), grid)[::-1]


def _taken(rays, slope, weight, arc, grid):
    """Return what the light that goes up leaves at each place."""
    t = np.tan(slope)[None, :, None]
    start = np.maximum(arc[0], -middle(rays)[0][:, None] * t[..., 0])[..., None]  # lamp below which no ray enters
    total = np.zeros(len(grid))
    for m in _by_step(rays):
        first, last = rays.reach[m][:, None, None], (rays.reach + rays.after - rays.before)[m][:, None, None]
        low, high = np.maximum(grid - last * t, start[rays.ray[m]]), np.minimum(grid - first * t, arc[1])
        level = (rays.weight[m][:, None] * weight[rays.ray[m]] / np.cos(slope))[..., None]
        flat = (grid >= arc[0]) & (grid <= arc[1])
        steep = np.maximum(high - low, 0.0) / np.maximum(t, 1e-12)
        total += (level * np.where(t > 1e-9, steep, (last - first) * flat)).sum(axis=(0, 1))
    return total / (2 * (arc[1] - arc[0]))


def smooth(density, grid):
    """Return a density at the places of an even grid as a curve over its mean."""
    step = float(grid[1] - grid[0])
    slope = spline_slopes(density, step)
    area = step * (density.sum() - (density[0] + density[-1]) / 2) + step**2 / 12 * (slope[0] - slope[-1])
    scale = float(grid[-1]) / area
    return Curve(0.0, step, density * scale, slope * scale)


def places(reach, length):
    """Return an even grid that is fine enough for the light of arcs at `reach` [m] from the middle of the gas."""
    steps = int(np.clip(np.ceil(length / (FINE * max(reach, 1e-9))), LEAST, MOST))
    return np.linspace(0.0, length, steps + 1)

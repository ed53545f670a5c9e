"""
Rays seen along the lamp: the stretches of gas that each one crosses, wall after wall.

A real ray at the elevation phi runs 1/cos(phi) times the length of its picture in the plane across. Every geometry
is described by its picture alone; slopes, ends, windows and absorption are the same for all of them.
"""

from itertools import pairwise
from typing import NamedTuple

import numpy as np

from reactor.photons.laws import LAMBERTIAN, RADIAL, gauss, offsets

FAINT = 1e-5  # share of a ray below which it is no longer followed
PASSES = 400
RINGS = 32


class Rays(NamedTuple):
    """
    Stretches of gas crossed by the rays of one metre of lamp, in the order in which each ray meets them.

    share, slant: (K,) share of the emitted photons that ray k brings to the gas, and the cosine, in the plane, of
    its angle on the window. ray, weight, before, after, reach, cell: (M,) number of the ray; what is left of its
    share; gas crossed before and after the stretch [m]; way from the lamp to the start of the stretch [m]; cell
    of the gas. volume: (C,) share of each cell in the gas.
    """

    share: np.ndarray
    slant: np.ndarray
    ray: np.ndarray
    weight: np.ndarray
    before: np.ndarray
    after: np.ndarray
    reach: np.ndarray
    cell: np.ndarray
    volume: np.ndarray

    @property
    def capture(self):
        """Return the share of the emitted photons that reaches the gas (the ends are another matter)."""
        return float(self.share.sum())

    @property
    def follows(self):
        """Return whether a stretch is followed by another of the same ray."""
        return np.append(self.ray[1:] == self.ray[:-1], False)

    @property
    def first(self):
        """Return whether a stretch is the first of its ray."""
        return np.append(True, self.ray[1:] != self.ray[:-1])

    @property
    def next_weight(self):
        """Return the weight of the following stretch; nought where the ray ends."""
        return np.where(self.follows, np.append(self.weight[1:], 0.0), 0.0)


def annulus(inside, outside, law, lamp_radius=0.0, reflectance=0.0, returning=0.0, rings=0):
    """
    Return the rays in the gas between a sleeve and a shell around a lamp on the axis.

    Parameters
    ----------
    inside, outside : float
        Inner and outer radius of the gas. [m]
    law : str
        Law of emission. [-]
    lamp_radius : float
        Radius of the emitter; a line has none. [m]
    reflectance : float
        Of the shell, specular; 0 is black. [-]
    returning : float
        Share of the light that comes back to the sleeve and passes it and the lamp to the other side. [-]
    rings : int
        Cells across the gap, crowded at the sleeve; 0: the whole gap is one cell. [-]
    """
    u, share = offsets(law)
    o = u * lamp_radius
    edges = inside + (outside - inside) * (np.linspace(0, 1, (rings or 1) + 1) ** (1.5 if rings else 1))
    way = np.sqrt(edges[:, None] ** 2 - o**2)  # from the foot of the axis on the ray to each ring
    start = np.sqrt(np.maximum(lamp_radius**2 - o**2, 0.0)) if law == LAMBERTIAN else 0.0
    core, gap, full = way[0], way[-1] - way[0], way[-1]
    found, weight = [], 1.0
    for number in range(PASSES):
        outward, trip = number % 2 == 0, number // 2
        shells = zip(range(len(edges) - 1), way, way[1:], strict=False)
        for cell, near, far in shells if outward else reversed(list(shells)):
            before = number * gap + (near - core if outward else full - far)
            reach = 2 * trip * full - start + (near if outward else 2 * full - far)
            found.append((weight + 0 * o, before, before + far - near, reach, cell + 0 * o))
        weight *= reflectance if outward else returning
        if weight < FAINT:
            break
    stacked = np.array(found)  # (stretches, 5, rays)
    ray = np.repeat(np.arange(len(o)), len(found))
    flat = stacked.transpose(1, 2, 0).reshape(5, -1)
    volume = np.diff(edges**2) / (outside**2 - inside**2)
    weight_of, before, after, reach, cell = flat
    slant = np.sqrt(1 - (o / inside) ** 2)
    return Rays(share, slant, ray, weight_of, before, after, reach, cell.astype(int), volume)


def slab(gap, law, sides=1, reflectance=0.0, layers=0):
    """
    Return the rays in a flat channel lit by a panel on one side or on both.

    Parameters
    ----------
    gap : float
        Depth of the channel. [m]
    law : str
        "radial" stands for a collimated panel, every other law for a Lambertian one. [-]
    sides : int
        1 or 2 panels; the light is shared evenly, a panel is black to light that comes back. [-]
    reflectance : float
        Of the wall opposite to one panel, specular. [-]
    layers : int
        Cells across the gap, crowded at the panels; 0: one. [-]
    """
    s, weight = gauss(64)
    tilt = np.zeros(1) if law == RADIAL else s * np.pi / 2
    share = np.ones(1) if law == RADIAL else weight * np.cos(tilt) / (weight @ np.cos(tilt))
    x = np.linspace(0, 1, (layers or 1) + 1)
    edges = (1 - np.cos(np.pi * x)) / 2 if sides == 2 and layers else x**1.5 if layers else x
    passes = [1.0, reflectance] if sides == 1 and reflectance > 0 else [1.0]
    cells = np.arange(len(edges) - 1)
    one, cell, level = [], [], []
    for number, kept in enumerate(passes):
        places = edges if number == 0 else 2 - edges[::-1]
        one += list(pairwise(places))
        cell += list(cells if number == 0 else cells[::-1])
        level += [kept] * len(cells)
    stretch = gap / np.cos(tilt)[:, None] * np.array(one).T[:, None, :]  # (2, rays, stretches)
    found = []
    for side in range(sides):
        own = np.array(cell) if side == 0 else len(cells) - 1 - np.array(cell)
        found.append((np.tile(own, len(tilt)), np.repeat(np.arange(len(tilt)) + side * len(tilt), len(one))))
    before, after = (np.tile(each.ravel(), sides) for each in stretch)
    return Rays(
        np.tile(share / sides, sides), np.tile(np.cos(tilt), sides), np.concatenate([r for _, r in found]),
        np.tile(level, len(tilt) * sides), before, after, before.copy(),
        np.concatenate([c for c, _ in found]), np.diff(edges),
    )  # fmt: skip


def grouped(rays, classes=16):
    """
    Return few rays that stand for many: those with the same number of stretches and a like first chord are averaged.

    Light, chords and ways are kept in the mean; used where ends are followed.
    """
    if len(rays.share) <= 4 * classes:
        return rays
    count = np.bincount(rays.ray, minlength=len(rays.share))
    start = np.concatenate(([0], np.cumsum(count)[:-1]))
    chord = rays.after[start] - rays.before[start]
    level = rays.weight[start] * rays.share
    kinds = []
    for stretches in sorted(set(count[level > 0].tolist())):
        members = np.flatnonzero((count == stretches) & (level > 0))
        order = members[np.argsort(chord[members])]
        few = max(1, round(classes / stretches))  # light that has come often is faint
        cuts = np.searchsorted(np.cumsum(level[order]), np.linspace(0, 1, few + 1)[1:-1] * level[order].sum())
        kinds += [group for group in np.split(order, cuts) if len(group)]
    share = np.array([rays.share[group].sum() for group in kinds])
    pieces: list = [[], [], [], [], []]
    for number, group in enumerate(kinds):
        part = rays.share[group] / share[number]
        for step in range(count[group[0]]):
            at = start[group] + step
            weight = part @ rays.weight[at]
            mean = part * rays.weight[at] / weight if weight > 0 else part
            start_at = mean @ rays.before[at]
            chord_at = mean @ (rays.after[at] - rays.before[at])
            row = (number, weight, start_at, start_at + chord_at, mean @ rays.reach[at])
            for piece, value in zip(pieces, row, strict=True):
                piece.append(value)
    slant = np.array([rays.slant[group] @ rays.share[group] for group in kinds]) / share
    ray, level, before, after, reach = (np.array(piece) for piece in pieces)
    return Rays(share, slant, ray.astype(int), level, before, after, reach, np.zeros(len(ray), int), np.ones(1))


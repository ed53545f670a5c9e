"""
Follow rays, seen along the lamp, through lamps, tubes and mirrors that stand side by side.

Walls are specular and turn no ray aside (refraction in a tube wall is left out); a lamp is black to light that comes
back. The rays come from an even lattice, not from chance: the same answer every time.
"""

from typing import Any, NamedTuple

import numpy as np

from reactor.photons.laws import LAMBERTIAN, VOLUMETRIC
from reactor.photons.rays import Rays

COUNT, FEW = 2**15, 2**12  # rays; measured: captured share of an ellipse to 5e-4
BOUNCES = 60
SECTORS, SHELLS, PIECES = 12, 6, 24  # cells of a tube, and pieces of a chord that are counted into them


class Mirror(NamedTuple):
    """A specular wall: "circle" (radius), "ellipse" (half axes, about 0) or "plane" (at x, towards larger x)."""

    kind: str
    size: tuple
    reflectance: float
    centre: tuple = (0.0, 0.0)


class Scene(NamedTuple):
    """
    What stands where, seen along the lamps [m].

    lamps: (n, 2) places of equal lamps of `lamp_radius`; tubes: (m, 2) places of equal gas tubes of the radius `bore`
    in walls of the radius `outside`; pane: share that passes a tube wall; aim: (direction, half width) [rad] in
    which rays are sent, all others missing. filled: the gas is everywhere in the mirror, outside `lamp_radius`.
    """

    lamps: np.ndarray
    lamp_radius: float
    tubes: np.ndarray
    bore: float
    outside: float
    mirror: Mirror | None = None
    pane: float = 1.0
    aim: tuple = (0.0, np.pi)
    filled: bool = False
    emitter: float | None = None  # radius that sends the light, where smaller than `lamp_radius`


def follow(scene, law, fine=False, count=COUNT):
    """
    Return the rays of one metre of all lamps, those that miss the gas left out.

    Parameters
    ----------
    scene : Scene
        What stands where. [-]
    law : str
        Law of emission. [-]
    fine : bool
        Cut the stretches into cells of the gas. [-]
    count : int
        Number of rays. [-]
    """
    start, direction, slant, reach = _sent(scene, law, count)
    found = _walk(scene, start, direction, reach)
    coverage = scene.aim[1] / np.pi
    return _rays(scene, found, slant, coverage / count, fine)


def _sent(scene, law, count):
    """Return places where rays start, their directions, cosines on the lamp's own sleeve, and the way behind them."""
    number = np.arange(count)
    turn, across = (0.5 + number * 0.7548776662466927) % 1.0, (0.5 + number * 0.5698402909980532) % 1.0
    angle = scene.aim[0] + scene.aim[1] * (2 * turn - 1)
    direction = np.stack((np.cos(angle), np.sin(angle)))
    radius = scene.lamp_radius if scene.emitter is None else scene.emitter
    offset = radius * _quantile(law, across)
    foot = scene.lamps[number % len(scene.lamps)].T + offset * np.stack((-direction[1], direction[0]))
    leave = scene.lamp_radius if scene.filled else radius if law == LAMBERTIAN else 0.0
    ahead = np.sqrt(np.maximum(leave**2 - offset**2, 0.0))
    slant = np.sqrt(1 - (offset / scene.lamp_radius) ** 2) if scene.filled else np.ones(count)
    surface = np.sqrt(np.maximum(radius**2 - offset**2, 0.0)) if law == LAMBERTIAN else 0.0
    return foot + ahead * direction, direction, slant, ahead - surface


def _quantile(law, share):
    """Return offsets over the lamp radius, -1 to 1, at even shares of the light."""
    if law == LAMBERTIAN:
        return 2 * share - 1
    if law != VOLUMETRIC:
        return np.zeros_like(share)
    u = np.linspace(-1, 1, 2001)
    below = 0.5 + (u * np.sqrt(1 - u**2) + np.arcsin(u)) / np.pi
    return np.interp(share, below, u)


def _circle(place, direction, centre, radius):
    """Return the ways to the first and second meeting with a circle; inf where there is none."""
    apart = np.asarray(centre)[:, None] - place
    middle = (apart * direction).sum(axis=0)
    left = radius**2 - ((apart**2).sum(axis=0) - middle**2)
    half = np.sqrt(np.maximum(left, 0.0))
    return np.where(left > 0, middle - half, np.inf), np.where(left > 0, middle + half, np.inf)


def _to_mirror(place, direction, mirror):
    """Return the way to the mirror and its inward normal there."""
    if mirror.kind == "plane":
        way = np.where(direction[0] < 0, (mirror.size[0] - place[0]) / np.minimum(direction[0], -1e-300), np.inf)
        return way, np.stack((np.ones_like(way), np.zeros_like(way)))
    half = np.array(mirror.size if mirror.kind == "ellipse" else mirror.size * 2)[:, None]
    p, d = (place - np.array(mirror.centre)[:, None]) / half, direction / half
    a, b, c = (d**2).sum(axis=0), (p * d).sum(axis=0), (p**2).sum(axis=0) - 1
    way = (-b + np.sqrt(np.maximum(b**2 - a * c, 0.0))) / a
    normal = -(place + way * direction - np.array(mirror.centre)[:, None]) / half**2
    return way, normal / np.hypot(*normal)


def _walk(scene, place, direction, reach):
    """Return the stretches met, as rows (ray, weight, before, after, reach, entry x, y, exit x, y, tube)."""
    ray, weight, depth = np.arange(len(reach)), np.ones(len(reach)), 0 * reach
    rows, fresh = [], True
    for _ in range(BOUNCES):
        lamp = _nearest(place, direction, scene.lamps, scene.lamp_radius, not fresh)
        tube, leave, which = _tubes(scene, place, direction)
        wall, normal = (np.full(len(ray), np.inf), None)
        if scene.mirror:
            wall, normal = _to_mirror(place, direction, scene.mirror)
        in_gas = (tube < lamp) & (tube < wall)
        bounce = (wall < lamp) & ~in_gas
        way = np.where(in_gas, leave, np.minimum(lamp, wall))
        crossed = in_gas | (np.isfinite(way) & scene.filled)
        enter = np.where(in_gas, tube, 0.0)
        stop = place + np.where(np.isfinite(way), way, 0.0) * direction
        begin = place + np.where(in_gas, tube, 0.0) * direction
        chord = np.where(crossed, way - enter, 0.0)
        first = depth == 0
        weight = np.where(in_gas & ~first, weight * scene.pane, weight)
        if crossed.any():
            rows.append(np.stack((ray, weight, depth, depth + chord, reach + enter, *begin, *stop, which))[:, crossed])
        weight = np.where(in_gas, weight * scene.pane, weight)
        if bounce.any():
            turned = direction - 2 * (direction * normal).sum(axis=0) * normal
            direction = np.where(bounce, turned, direction)
            weight = np.where(bounce, weight * scene.mirror.reflectance, weight)
        keep = (in_gas | bounce) & (weight > 1e-3)
        nudge = 1e-9
        reach, depth = reach + np.where(np.isfinite(way), way, 0.0), depth + chord
        ray, weight, depth, reach = ray[keep], weight[keep], depth[keep], reach[keep]
        place, direction = stop[:, keep] + nudge * direction[:, keep], direction[:, keep]
        fresh = False
        if not len(ray):
            break
    return np.concatenate(rows, axis=1) if rows else np.zeros((10, 0))


def _nearest(place, direction, centres, radius, wanted):
    """Return the way to the nearest lamp (all others than the own one when the ray has just left it)."""
    way = np.full(place.shape[1], np.inf)
    if radius <= 0:
        return way
    for centre in centres:
        near, _ = _circle(place, direction, centre, radius)
        away = ((place - np.asarray(centre)[:, None]) ** 2).sum(axis=0) > radius**2 * (1 + 1e-9)
        way = np.where((near > 1e-9) & (away | wanted), np.minimum(way, near), way)
    return way


def _tubes(scene, place, direction):
    """Return the ways into and out of the nearest tube, and its number."""
    enter, leave = (np.full(place.shape[1], np.inf) for _ in range(2))
    which = np.zeros(place.shape[1])
    for number, centre in enumerate(scene.tubes):
        near, far = _circle(place, direction, centre, scene.bore)
        better = (near > 1e-9) & (near < enter)
        enter, leave = np.where(better, near, enter), np.where(better, far, leave)
        which = np.where(better, number, which)
    return enter, leave, which


def _rays(scene, found, slant, share, fine):
    """Return the stretches as `Rays`: in order, each ray's weight relative to what it first brings in."""
    order = np.lexsort((found[2], found[0]))
    ray, weight, before, after, reach, *ends, which = found[:, order]
    first = np.append(True, ray[1:] != ray[:-1])[:len(ray)]
    old, ray = ray[first].astype(int), np.cumsum(first) - 1
    brought = weight[first]
    weight = weight / brought[ray]
    if not scene.filled and len(old):
        slant = np.ones(int(old.max()) + 1)
        half = (after - before)[first] / 2
        slant[old] = np.sqrt(np.maximum(1 - (scene.bore**2 - half**2) / scene.outside**2, 0.0))
    one = Rays(brought * share, slant[old], ray, weight, before, after, reach, np.zeros(len(ray), int), np.ones(1))
    return _cut(scene, one, np.array(ends), which.astype(int)) if fine else one


def _cut(scene, rays, ends, which):
    """Return the stretches cut into pieces that are counted into cells of a tube."""
    t = np.linspace(0, 1, PIECES + 1)
    middle = (t[1:] + t[:-1]) / 2
    chord = rays.after - rays.before
    x, y = (ends[i][:, None] + (ends[i + 2] - ends[i])[:, None] * middle for i in (0, 1))
    if scene.filled:
        cells, cell = _vessel_cells(scene, x, y)
    else:
        cells, cell = _tube_cells(scene, x, y, which)
    many: dict[str, Any] = {
        "before": (rays.before[:, None] + chord[:, None] * t[:-1]).ravel(),
        "after": (rays.before[:, None] + chord[:, None] * t[1:]).ravel(),
        "reach": (rays.reach[:, None] + chord[:, None] * t[:-1]).ravel(),
    }
    for name in ("ray", "weight"):
        many[name] = np.repeat(getattr(rays, name), PIECES)
    return rays._replace(cell=cell.ravel(), volume=cells, **many)


def _tube_cells(scene, x, y, which):
    """Return volume shares and numbers of the cells: shells and sectors of equal area, turned towards the lamps."""
    centre = scene.tubes[which]
    facing = np.arctan2(scene.lamps[0][1] - centre[:, 1], scene.lamps[0][0] - centre[:, 0])
    dx, dy = x - centre[:, :1], y - centre[:, 1:]
    shell = np.minimum((dx**2 + dy**2) / scene.bore**2 * SHELLS, SHELLS - 1).astype(int)
    sector = np.floor((np.arctan2(dy, dx) - facing[:, None]) / (2 * np.pi) * SECTORS).astype(int) % SECTORS
    return np.full(SHELLS * SECTORS, 1 / (SHELLS * SECTORS)), shell * SECTORS + sector


def _vessel_cells(scene, x, y):
    """Return volume shares and numbers of cells by the distance to the nearest sleeve."""
    apart = np.min([np.hypot(x - cx, y - cy) for cx, cy in scene.lamps], axis=0) / scene.lamp_radius
    radius = scene.mirror.size[0]
    grid = np.linspace(-radius, radius, 400)
    gx, gy = np.meshgrid(grid, grid)
    near = np.min([np.hypot(gx - cx, gy - cy) for cx, cy in scene.lamps], axis=0) / scene.lamp_radius
    gas = (np.hypot(gx, gy) < radius) & (near > 1)
    edges = np.quantile(near[gas], np.linspace(0, 1, 4 * SHELLS + 1) ** 1.5)
    count = np.histogram(near[gas], edges)[0]
    return count / count.sum(), np.clip(np.searchsorted(edges, apart, side="right") - 1, 0, len(edges) - 2)

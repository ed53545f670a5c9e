"""
A Monte-Carlo ray tracer in space, for checks: photons one by one, free paths from chance, no closed form, no spread.

Everything stands upright between z = 0 and z = length: lamps (cylinders), gas (tubes, or all between sleeves and a
shell), mirrors (a shell, a plane, an ellipse), or a flat channel. It shares no line with the program.
"""

from dataclasses import dataclass, field

import numpy as np

ABSORBED, WALL, ENDS, MISSED = range(4)


@dataclass
class Tracer:
    """What stands where; `gas` is "between" (inside the shell, outside the sleeves), "tubes" or "channel"."""

    gas: str
    length: float
    arc: tuple
    lamps: np.ndarray = field(default_factory=lambda: np.zeros((1, 2)))
    lamp_radius: float = 0.0  # emits; 0: a line
    body: float = 0.0  # black to returning light (gas in tubes) or the sleeve (gas between)
    tubes: np.ndarray = field(default_factory=lambda: np.zeros((0, 2)))
    bore: float = 0.0
    shell: float = 0.0
    ellipse: tuple = ()
    plane: float | None = None
    reflectance: float = 0.0
    gap: float = 0.0
    clear: bool = False  # returning light passes sleeve and lamp

    def shoot(self, count, law, kappa, seed):
        """Return the fates of `count` photons and the place (z) where each died; kappa: number or function of z."""
        rng = np.random.default_rng(seed)
        place, way = self._send(rng, count, law)
        fate, where = np.full(count, MISSED), np.full(count, np.nan)
        entered = np.zeros(count, bool)
        depth = -np.log(rng.random(count))  # optical depth at which the photon is absorbed
        alive = np.arange(count)
        for bounce in range(400):
            p, d = place[alive], way[alive]
            step, kind, in_gas, normal = self._next(p, d, bounce == 0)
            ahead = np.where(d[:, 2] > 0, self.length - p[:, 2], p[:, 2]) / np.maximum(abs(d[:, 2]), 1e-300)
            reach = np.minimum(step, np.where(in_gas, ahead, np.inf))
            taken, spent = self._absorb(p, d, np.where(in_gas, reach, 0.0), depth[alive], kappa)
            depth[alive] -= spent
            died = in_gas & (taken < reach)
            where[alive[died]] = (p + taken[:, None] * d)[died, 2]
            entered[alive] |= in_gas
            fate[alive[died]] = ABSORBED
            over = in_gas & ~died & (ahead < step)
            fate[alive[over]] = ENDS
            stop = p + np.where(np.isfinite(step), step, 0.0)[:, None] * d
            level = stop[:, 2]
            gone = ~np.isfinite(step)
            beyond = (level < 0) | (level > self.length)
            outside = ~in_gas & np.isfinite(step) & beyond & (bounce > 0 or self.gas == "tubes")
            fate[alive[outside & entered[alive]]] = ENDS  # z only goes one way: it does not come back
            gone |= outside
            kept = rng.random(len(alive)) < self.reflectance
            hit = (kind == 1) & ~(kept & (kind == 1))
            black = (hit | (kind == 2)) & ~gone
            ended = black & ~died & ~over
            fate[alive[ended & entered[alive]]] = WALL
            fate[alive[gone & ~died & ~over & entered[alive] & (fate[alive] == MISSED)]] = WALL
            turn = (kind == 1) & kept
            d = np.where(turn[:, None], d - 2 * (d * normal).sum(axis=1, keepdims=True) * normal, d)
            go = ~(died | over | gone | black)
            place[alive], way[alive] = stop + 1e-7 * d, d
            alive = alive[go]
            if not len(alive):
                break
        if self.gas == "between":
            fate[~entered] = MISSED
        return fate, where

    def _send(self, rng, count, law):
        z = rng.uniform(*self.arc, count)
        if self.gas == "channel":
            out, turn = np.sqrt(rng.random(count)), rng.uniform(0, 2 * np.pi, count)  # Lambertian: cos of slope
            side = np.sqrt(1 - out**2)
            return np.stack((0 * z, 0 * z, z), 1), np.stack((out, side * np.cos(turn), side * np.sin(turn)), 1)
        lamp = self.lamps[rng.integers(len(self.lamps), size=count)]
        spin = rng.uniform(0, 2 * np.pi, count)
        if law == "surface":
            normal = np.stack((np.cos(spin), np.sin(spin), 0 * z), 1)
            along = np.stack((-np.sin(spin), np.cos(spin), 0 * z), 1)
            out, turn = np.sqrt(rng.random(count)), rng.uniform(0, 2 * np.pi, count)
            side = np.sqrt(1 - out**2)
            way = out[:, None] * normal + (side * np.cos(turn))[:, None] * along
            way[:, 2] += side * np.sin(turn)
            return np.column_stack((lamp + self.lamp_radius * normal[:, :2], z)), way
        if law == "line, sine":  # weight by the sine of the angle to the axis: rejection
            up = rng.uniform(-1, 1, 4 * count)
            up = up[rng.random(4 * count) < np.sqrt(1 - up**2)][:count]
        else:
            up = rng.uniform(-1, 1, count)
        flat = np.sqrt(1 - up**2)
        offset = np.zeros((count, 2))
        if law == "volume":
            turn, r = rng.uniform(0, 2 * np.pi, count), self.lamp_radius * np.sqrt(rng.random(count))
            offset = r[:, None] * np.stack((np.cos(turn), np.sin(turn)), 1)
        return np.column_stack((lamp + offset, z)), np.stack((flat * np.cos(spin), flat * np.sin(spin), up), 1)

    def _absorb(self, p, d, reach, depth, kappa):
        """Return the way to absorption (inf: none) and the optical depth spent on the stretch."""
        if not callable(kappa):
            free = depth / kappa if kappa > 0 else np.full(len(depth), np.inf)
            return free, np.minimum(depth, kappa * np.where(np.isfinite(reach), reach, 0.0))
        steps = 60
        u = (np.arange(steps) + 0.5) / steps
        local = kappa(p[:, 2:] + (reach[:, None] * u) * d[:, 2:]) * reach[:, None] / steps
        total = np.cumsum(local, axis=1)
        index = (total < depth[:, None]).sum(axis=1)
        free = np.where(index < steps, reach * (np.minimum(index, steps - 1) + 0.5) / steps, np.inf)
        return free, np.minimum(depth, total[:, -1])

    def _next(self, p, d, fresh):
        """Return the way to the next thing, its kind (0: goes on, 1: mirror, 2: black), whether gas lies there, normal."""
        count = len(p)
        normal = np.zeros((count, 3))
        kind = np.zeros(count, int)
        if self.gas == "channel":
            step = np.where(d[:, 0] > 0, (self.gap - p[:, 0]) / d[:, 0], -p[:, 0] / np.minimum(d[:, 0], -1e-300))
            normal[:, 0] = 1.0
            return step, np.where(d[:, 0] > 0, 1, 2), np.ones(count, bool), normal
        if self.gas == "between":
            return self._between(p, d, fresh)
        enter, leave = self._nearest(p, d, self.tubes, self.bore)
        inside = np.zeros(count, bool)
        for centre in self.tubes:
            inside |= ((p[:, :2] - centre) ** 2).sum(axis=1) < self.bore**2 * (1 - 1e-9)
        step = np.where(inside, leave, enter)
        lamp = np.full(count, np.inf) if fresh else self._nearest(p, d, self.lamps, self.body)[0]
        wall, normal = self._mirror(p, d)
        inside &= (p[:, 2] >= 0) & (p[:, 2] <= self.length)
        kind = np.where(inside, 0, np.where((lamp < step) & (lamp < wall), 2, np.where(wall < step, 1, 0)))
        return np.where(inside, step, np.minimum(np.minimum(step, lamp), wall)), kind, inside, normal

    def _between(self, p, d, fresh):
        """Gas between sleeves and shell: from the lamp to the sleeve first, then stretches of gas."""
        within = np.min([((p[:, :2] - c) ** 2).sum(axis=1) for c in self.lamps], axis=0) < self.body**2 * (1 - 1e-9)
        far = self._nearest(p, d, self.lamps, self.body)[1]
        near = self._nearest(p, d, self.lamps, self.body)[0]
        shell = self._nearest(p, d, np.zeros((1, 2)), self.shell)[1]
        out = np.where(within, far, np.minimum(near, shell))
        kind = np.where(within, 0, np.where(near < shell, 0 if self.clear else 2, 1))
        stop = p + np.where(np.isfinite(out), out, 0.0)[:, None] * d
        normal = np.column_stack((-stop[:, :2] / self.shell, np.zeros(len(p))))
        return out, kind, ~within & (p[:, 2] >= 0) & (p[:, 2] <= self.length), normal

    @staticmethod
    def _nearest(p, d, centres, radius):
        """Return the ways to the nearest entry into, and exit from, upright cylinders."""
        enter, leave = np.full(len(p), np.inf), np.full(len(p), np.inf)
        flat = (d[:, :2] ** 2).sum(axis=1)
        for centre in centres:
            apart = p[:, :2] - centre
            b, c = (apart * d[:, :2]).sum(axis=1), (apart**2).sum(axis=1) - radius**2
            root = b**2 - flat * c
            real = root > 0
            half = np.sqrt(np.where(real, root, 0.0))
            first, last = (-b - half) / flat, (-b + half) / flat
            enter = np.where(real & (first > 1e-9), np.minimum(enter, first), enter)
            leave = np.where(real & (last > 1e-9), np.minimum(leave, last), leave)
        return enter, leave

    def _mirror(self, p, d):
        way, normal = np.full(len(p), np.inf), np.zeros((len(p), 3))
        if self.plane is not None:
            hits = d[:, 0] < -1e-12
            way = np.where(hits, (self.plane - p[:, 0]) / np.where(hits, d[:, 0], 1.0), np.inf)
            normal[:, 0] = 1.0
        elif self.ellipse or self.shell:
            half = np.array(self.ellipse or (self.shell, self.shell))
            q, e = p[:, :2] / half, d[:, :2] / half
            a, b, c = (e**2).sum(axis=1), (q * e).sum(axis=1), (q**2).sum(axis=1) - 1
            way = (-b + np.sqrt(np.maximum(b**2 - a * c, 0.0))) / a
            stop = p[:, :2] + way[:, None] * d[:, :2]
            normal[:, :2] = stop / half**2
            normal /= np.linalg.norm(normal, axis=1, keepdims=True)
        return way, normal

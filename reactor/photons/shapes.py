"""
The geometries: what one gas space looks like, what share of its lamps it gets, and the rays through it.

Every shape answers the same questions: `gap` (a length for optical thickness) and `area` of the gas [m, m2], `tubes`
that share the lamps of one group, `bore` that holds the lamp [m], and `rays(law, lamp_radius, fine)`.
"""

from dataclasses import dataclass
from functools import cache

import numpy as np

from reactor.photons import rays as paths
from reactor.photons.laws import RADIAL, SINE
from reactor.photons.scene import COUNT, FEW, Mirror, Scene, follow

PITCH = 0.5  # of the vessel's radius: where immersed lamps stand unless it is said


class Shape:
    """What all geometries have in common."""

    tubes, immersed, panel = 1, True, False

    def slopes(self, law):
        """Return the law that gives the elevations of rays: a panel is Lambertian or collimated."""
        return (RADIAL if law == RADIAL else SINE) if self.panel else law


@dataclass(frozen=True)
class Annulus(Shape):
    """Gas between a sleeve on the axis and a shell; `returning`: share that passes sleeve and lamp on its way back."""

    inside: float
    outside: float
    thickness: float = 0.0
    reflectance: float = 0.0
    returning: float = 0.0
    name = "annulus"

    @property
    def gap(self):
        """Return the depth of the gas [m]."""
        return self.outside - self.inside

    @property
    def area(self):
        """Return the cross-section of the gas [m2]."""
        return float(np.pi * (self.outside**2 - self.inside**2))

    @property
    def bore(self):
        """Return the radius that a lamp may have [m]."""
        return self.inside - self.thickness

    def rays(self, law, lamp_radius, fine=False):
        """Return the rays of one metre of lamp."""
        rings = paths.RINGS if fine else 0
        return paths.annulus(self.inside, self.outside, law, lamp_radius, self.reflectance, self.returning, rings)


@dataclass(frozen=True)
class Immersed(Shape):
    """Stirred vessel with equal sleeves upright on a circle (one: in the middle)."""

    inside: float
    outside: float
    number: int = 1
    circle: float | None = None
    thickness: float = 0.0
    reflectance: float = 0.0
    name = "immersed lamps"

    @property
    def gap(self):
        """Return the radius of the vessel less that of a sleeve [m]."""
        return self.outside - self.inside

    @property
    def area(self):
        """Return the cross-section of the gas [m2]."""
        return float(np.pi * (self.outside**2 - self.number * self.inside**2))

    @property
    def bore(self):
        """Return the radius that a lamp may have [m]."""
        return self.inside - self.thickness

    def places(self):
        """Return where the sleeves stand, (number, 2) [m]."""
        if self.number == 1:
            return np.zeros((1, 2))
        radius = PITCH * self.outside if self.circle is None else self.circle / 2
        turn = 2 * np.pi * np.arange(self.number) / self.number
        return radius * np.stack((np.cos(turn), np.sin(turn)), axis=1)

    def rays(self, law, lamp_radius, fine=False):
        """Return the rays of one metre of all lamps."""
        wall = Mirror("circle", (self.outside,), self.reflectance)
        none = np.zeros((0, 2))
        return follow(Scene(self.places(), self.inside, none, 0.0, 0.0, wall, filled=True, emitter=lamp_radius), law, fine,
                      FEW if fine else COUNT)


@dataclass(frozen=True)
class Tubes(Shape):
    """
    Gas tubes and lamps outside them: one tube beside a lamp, a ring of tubes round a lamp, lamps round a tube.

    distance: between the axes [m]. reflector: None, "flat" (size: way from the lamp's axis to the mirror behind it),
    "elliptical" (size: half of the long axis; lamp and tube in the foci) or "circular" (size: radius round the middle).
    pane: share that passes a tube wall, for light that leaves a tube and comes again. body: radius of a lamp, black to
    light that comes back [m].
    """

    bore_radius: float
    thickness: float
    distance: float
    tubes: int = 1
    lamps: int = 1
    reflector: str | None = None
    size: float = 0.0
    reflectance: float = 0.0
    pane: float = 0.9
    body: float = 0.01
    immersed = False

    @property
    def name(self):
        """Return the word of the case file."""
        if self.tubes > 1:
            return "tubes around lamp"
        return "lamps around tube" if self.lamps > 1 else "tube beside lamp"

    @property
    def gap(self):
        """Return the bore of a tube [m]."""
        return 2 * self.bore_radius

    @property
    def area(self):
        """Return the cross-section of one tube [m2]."""
        return float(np.pi * self.bore_radius**2)

    @property
    def outside(self):
        """Return the outside radius of a tube [m]."""
        return self.bore_radius + self.thickness

    @property
    def bore(self):
        """Return the radius that a lamp may have [m]."""
        return self.distance - self.outside

    def scene(self, lamp_radius):
        """Return what stands where."""
        middle, turn = np.zeros((1, 2)), 2 * np.pi * np.arange(max(self.tubes, self.lamps)) / max(self.tubes, self.lamps)
        ring = self.distance * np.stack((np.cos(turn), np.sin(turn)), axis=1)
        lamps, tubes = (ring, middle) if self.lamps > 1 else (middle, ring)
        mirror, aim = None, (0.0, np.pi)
        if self.reflector == "elliptical":
            focus = self.distance / 2
            lamps, tubes = np.array([[-focus, 0.0]]), np.array([[focus, 0.0]])
            mirror = Mirror("ellipse", (self.size, float(np.sqrt(self.size**2 - focus**2))), self.reflectance)
        elif self.reflector == "flat":
            mirror = Mirror("plane", (-self.size,), self.reflectance)
        elif self.reflector == "circular":
            mirror = Mirror("circle", (self.size,), self.reflectance)
        elif self.lamps == 1 and self.tubes == 1:
            aim = (0.0, float(np.arcsin(min(1.0, (lamp_radius + self.bore_radius) / self.distance))))
        body = max(self.body, lamp_radius)
        return Scene(lamps, body, tubes, self.bore_radius, self.outside, mirror, self.pane, aim, emitter=lamp_radius)

    def rays(self, law, lamp_radius, fine=False):
        """Return the rays of one metre of all lamps."""
        return follow(self.scene(lamp_radius), law, fine, FEW if fine else COUNT)


@dataclass(frozen=True)
class Channel(Shape):
    """Flat channel behind a window, lit by a panel on one side or one on each."""

    gap: float
    width: float
    thickness: float = 0.0
    sides: int = 1
    reflectance: float = 0.0
    name = "channel"
    immersed, panel, bore = False, True, np.inf

    @property
    def area(self):
        """Return the cross-section of the gas [m2]."""
        return self.gap * self.width

    def rays(self, law, lamp_radius, fine=False):
        """Return the rays of one metre of panel."""
        return paths.slab(self.gap, law, self.sides, self.reflectance, paths.RINGS if fine else 0)


@cache
def rays_of(shape, law, lamp_radius, fine=False):
    """Return the rays of a shape, found once."""
    return shape.rays(law, lamp_radius, fine)

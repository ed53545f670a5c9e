"""What a deviation does to a case: feeds, lamps, heat exchange, pressure, each in one small step."""

from dataclasses import dataclass, replace
from typing import Any

from reactor.rating.plant import plant


@dataclass(frozen=True)
class Changed:
    """A case with factors on light and heat exchange; `new_feed` tells whether other gas comes in."""

    case: Any
    light: float = 1.0
    heat: float = 1.0
    keep_lamp_heat: bool = False
    new_feed: bool = False
    share: float = 1.0  # of the vessels in parallel that are struck

    def equipment(self, gas, base):
        """Return the plant; `base` is the light of the unchanged case."""
        light = base
        if self.light != 1.0:
            heat = light.sleeve_heat * (1.0 if self.keep_lamp_heat else self.light)
            light = replace(light, into_gas=light.into_gas * self.light, sleeve_heat=heat)
        return plant(self.fixed_light(), gas, light, self.heat)

    def fixed_light(self):
        """Return the case with a typed photolysis rate brought in line with the light."""
        typed = self.case.chemistry.photolysis_rate
        if typed is None or self.light == 1.0:
            return self.case
        return replace(self.case, chemistry=replace(self.case.chemistry, photolysis_rate=typed * self.light))


def brings_chlorine(feed):
    """Tell whether a feed stream brings chlorine."""
    return feed.moles.get("Cl2", 0.0) > 0


def scaled_feeds(case, factor, which):
    """Return a case with the flow of those feeds multiplied of which `which` says so."""
    feeds = {
        name: replace(feed, moles={s: n * factor for s, n in feed.moles.items()}) if which(feed) else feed
        for name, feed in case.feed.items()
    }
    return replace(case, feed=feeds)


def with_species(case, species, share):
    """Return a case whose streams without chlorine hold a share of another species."""
    feeds = {}
    for name, feed in case.feed.items():
        moles = dict(feed.moles)
        if not brings_chlorine(feed):
            total = sum(moles.values())
            moles = {s: n * (1 - share) for s, n in moles.items()}
            moles[species] = moles.get(species, 0.0) + share * total
        feeds[name] = replace(feed, moles=moles)
    return replace(case, feed=feeds)


def warmer_feeds(case, step):
    """Return a case with every feed warmer by a step in kelvin."""
    feeds = {n: replace(feed, temperature=feed.temperature + step) for n, feed in case.feed.items()}
    injects = tuple(replace(i, temperature=(i.temperature or 300.0) + step) for i in case.inject)
    return replace(case, feed=feeds, inject=injects)


def warmer_coolant(case, step):
    """Return a case with a coolant warmer by a step in kelvin."""
    return replace(case, cooling=replace(case.cooling, inlet=case.cooling.inlet + step))


def at_pressure(case, factor):
    """Return a case at another absolute pressure."""
    return replace(case, vessel=replace(case.vessel, pressure=case.vessel.pressure * factor))


def number_of_lamps(case):
    """Return how many lamps one vessel has."""
    return sum(lamp.number for lamp in case.lamp)

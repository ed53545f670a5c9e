"""One look at a case: solved once, each result computed only when it is asked for, in SI."""

from dataclasses import replace
from functools import cached_property

from reactor import chemistry, units
from reactor.errors import ReactorError
from reactor.models import SOLVERS
from reactor.models.assemble import mixed_feed
from reactor.models.plug_flow import solve_many
from reactor.rating import figures, hazard
from reactor.rating.plant import lamps, mechanism, plant

JUDGED = (
    "mtsr",
    "light_off_temperature",
    "dew_point_margin",
    "exotherm_margin",
    "class_inlet",
    "class_worst",
)


class Probe:
    """
    A solved case whose results are read by name: `probe["chlorine_slip"]`, `probe["products.CH3Cl"]`, in SI.

    The numbers are those of `rate`, computed by the same functions from the same profile; bands, verdicts
    and the order of the chain in light, which cost more than the solution itself, are left out until they
    are asked for.
    """

    def __init__(self, case, equipment=None, profile=None):
        self.case, self.plant = case, equipment or plant_of(case)
        self.gas = self.plant.gas
        self.feed = mixed_feed(case, self.gas)
        self.profile = profile or SOLVERS[case.vessel.kind](case, self.plant, look_further=False)
        self._found = {}

    @cached_property
    def light(self):
        """Return the light account without chain figures, {name: W or mol/s}."""
        accounts = {a.name: a.watts * self.case.vessel.vessels for a in self.plant.light.accounts}
        return {
            "light_electrical": accounts.get("mains", 0.0),
            "light_radiant": accounts.get("radiant", 0.0),
            "light_into_gas": accounts.get("into gas", 0.0),
            "light_absorbed": self.profile.total("photon_power"),
            "photons_absorbed": self.profile.total("photons"),
        }

    def _groups(self):
        """Yield records of results, the cheap ones first."""
        yield figures.conversion(self.profile, self.gas)
        yield figures.products(self.profile, self.gas)
        yield figures.times(self.profile)
        yield figures.heat(self.profile, self.gas, self.feed)
        yield figures.exchange(self.case, self.plant, self.profile)
        yield {name: {"value": watts, "unit": "W"} for name, watts in self.light.items()}

    def __getitem__(self, name):
        """Return a result in SI by its name, a species behind a dot; None where there is none."""
        head, _, part = name.partition(".")
        if head not in self._found:
            if head in JUDGED:
                self._found |= hazard.assess(self.case, self.plant, self.profile, self.feed).results
            else:
                for group in self._groups():
                    self._found |= group
                    if head in self._found:
                        break
                else:
                    self._found |= figures.light(self.case, self.plant, self.profile)
        record = self._found[head]
        if part:
            record = record.get(part, {"value": 0.0, "unit": "1"})
        if not isinstance(record, dict) or record["value"] is None:
            return record if isinstance(record, str) else None
        return float(
            units.to_si(record["value"], record["unit"].replace("1", "-") if record["unit"] == "1" else record["unit"])
        )


def with_gas(case, gas):
    """Return the case bound to a mechanism that was made for it, where what it is fed with is changed afterwards."""
    if case.chemistry.mechanism or gas.path == chemistry.mechanism().path:
        return case
    return replace(case, chemistry=replace(case.chemistry, mechanism=str(gas.path)))


def plant_of(case):
    """Return the equipment of a case."""
    gas = mechanism(case)
    return plant(case, gas, lamps(case))


def many(cases):
    """Return a `Probe` of every case, None where it cannot be solved; tubes in one batch of the kernel."""
    if any(c.vessel.kind != "plug flow" or c.cooling.mode == "counter-current" or c.recycle for c in cases):
        return [_alone(case) for case in cases]
    made = []
    for case in cases:
        try:
            made.append((case, plant_of(case)))
        except ReactorError:
            made.append((case, None))
    good = [(case, equipment) for case, equipment in made if equipment is not None]
    profiles = iter(solve_many([case for case, _ in good], [equipment for _, equipment in good]))
    found: list[Probe | None] = []
    for case, equipment in made:
        profile = None if equipment is None else next(profiles)
        found.append(None if profile is None or isinstance(profile, str) else Probe(case, equipment, profile))
    return found


def _alone(case):
    """Return the `Probe` of one case, its recycle closed; None where it cannot be solved."""
    from reactor.sizing import loop

    try:
        return loop.probe(case)
    except ReactorError:
        return None

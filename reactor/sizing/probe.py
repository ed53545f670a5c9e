"""One look at a case: solved once, each result computed only when it is asked for, in SI."""

from functools import cached_property

from reactor import chemistry, units
from reactor.models import SOLVERS
from reactor.models.assemble import mixed_feed
from reactor.rating import figures, hazard
from reactor.rating.plant import lamps, plant

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

    def __init__(self, case):
        self.case = case
        self.gas = chemistry.mechanism(case.chemistry.mechanism and case.path(case.chemistry.mechanism))
        self.plant = plant(case, self.gas, lamps(case))
        self.feed = mixed_feed(case, self.gas)
        self.profile = SOLVERS[case.vessel.kind](case, self.plant, look_further=False)
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
            units.to_si(
                record["value"], record["unit"].replace("1", "-") if record["unit"] == "1" else record["unit"]
            )
        )


def many(cases):
    """Return a `Probe` of every case of a curve; None where the case cannot be solved."""
    from reactor.errors import ReactorError

    found: list[Probe | None] = []
    for case in cases:
        try:
            found.append(Probe(case))
        except ReactorError:
            found.append(None)
    return found

"""What every row of an upset table starts from: the rated case, its steady state, its rules, its limits."""

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from reactor import chemistry
from reactor.hazards import dewpoint, equilibrium, paths
from reactor.models import SOLVERS, assemble
from reactor.rating import hazard
from reactor.rating.plant import lamps, plant
from reactor.upsets import elements, vessel
from reactor.upsets.changes import Changed
from reactor.upsets.plant_response import Response, response

LOOSE = 1e-6  # relative tolerance of the runs behind a table


@dataclass(frozen=True)
class Setting:
    """A rated case ready to be upset: at a looser tolerance, with plant, steady profile and rules."""

    case: Any
    gas: Any
    light: Any
    plant: Any
    profile: Any
    feed: Any
    book: Any
    times: Response
    heat: float  # released by a mole of chlorine [J/mol]
    light_off: float | None

    @property
    def limit(self):
        """Return the stated limit of the gas temperature [K], else None."""
        return self.case.limits.hottest

    @property
    def chlorine(self):
        """Return the number of Cl2."""
        return self.gas.index["Cl2"]

    def steady(self, changed):
        """Return plant and steady profile of a changed case."""
        equipment = changed.equipment(self.gas, self.light)
        return equipment, SOLVERS[self.case.vessel.kind](changed.fixed_light(), equipment, look_further=False)

    def follow(self, changed, full=None):
        """Return the transient that a change at time zero starts."""
        case, tubes = changed.fixed_light(), self.case.vessel.parallel
        if self.case.vessel.kind == "stirred tank":
            return vessel.transient(case, changed.equipment(self.gas, self.light), self.profile, self.gas, full)
        equipment, after = self.steady(changed)
        if changed.new_feed and full is None:
            old = elements.undisturbed(self.profile, self.gas, tubes)
        else:
            before = self.profile if full is None else self.steady(Changed(self.case, light=0.0))[1]
            old = elements.disturbed(case, equipment, before, self.gas)
        return elements.transient(case, equipment, old, after, self.gas)

    def mixed(self, case):
        """Return the mixed, unreacted inlet of a case."""
        return assemble.mixed_inlet(case, self.gas)

    def class_between(self, case):
        """Return the worst class between the old mixed inlet and that of a changed case."""
        return paths.line(self.book, self.mixed(self.case), self.mixed(case), case.vessel.pressure).class_

    def severity(self, stream):
        """Return the outcome of a complete reaction of a stream by the three product models."""
        return equilibrium.severity(self.book, stream.moles, stream.temperature, stream.pressure)

    def dew_margin(self, transient, coolant):
        """Return the smallest distance of coolant or gas from the dew point on the way [K], None if dry."""
        T, P, n = transient.gas()
        margins = []
        for i in np.unique(np.linspace(0, len(T) - 1, 25).astype(int)):
            dew = dewpoint.dew_point(dict(zip(self.gas.species, n[i] / n[i].sum(), strict=True)), P[i])
            if dew is not None:
                margins.append(min(T[i], coolant if coolant is not None else T[i]) - dew.temperature)
        return min(margins, default=None)


def setting(case):
    """Solve a case and return the `Setting` of its upsets."""
    case = replace(case, solver=replace(case.solver, rtol=max(case.solver.rtol, LOOSE)))
    gas = chemistry.mechanism(case.chemistry.mechanism and case.path(case.chemistry.mechanism))
    light = lamps(case)
    equipment = plant(case, gas, light)
    profile = SOLVERS[case.vessel.kind](case, equipment, look_further=False)
    feed = assemble.mixed_feed(case, gas)
    used = profile.fed[gas.index["Cl2"]] - profile.outlet.moles[gas.index["Cl2"]]
    heat = profile.total("heat_reaction") / used if used > 1e-9 * feed.total else float("nan")
    return Setting(
        case,
        gas,
        light,
        equipment,
        profile,
        feed,
        hazard.rulebook(case, gas),
        response(case),
        heat,
        hazard.light_off_temperature(profile, gas, feed),
    )

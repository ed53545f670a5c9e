"""One tube: the project's plug flow against Cantera's reactor driven from Python, J in every evaluation."""

from dataclasses import replace
from pathlib import Path

import cantera as ct

import reactor
from benchmarks.interleave import interleave
from reactor import chemistry
from reactor.kernel.light import absorb
from reactor.models import SOLVERS, assemble
from reactor.rating.plant import lamps, plant

CASE = Path(__file__).parent.parent / "cases" / "lapwing_ten.toml"
RTOL = 1e-6
GATE = 1e-4  # relative agreement of conversion and hottest temperature that a ratio needs to count


class Lit(ct.ExtensibleIdealGasConstPressureMoleReactor):
    """A slug of gas that sees the light of the tube in every evaluation."""

    def prepare(self, beam, sleeve_heat, photolysis):
        """Take the light, the lamp heat per metre, and the number of the reaction that the light drives."""
        self.beam, self.sleeve_heat, self.photolysis = beam, sleeve_heat, photolysis
        self.chlorine = self.phase.species_index("Cl2")

    def after_eval_walls(self, t):
        """Set J from the gas as it is now, and count the heat of photons and lamp."""
        gas = self.phase
        light = absorb(self.beam, 1e3 * gas.concentrations[self.chlorine], gas.T)
        gas.set_multiplier(light.J, self.photolysis)
        self.heat_rate = (light.power + self.sleeve_heat) / self.beam.area * self.volume


def reference(case, equipment, time):
    """Return the outlet conversion and temperature by Cantera after a residence `time` [s]."""
    gas = ct.Solution(str(equipment.gas.path), "gas-lit", transport_model=None)
    feed = assemble.mixed_inlet(case, equipment.gas)
    gas.TPX = feed.temperature, feed.pressure, dict(zip(equipment.gas.species, feed.fractions, strict=True))
    gas.set_multiplier(equipment.wall_loss, equipment.gas.wall)
    slug = Lit(gas, clone=False)
    beam = assemble.beams(equipment.light, None)[0]
    slug.prepare(beam, float(equipment.light.sleeve_heat[0]), equipment.gas.photolysis)
    before = gas["Cl2"].Y[0]
    net = ct.ReactorNet([slug])
    net.rtol, net.atol = RTOL, 1e-15
    net.advance(time)
    return 1 - gas["Cl2"].Y[0] / before, gas.T


def run():
    """Yield the lines of this figure."""
    case = reactor.load(CASE, ['cooling.mode="none"'])
    case = replace(case, solver=replace(case.solver, rtol=RTOL))
    gas = chemistry.mechanism()
    equipment = plant(case, gas, lamps(case))
    solve = SOLVERS[case.vessel.kind]
    time = solve(case, equipment).total("time")
    (ours, theirs), (profile, (conversion, T)) = interleave(lambda: solve(case, equipment),
                                                            lambda: reference(case, equipment, time))
    chlorine = gas.index["Cl2"]
    found = 1 - profile.outlet.moles[chlorine] / profile.fed[chlorine]
    gaps = abs(found / conversion - 1), abs(profile.outlet.temperature / T - 1)
    yield f"# single: ours {1e3 * ours:.1f} ms, Cantera {1e3 * theirs:.1f} ms, gaps {gaps[0]:.1e} {gaps[1]:.1e}"
    if max(gaps) > GATE:
        yield f"# single: the two disagree by more than {GATE:g}: no ratio"
        return
    yield f"ratio single {theirs / ours:.2f}"

"""
How bad a composition is if everything in it reacts: the three product models side by side.

- carbon equilibrium: Gibbs equilibrium with graphite, which is where soot ends;
- gas equilibrium: the same without graphite;
- substitution: chlorine replaces hydrogen, skeletons stay (`reactor.hazards.substitution`), which decides the
  class.

Severity counts the worst of the three, at constant pressure (temperature) and at constant volume (pressure).
The equilibria come from Cantera and cost tens of milliseconds each, so that they are asked for only where a
mixture is named, and kept.
"""

from dataclasses import dataclass
from functools import cache, lru_cache

import numpy as np

from reactor import library
from reactor.errors import RangeError
from reactor.hazards import substitution
from reactor.hazards.rules import fractions
from reactor.hazards.soot import equilibrium
from reactor.library import Cited

R = substitution.GAS_CONSTANT
MODELS = ("carbon equilibrium", "gas equilibrium", "substitution")
COLDEST, HOTTEST = 250.0, 6000.0  # K; where an equilibrium is looked for
CITED = (
    Cited("equilibrium products", "cantera_nasa_gas", "seen"),
    Cited("graphite", "cantera_nasa_condensed", "seen"),
)


@dataclass(frozen=True)
class Severity:
    """
    Outcome of a complete reaction by each of `MODELS`.

    `temperature` is adiabatic at constant pressure [K]; `temperature_closed` and `pressure_ratio` belong to a
    closed volume [K, -]; `soot` is the share of the carbon that ends as graphite at constant pressure.
    """

    temperature: dict
    temperature_closed: dict
    pressure_ratio: dict
    soot: float

    @property
    def hottest(self):
        """Return the worst adiabatic temperature [K]."""
        return max(self.temperature.values())

    @property
    def ratio(self):
        """Return the worst pressure ratio of a closed volume [-]."""
        return max(self.pressure_ratio.values())

    @property
    def worst_model(self):
        """Return the model that gives the worst pressure ratio."""
        return max(self.pressure_ratio, key=lambda model: self.pressure_ratio[model])


def severity(book, composition, T, P):
    """
    Return what a complete reaction of a mixture does, by the three product models.

    Parameters
    ----------
    book : Rulebook
        From `explosive.rulebook(gas)`. [-]
    composition : dict or array
        Amounts by species; any scale. [-]
    T, P : float
        Temperature and absolute pressure before the reaction. [K, Pa]

    Returns
    -------
    found : Severity
        Detonation and pressure piling are not in it. [-]
    """
    x = fractions(book, composition)
    hot, closed = (
        float(substitution.adiabatic_temperature(book.rungs, x, T, volume=closed)[0])
        for closed in (False, True)
    )
    amounts = dict(zip(book.rungs.species, x[0], strict=True))
    known = tuple((name, round(y, 9)) for name, y in amounts.items() if y > 1e-9 and name in _names())
    if sum(y for _, y in known) < 0.999:
        raise RangeError("equilibrium products: more than 0.1 % of the mixture has no thermochemistry here")
    carbon, gas = (_equilibria(known, round(float(T), 3), round(float(P), 1), soot) for soot in (True, False))
    return Severity(
        temperature=dict(zip(MODELS, (carbon[0], gas[0], hot), strict=True)),
        temperature_closed=dict(zip(MODELS, (carbon[1], gas[1], closed), strict=True)),
        pressure_ratio=dict(zip(MODELS, (carbon[2], gas[2], closed / float(T)), strict=True)),
        soot=carbon[3],
    )


@cache
def phases():
    """Return the gas and the graphite of the equilibria as Cantera phases (made once)."""
    import cantera

    own = str(library.folder() / "hazards" / "products.yaml")
    mechanism = str(library.folder() / "mechanism" / "light_alkanes.yaml")
    listed = cantera.Species.list_from_file(mechanism) + cantera.Species.list_from_file(own)
    peroxy = {row["key"] for row in library.table("species.csv").where("kind", "peroxy").rows}
    species = [s for s in listed if s.name not in peroxy and s.name != "graphite"]
    return cantera.Solution(thermo="ideal-gas", species=species), cantera.Solution(own, "soot")


@cache
def _names():
    return frozenset(phases()[0].species_names)


@lru_cache(maxsize=512)
def _equilibria(amounts, T, P, soot):
    """Return T at constant pressure, T and pressure ratio at constant volume, share of carbon in graphite."""
    gas, _ = phases()
    gas.TPX = T, P, dict(amounts)
    if not soot:
        before = gas.P
        gas.equilibrate("HP")
        hot = gas.T
        gas.TPX = T, P, dict(amounts)
        gas.equilibrate("UV")
        return hot, gas.T, gas.P / before, 0.0
    hot, share = _with_soot(gas, amounts, T, P)
    closed, ratio = _closed_with_soot(gas, amounts, T, P)
    return hot, closed, ratio, share


class _Sooty:
    """One mole of a mixture in equilibrium with graphite at a given temperature and pressure."""

    def __init__(self, amounts):
        self.gas, self.graphite = phases()
        gas = self.gas
        self.atoms = np.array([[gas.n_atoms(s, e) for e in gas.element_names] for s in gas.species_names])
        moles = np.zeros(gas.n_species)
        for name, amount in amounts:
            moles[gas.species_index(name)] = amount
        self.elements = moles @ self.atoms
        self.column = gas.element_index("C")
        self.carbon, self.last = self.elements[self.column], None

    def at(self, T, P):
        """Return enthalpy [J], moles of gas and moles of graphite."""
        self.gas.TP = T, P
        self.graphite.TP = T, P
        g = self.gas.standard_gibbs_RT  # at the pressure of the state
        solid_g = float(self.graphite.standard_gibbs_RT[0])
        moles, solid = equilibrium(self.atoms, g, solid_g, self.column, self.elements, self.last)
        self.last = moles
        enthalpy = moles @ self.gas.standard_enthalpies_RT + solid * self.graphite.standard_enthalpies_RT[0]
        return enthalpy * R * T, float(moles.sum()), solid


def _with_soot(gas, amounts, T, P):
    """Return the adiabatic temperature at constant pressure with graphite, and the share of carbon in it."""
    from scipy.optimize import brentq

    gas.TPX = T, P, dict(amounts)
    start, mixed = gas.enthalpy_mole / 1e3, _Sooty(amounts)
    hot = float(brentq(lambda t: mixed.at(t, P)[0] - start, COLDEST, HOTTEST, xtol=1e-3))
    return hot, float(mixed.at(hot, P)[2] / max(mixed.carbon, 1e-300))


def _closed_with_soot(gas, amounts, T, P):
    """Return temperature and pressure ratio in a closed volume with graphite, which takes no volume."""
    from scipy.optimize import brentq

    gas.TPX = T, P, dict(amounts)
    start, mixed, ratio = gas.int_energy_mole / 1e3, _Sooty(amounts), [1.0]

    def excess(t):
        for _ in range(20):
            H, moles, _ = mixed.at(t, P * ratio[0])
            new = moles * t / T
            done = abs(new / ratio[0] - 1) < 1e-7
            ratio[0] = new
            if done:
                break
        return H - moles * R * t - start

    hot = float(brentq(excess, COLDEST, HOTTEST, xtol=1e-3))
    excess(hot)
    return hot, ratio[0]

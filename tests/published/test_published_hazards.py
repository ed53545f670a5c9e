"""Hazards against published, worked and independently computed numbers."""

import cantera
import numpy as np
import pytest

from reactor import chemistry
from reactor.hazards import dewpoint, exotherm, explosive, materials, substitution


@pytest.fixture(scope="module")
def book():
    return explosive.rulebook(chemistry.mechanism())


@pytest.fixture(scope="module")
def nasa():
    listed = {s.name: s for s in cantera.Species.list_from_file("nasa_gas.yaml")}

    def phase(*names):
        return cantera.Solution(thermo="ideal-gas", species=[listed[name] for name in names])

    return phase


def adiabatic(book, composition, T):
    return float(substitution.adiabatic_temperature(book.rungs, explosive.fractions(book, composition), T)[0])


# Source: usbm5610, usbm503 and handbook_limits (fuel shares, memory); adiabatic temperatures own_threshold
# (computed with Gibbs equilibrium, skeletons kept). Worked. Tolerance 1 %: statistical filling against
# equilibrium.
@pytest.mark.parametrize(
    ("fuel", "percent", "kelvin"),
    [("CH4", 5.6, 870), ("CH4", 63, 1051), ("CH4", 70, 922), ("C2H6", 58, 1002), ("C2H6", 58.8, 988),
     ("CH3Cl", 10, 1010), ("CH3Cl", 63, 1012), ("CH2Cl2", 16, 967), ("CH2Cl2", 53, 1074)],
)  # fmt: skip
def test_the_adiabatic_temperature_at_a_recalled_limit_is_the_worked_one(book, fuel, percent, kelvin):
    composition = {fuel: percent, "Cl2": 100 - percent}
    assert adiabatic(book, composition, 298.15) == pytest.approx(kelvin, rel=0.01)


# Source: own_threshold (computed): explosion windows that 870 K and 750 K give back. Worked. Rich side 0.6
# vol% (0.7 at 750 K): statistical filling against equilibrium, and C3H8 58.8 was found with a species list
# that ends at trichloropropane. Lean side 2 %: enthalpies of formation (ATcT here, NASA there).
@pytest.mark.parametrize(
    ("fuel", "kelvin", "lean", "rich"),
    [("CH4", 870, 5.6, 72.8), ("CH4", 750, 4.3, 79.3), ("CH3Cl", 870, 7.8, 71.0), ("CH3Cl", 750, 6.0, 78.0),
     ("CH2Cl2", 870, 13.2, 64.9), ("CH2Cl2", 750, 9.9, 72.2), ("C2H5Cl", 870, 4.8, 60.7),
     ("C2H5Cl", 750, 3.6, 68.6), ("CHCl3", 870, 38.5, 55.8), ("CHCl3", 750, 26.7, 64.0),
     ("C2H6", 870, None, 66.0), ("C2H6", 750, 2.8, 73.6), ("C3H8", 870, None, 58.8)],
)  # fmt: skip
def test_a_threshold_gives_back_the_worked_window(book, fuel, kelvin, lean, rich):
    percent = np.arange(0.5, 99.0, 0.05)
    x = np.vstack([explosive.fractions(book, {fuel: p, "Cl2": 100 - p}) for p in percent])
    T = substitution.adiabatic_temperature(book.rungs, x, np.full(len(x), 298.15))
    window = percent[kelvin <= T]
    assert window.max() == pytest.approx(rich, abs=0.7 if kelvin == 750 else 0.6)
    assert lean is None or window.min() == pytest.approx(lean, rel=0.02, abs=0.06)


@pytest.mark.parametrize("methane", [0.06, 0.65, 0.75, 0.833, 0.9])
def test_substitution_agrees_with_the_equilibrium_of_the_chloromethanes(book, nasa, methane):
    # Source: Cantera 3.2 equilibrium at constant enthalpy, nasa_gas.yaml (computed here). Independent method.
    # Tolerance 10 K: a Boltzmann against a statistical distribution of the chlorine.
    gas = nasa("CH4", "CH3CL", "CH2CL2", "CHCL3", "CCL4", "HCL", "CL2", "CL")
    gas.TPX = 300.0, cantera.one_atm, {"CH4": methane, "CL2": 1 - methane}
    gas.equilibrate("HP")
    assert adiabatic(book, {"CH4": methane, "Cl2": 1 - methane}, 300.0) == pytest.approx(gas.T, abs=10)


def test_the_five_to_one_mixture_reaches_the_worked_temperature(book):
    # Source: own_threshold (computed): 5:1 from 60 degC, T_ad 697.1 K; from 25 degC 674 K. Worked.
    assert adiabatic(book, {"CH4": 5, "Cl2": 1}, 333.15) == pytest.approx(697.1, abs=2)
    assert adiabatic(book, {"CH4": 5, "Cl2": 1}, 298.15) == pytest.approx(674, abs=2)


def test_the_simple_rise_of_the_five_to_one_mixture_is_the_worked_one():
    # Source: 0.1667 x 99 660 / 36.7 = 452.6 K. Worked by hand (computed).
    assert exotherm.simple_rise(1 / 6, 99660.0, 36.7) == pytest.approx(452.6, abs=0.1)


def test_mtsr_follows_the_chlorine_left(book):
    # Source: own worked example (computed): CH4:Cl2 5:1 at 60 degC reaches 697.1 K; with 5 % of the chlorine
    # left, T + 0.05 x rise is 351.3 K with the mean heat capacity up to 697 K, 355.8 K with that of 60 degC.
    # Worked: the first is a lower, the second an upper bound.
    full = exotherm.complete(book, explosive.fractions(book, {"CH4": 5, "Cl2": 1})[:, :-2], [333.15])
    assert full.mtsr == pytest.approx(697.1, abs=2)
    left = {"CH4": 4.05, "CH3Cl": 0.95, "HCl": 0.95, "Cl2": 0.05}
    part = exotherm.complete(book, explosive.fractions(book, left)[:, :-2], [333.15])
    assert 351.3 < part.mtsr < 355.8


@pytest.fixture(scope="module")
def chain(nasa):
    gas = nasa("CL2", "CL")

    def equilibrium(T):
        gas.TP = T, 1e5
        potential = gas.standard_gibbs_RT
        return np.exp(potential[0] - 2 * potential[1]) * 1e5 / (8.31446261815324 * T)

    def propagation(T):
        return 6.6e-12 * np.exp(-1240 / T) * 6.02214076e23 * 1e-6

    return exotherm.DarkChain(propagation, equilibrium, 5 / 6, 1 / 6, 1.2e5, 99660.0, 36.7)


# Source: own worked example (computed) with k(Cl + CH4) of memory and Kc of Cantera nasa_gas.yaml: CH4:Cl2
# 5:1, 1.2 bar. Worked; the printed figures have three digits.
@pytest.mark.parametrize(
    ("celsius", "rate", "seconds"),
    [(200, 2.29e-3, 70.1), (250, 0.0468, 3.78), (300, 0.560, 0.347), (350, 4.45, 0.0474)],
)
def test_the_dark_chain_runs_away_in_the_worked_time(chain, celsius, rate, seconds):
    assert chain.rate(celsius + 273.15) == pytest.approx(rate, rel=3e-3)
    assert chain.time_to_maximum_rate(celsius + 273.15) == pytest.approx(seconds, rel=3e-3)


def test_the_dark_chain_has_the_worked_activation_energy(chain):
    # Source: own worked example (computed): 130.5 kJ/mol at 300 degC. Worked.
    assert chain.activation(573.15) == pytest.approx(130.5e3, rel=1e-3)


@pytest.mark.parametrize(("response", "celsius"), [(10, 232.2), (60, 202.4), (600, 169.1)])
def test_the_light_off_temperature_is_the_worked_one(chain, response, celsius):
    # Source: own worked example (computed). Worked; printed to 0.1 K.
    assert exotherm.dark_ignition(chain, response) - 273.15 == pytest.approx(celsius, abs=0.06)


# Source: thermo061 by root finding on its own curves (computed), 1.2 to 6 bar. Worked; printed to 0.1 K.
@pytest.mark.parametrize(
    ("species", "fraction", "bar", "celsius"),
    [("CCl4", 0.05, 1.2, 5.6), ("CHCl3", 0.05, 1.2, -5.4), ("CH2Cl2", 0.1, 1.2, -9.5),
     ("Cl2", 0.1667, 1.2, -65.4),
     ("Cl2", 1.0, 6.0, 15.8), ("Cl2", 1.0, 3.0, -6.1), ("CH3Cl", 0.2, 6.0, -20.0)],
)  # fmt: skip
def test_the_dew_point_of_one_vapour_is_the_worked_one(species, fraction, bar, celsius):
    dew = dewpoint.dew_point({species: fraction}, bar * 1e5)
    assert dew.temperature - 273.15 == pytest.approx(celsius, abs=0.1)


# Source: Raoult's law on the curves of thermo061 (computed). Worked. Tolerance 0.5 K: the mole fractions were
# printed to four decimals.
@pytest.mark.parametrize(
    ("composition", "bar", "celsius", "first"),
    [
        ({"CH4": 0.8320, "CH3Cl": 0.0628, "CH2Cl2": 0.0123, "CHCl3": 0.0011, "HCl": 0.0908, "Cl2": 0.0009},
         1.5, -34.4, "CH2Cl2"),
        ({"CH4": 0.9120, "CH3Cl": 0.0335, "CH2Cl2": 0.0056, "CHCl3": 0.0008, "CCl4": 0.0001, "HCl": 0.0475,
          "Cl2": 0.0005}, 1.5, -43.9, "CH2Cl2"),
        ({"CH4": 0.0116, "CH3Cl": 0.0033, "CH2Cl2": 0.0076, "CHCl3": 0.0396, "CCl4": 0.4127, "HCl": 0.5224,
          "Cl2": 0.0028}, 2.0, 72.4, "CCl4"),
        ({"C2H6": 0.7160, "C2H5Cl": 0.1376, "1,1-C2H4Cl2": 0.0021, "1,2-C2H4Cl2": 0.0007, "HCl": 0.1429,
          "Cl2": 0.0006}, 1.3, -20.0, "C2H5Cl"),
        ({"C3H8": 0.7800, "1-C3H7Cl": 0.0506, "2-C3H7Cl": 0.0546, "1,2-C3H6Cl2": 0.0015,
          "1,3-C3H6Cl2": 0.0005, "2,2-C3H6Cl2": 0.0007, "HCl": 0.1111, "Cl2": 0.0010}, 1.3, 3.7, "1-C3H7Cl"),
    ],
)  # fmt: skip
def test_the_dew_point_of_a_reactor_outlet_is_the_worked_one(composition, bar, celsius, first):
    dew = dewpoint.dew_point(composition, bar * 1e5)
    assert dew.temperature - 273.15 == pytest.approx(celsius, abs=0.5)
    assert dew.species == first


# Source: CRC handbook (memory). Independent data; tolerances of the trade.
@pytest.mark.parametrize(
    ("species", "kPa", "part"), [("CHCl3", 26.2, 0.01), ("CCl4", 15.2, 0.01), ("CH2Cl2", 58.2, 0.02)]
)
def test_a_vapour_pressure_at_25_degc_is_the_handbook_one(species, kPa, part):
    assert dewpoint.vapour_pressure(species, 298.15) == pytest.approx(kPa * 1e3, rel=part)


def test_hexachloroethane_sublimes_at_the_handbook_pressure():
    # Source: Stull's points of 1947 (memory): 54.8 Pa at 20 degC; 1000 ppm at 1.5 bar frosts at 34.9 degC.
    # Independent of the Antoine curve in the data; 8 % and 1 K is how far the two differ.
    assert dewpoint.vapour_pressure("C2Cl6", 293.15) == pytest.approx(54.8, rel=0.08)
    dew = dewpoint.dew_point({"C2Cl6": 1e-3, "N2": 0.999}, 1.5e5)
    assert dew.phase == "solid"
    assert dew.temperature - 273.15 == pytest.approx(34.9, abs=1)


@pytest.mark.parametrize("species", ["Cl2", "CH3Cl", "CCl4", "C2H5Cl", "1,2-C2H4Cl2", "2-C3H7Cl"])
@pytest.mark.parametrize("celsius", [-40, -10, 12, 35, 75])
def test_a_vapour_pressure_between_the_points_is_that_of_the_package(species, celsius):
    # Source: package thermo, default curve (seen). Checks the interpolation, not the data.
    thermo = pytest.importorskip("thermo")
    numbers = {"Cl2": "7782-50-5", "CH3Cl": "74-87-3", "CCl4": "56-23-5", "C2H5Cl": "75-00-3",
               "1,2-C2H4Cl2": "107-06-2", "2-C3H7Cl": "75-29-6"}  # fmt: skip
    curve = thermo.VaporPressure(CASRN=numbers[species])
    expected = curve.T_dependent_property(celsius + 273.15)
    assert dewpoint.vapour_pressure(species, celsius + 273.15) == pytest.approx(expected, rel=0.01)


@pytest.mark.parametrize(
    ("fuel", "number"),
    [("CH4", "74-82-8"), ("C2H6", "74-84-0"), ("C3H8", "74-98-6"), ("CH3Cl", "74-87-3"),
     ("C2H5Cl", "75-00-3")],
)  # fmt: skip
def test_explosion_limits_in_air_are_those_of_the_package(fuel, number):
    # Source: IEC 60079-20-1 (2010) in the package chemicals (seen).
    chemicals = pytest.importorskip("chemicals")
    low, high, _ = materials.air_limits()[fuel]
    assert low == pytest.approx(chemicals.LFL(CASRN=number, method="IEC 60079-20-1 (2010)"), abs=1e-4)
    assert high == pytest.approx(chemicals.UFL(CASRN=number, method="IEC 60079-20-1 (2010)"), abs=1e-4)


@pytest.mark.parametrize(("fuel", "number"), [("CH4", "74-82-8"), ("C2H6", "74-84-0"), ("C3H8", "74-98-6")])
def test_ignition_temperatures_in_air_are_those_of_the_package(fuel, number):
    # Source: IEC 60079-20-1 (2010) in the package chemicals (seen).
    chemicals = pytest.importorskip("chemicals")
    expected = chemicals.T_autoignition(number, method="IEC 60079-20-1 (2010)")
    assert materials.ignition_temperatures("air")[fuel][0] == pytest.approx(expected, abs=0.1)

"""Units against pint, and amounts of gas against printed values."""

import pint
import pytest

from reactor import units
from reactor.units.table import TABLE

REGISTRY = pint.UnitRegistry(autoconvert_offset_to_baseunit=True)
SPELT = {  # the same unit in pint's words
    "-": "dimensionless", "1": "dimensionless", "%": "percent", "vol%": "percent", "mol%": "percent",
    "wt%": "percent", "ppm_mol": "ppm", "ppm_wt": "ppm", "ppb": "nm/m", "Torr": "torr", '"': "inch",
    "t": "metric_ton", "lb": "pound", "lbmol": "mol * pound / gram", "BTU": "Btu_it", "Btu": "Btu_it",
    "gal": "US_liquid_gallon", "cal": "cal_th",
    "kcal": "kcal_th", "rpm": "1/min", "Hz": "1/s", "deg": "degree", "d": "day", "in": "inch",
}  # fmt: skip
GAS = {
    "Nm3": ("m^3", 273.15, "atm"),
    "Sm3": ("m^3", 288.15, "atm"),
    "scf": ("ft^3", 519.67 / 1.8, "14.696 psi"),
}


def plain(name):
    """Tell whether a unit of the table is one that pint has: no gauge, no gas volume, no absolute suffix."""
    known = TABLE[name]
    is_gas = name.startswith(("scf", "Nm3", "Sm3"))
    return not is_gas and (known.sort not in ("gauge", "absolute") or name in ("atm", "degC", "degF"))


@pytest.mark.parametrize("name", [name for name in TABLE if plain(name)])
def test_every_unit_that_pint_knows_agrees_with_pint(name):
    # Source: pint's own definitions (seen, the installed package). Evidence: independent table.
    theirs = REGISTRY.Quantity(7.25, SPELT.get(name, name)).to_base_units()
    assert units.to_si(7.25, name) == pytest.approx(theirs.magnitude, rel=1e-12)


@pytest.mark.parametrize(
    ("ours", "theirs"),
    [
        # Source: pint's own definitions (seen, the installed package). Evidence: independent table.
        ("BTU/h/ft2/degF", "Btu_it/hour/foot^2/delta_degF"),
        ("h*ft2*degF/BTU", "hour*foot^2*delta_degF/Btu_it"),
        ("W/(m2 K)", "W/m^2/K"),
        ("m^2*K/kW", "m^2*K/kW"),
        ("kJ/mol/K", "kJ/mol/K"),
        ("lb/h", "pound/hour"),
        ("lbmol/h", "mol*pound/gram/hour"),
        ("kmol/h", "kmol/hour"),
        ("t/d", "metric_ton/day"),
        ("g/mol", "g/mol"),
    ],
)
def test_compound_units_agree_with_pint(ours, theirs):
    pint_value = REGISTRY.Quantity(1.0, theirs).to_base_units().magnitude
    assert units.to_si(1.0, ours) == pytest.approx(pint_value, rel=1e-12)


@pytest.mark.parametrize("name", GAS)
def test_reference_volumes_are_ideal_gas_at_their_conditions(name):
    # Source: p V / (R T) with pint's molar gas constant, CODATA 2018 (seen, the installed package).
    # Reference conditions: 0 degC and 15 degC with 1.01325 bar, 60 degF with 14.696 psia (memory: DIN 1343,
    # ISO 2533, the trade's scf). Evidence: limit.
    volume, temperature, pressure = GAS[name]
    amount = (REGISTRY.Quantity(1, volume) * REGISTRY(pressure)) / (
        REGISTRY.Quantity(1, "molar_gas_constant") * REGISTRY.Quantity(temperature, "K")
    )
    assert units.to_si(1.0, name) == pytest.approx(amount.to("mol").magnitude, rel=1e-12)


@pytest.mark.parametrize(
    ("text", "printed", "figures"),
    [
        # Source: molar volume of ideal gas 22.41396954 L/mol at 0 degC and 1 atm, CODATA 2018 (memory).
        ("Nm3", 1000 / 22.41396954, 1e-8),
        # Source: 379.5 scf in 1 lbmol, handbooks of gas processing (memory). Evidence: worked, four figures.
        ("scf", 453.59237 / 379.5, 2e-4),
        # Source: 1 Nm3/h = 0.01239 mol/s and 1 scfm = 0.01992 mol/s, worked by hand (computed).
        ("Nm3/h", 0.01239, 4e-4),
        ("scfm", 0.01992, 4e-4),
    ],
)
def test_reference_volumes_hold_the_printed_amounts(text, printed, figures):
    assert units.to_si(1.0, text) == pytest.approx(printed, rel=figures)


@pytest.mark.parametrize("gauge", ["barg", "psig", "kPa gauge"])
def test_gauge_pressure_is_absolute_less_one_standard_atmosphere(gauge):
    # Source: standard atmosphere 101325 Pa in pint (seen, the installed package). Evidence: limit.
    plain_unit = {"barg": "bar", "psig": "psi", "kPa gauge": "kPa"}[gauge]
    theirs = (REGISTRY.Quantity(0.7, plain_unit) + REGISTRY.Quantity(1, "atm")).to("Pa").magnitude
    assert units.to_si(0.7, gauge) == pytest.approx(theirs, rel=1e-12)


def test_atomic_weights_are_those_of_an_independent_table():
    # Source: element table of Cantera (seen, the installed package). Evidence: independent table.
    import cantera

    from reactor import library

    table = library.table("atoms.csv")
    for element, weight in zip(table.text("element"), table.si("weight"), strict=True):
        assert 1000 * weight == pytest.approx(cantera.Element(element).weight, rel=1e-12)

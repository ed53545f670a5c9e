"""Units: what is read, what is refused and how it is said."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from reactor import units
from reactor.units import kinds
from reactor.units.table import TABLE

HEADERS = """nm um mm cm m cm^2 m^2 1/s s min h K degC Pa kPa bar mbar atm W kW J/mol kJ/mol J/mol/K W/m/K
    W/m^2/K m^2*K/W kg/m^3 g/mol kg/mol % - deg vol% mol% ppm""".split()  # noqa: SIM905


def said(kind, value):
    """Return the sentence with which a kind refuses a value."""
    with pytest.raises(ValueError) as caught:
        kind.read(value)
    return str(caught.value)


@pytest.mark.parametrize(
    "text",
    HEADERS,
)
def test_headers_of_data_files_are_known_and_arrays_come_back_as_arrays(text):
    assert units.to_si(np.array([1.0, 2.0]), text).shape == (2,)
    # limit: from_si undoes to_si
    assert units.from_si(units.to_si(7.25, text), text) == pytest.approx(7.25, rel=1e-12)


@pytest.mark.parametrize(
    ("number", "text", "si"),
    [
        # limit: definitions of the units (exact), and zero points 273.15 K, 459.67 degF, 101325 Pa
        (25, "degC", 298.15),
        (77, "degF", 298.15),
        (2, '"', 0.0508),
        (2, "inch", 0.0508),
        (0.5, "barg", 151325.0),
        (0.5, "bar(g)", 151325.0),
        (1.5, "bar absolute", 150000.0),
        (1.5, "bara", 150000.0),
        (-20, "kPa gauge", 81325.0),
        (30, "°C", 303.15),
        (1, "m³", 1.0),
        (3, "µm", 3e-6),
        (1, "W/(m2 K)", 1.0),
        (1, "W/m²/K", 1.0),
        (90, "rpm", 1.5),
        (36, "Nm^3/h", 36 * units.to_si(1, "Nm3/h")),
    ],
)
def test_trade_spellings_mean_what_the_trade_means(number, text, si):
    assert units.to_si(number, text) == pytest.approx(si, rel=1e-12)


@pytest.mark.parametrize("text", ["furlong", "", "W/foo", "m//s", "W/m2 K", "barg/s", "m3 s5x"])
def test_an_unknown_unit_is_named(text):
    with pytest.raises(ValueError) as caught:
        units.to_si(1.0, text)
    assert str(caught.value) == f"unknown unit {text!r}"


@given(st.floats(-1e6, 1e6), st.sampled_from(sorted(TABLE)))
def test_every_unit_goes_to_si_and_back(number, text):
    # limit: the round trip loses no more than rounding against the unit's own zero shift
    back = units.from_si(units.to_si(number, text), text)
    assert back == pytest.approx(number, rel=1e-12, abs=1e-12 * (1 + abs(units.unit(text).shift)))


@given(st.floats(1e-3, 900.0))
def test_a_number_reads_as_python_reads_it(number):
    assert kinds.LENGTH.read(f"{number!r} m").si == number


@pytest.mark.parametrize("kind", kinds.KINDS, ids=lambda kind: kind.name)
def test_the_example_of_every_kind_reads_and_its_spellings_are_accepted(kind):
    example = kind.like.strip('"')
    assert kind.least <= kind.read(example).si <= kind.most
    number = {kinds.TEMPERATURE: 300, kinds.PRESSURE: 50, kinds.LENGTH: 2}.get(kind, 0.5)
    for spelling in kind.accepted:
        value = kind.read(f"{number} {spelling}" if spelling != "-" else f"{number}").si
        assert math.isfinite(value)


READ = [
    (kinds.LENGTH, "1e3 mm", 1.0, "m"),
    (kinds.LENGTH, "+.5 m", 0.5, "m"),
    (kinds.LENGTH, "3m", 3.0, "m"),
    (kinds.LENGTH, "  3   m ", 3.0, "m"),
    (kinds.RATE, "0.1 1/s", 0.1, "1/s"),
    (kinds.RATE, "0.1 /s", 0.1, "1/s"),
    (kinds.RATE, "0.1 s^-1", 0.1, "1/s"),
    (kinds.FLOW, "36 kg/h", 0.01, "kg/s"),
    (kinds.FLOW, "3.6 kmol/h", 1.0, "mol/s"),
    (kinds.FRACTION, 0.02, 0.02, "-"),
    (kinds.FRACTION, "0.02", 0.02, "-"),
    (kinds.FRACTION, "2 %", 0.02, "-"),
    (kinds.MOLE_FRACTION, "5 mol%", 0.05, "-"),
    (kinds.MASS_FRACTION, "20 ppm_wt", 2e-5, "-"),
    (kinds.TEMPERATURE_DIFFERENCE, "18 delta_degF", 10.0, "K"),
]


@pytest.mark.parametrize(("kind", "text", "si", "unit"), READ)
def test_a_typed_quantity_keeps_its_text_and_gives_si(kind, text, si, unit):
    # limit: definitions of the units
    typed = kind.read(text)
    assert (typed.text, typed.unit) == (str(text), unit)
    assert typed.si == pytest.approx(si, rel=1e-14)


GAUGE = "does not say absolute or gauge; say bar absolute or barg, psia or psig, kPa absolute or kPa gauge"
GAS = (
    "is a volume at unsaid conditions; say Nm3/h (0 degC, 1.01325 bar), Sm3/h (15 degC, 1.01325 bar), "
    "scfm (60 degF, 14.696 psia), or a flow in kg/h or mol/s"
)
LENGTHS = 'a length is written in m, cm, mm, um, inch, ft; like "3 m"'
REFUSED = [
    (kinds.LENGTH, "3 s", '"3 s": s is a time, a length is due; write it like "3 m"'),
    (kinds.LENGTH, "3", f'"3": the unit is missing; {LENGTHS}'),
    (kinds.LENGTH, 3, f"3: the unit is missing; {LENGTHS}"),
    (kinds.LENGTH, True, 'True: a length is due; write it like "3 m"'),
    (kinds.LENGTH, "m", '"m": the number is missing; write it like "3 m"'),
    (kinds.LENGTH, "", '"": the number is missing; write it like "3 m"'),
    (kinds.LENGTH, "nan m", '"nan m": not a number; write it like "3 m"'),
    (kinds.LENGTH, "-inf m", '"-inf m": not a number; write it like "3 m"'),
    (kinds.LENGTH, float("nan"), 'nan: not a number; write it like "3 m"'),
    (kinds.LENGTH, "1e999 m", '"1e999 m": the number is too large; write it like "3 m"'),
    (kinds.LENGTH, "1 000 m", '"1 000 m": the digits of a number stand together; write "1000 m"'),
    (kinds.LENGTH, "1_000 m", '"1_000 m": the digits of a number stand together; write "1000 m"'),
    (kinds.LENGTH, "1'000 m", '"1\'000 m": the digits of a number stand together; write "1000 m"'),
    (kinds.LENGTH, "1,5 m", '"1,5 m": a comma cannot stand in a number; write "1.5 m"'),
    (
        kinds.LENGTH,
        "1,500 m",
        '"1,500 m": a comma cannot stand in a number; write "1.500 m" or "1500 m", whichever is meant',
    ),
    (kinds.LENGTH, "1,500.5 m", '"1,500.5 m": a comma cannot stand in a number; write "1500.5 m"'),
    (kinds.LENGTH, "0 m", '"0 m": a length is more than 0; write it like "3 m"'),
    (kinds.LENGTH, "5 km", '"5 km": outside 1e-09 km to 1 km; write it like "3 m"'),
    (kinds.LENGTH, "5 incch", f"\"5 incch\": unknown unit 'incch'; did you mean 'inch'?; {LENGTHS}"),
    (kinds.LENGTH, "5 W/m", f'"5 W/m": W/m does not fit; {LENGTHS}'),
    (
        kinds.TEMPERATURE,
        "25 C",
        '"25 C": C is the coulomb; a temperature is written in degC; write it like "25 degC"',
    ),
    (kinds.TEMPERATURE, "25 K", '"25 K": outside 200 K to 1500 K; write it like "25 degC"'),
    (
        kinds.TEMPERATURE_DIFFERENCE,
        "10 degC",
        '"10 degC": degC is counted from a fixed zero; a difference is written in K; write it like "10 K"',
    ),
    (kinds.PRESSURE, "1.5 bar", f'"1.5 bar": bar {GAUGE}; write it like "1.5 bar absolute"'),
    (kinds.PRESSURE, "20 psi", f'"20 psi": psi {GAUGE}; write it like "1.5 bar absolute"'),
    (
        kinds.PRESSURE_DIFFERENCE,
        "30 mbarg",
        '"30 mbarg": mbarg is gauge; a difference is neither absolute nor gauge; write it like "30 mbar"',
    ),
    (kinds.FLOW, "100 m3/h", f'"100 m3/h": m3/h {GAS}; write it like "100 kg/h"'),
    (kinds.FLOW, "100 nm3/h", f'"100 nm3/h": nm3/h {GAS}; write it like "100 kg/h"'),
    (
        kinds.FLOW,
        "5 sccm",
        '"5 sccm": sccm has no agreed reference; say scfm (60 degF, 14.696 psia), '
        'Nm3/h (0 degC, 1.01325 bar) or mol/s; write it like "100 kg/h"',
    ),
    (
        kinds.FLOW,
        "5 t/a",
        '"5 t/a": t/a does not say the hours run in a year; say kg/h or t/d; write it like "100 kg/h"',
    ),
    (kinds.FLOW, "-5 kg/h", '"-5 kg/h": a flow is more than 0; write it like "100 kg/h"'),
    (
        kinds.PORTION,
        "20 ppm",
        '"20 ppm": ppm does not say its base; say ppm_mol or ppm_wt; write it like "99 mol%"',
    ),
    (kinds.PORTION, "20 %", '"20 %": % does not say its base; say mol% or wt%; write it like "99 mol%"'),
    (kinds.FRACTION, 2, '2: outside 0 to 1; write it like "2 %"'),
    (kinds.FRACTION, "3 wt%", '"3 wt%": wt% is by mass; a plain share is due; write it like "2 %"'),
    (
        kinds.MOLE_FRACTION,
        "3 wt%",
        '"3 wt%": wt% is by mass; a fraction by mol is due; write it like "2 mol%"',
    ),
    (kinds.NUMBER, "8,5", '"8,5": a comma cannot stand in a number; write "8.5"'),
]


@pytest.mark.parametrize(("kind", "value", "sentence"), REFUSED, ids=lambda value: str(value)[:20])
def test_a_bad_quantity_is_refused_with_the_right_way_to_write_it(kind, value, sentence):
    assert said(kind, value) == sentence


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (0.012393064834852867, "Nm3/h", "1 Nm3/h"),
        (151325.0, "barg", "0.5 barg"),
        (0.0, "K", "0 K"),
        (123456.7, "W", "123457 W"),
        (1e9, "-", "1e+09"),
        (0.02, "%", "2 %"),
        (298.15, "degC", "25 degC"),
        (-0.5, "m", "-0.5 m"),
    ],
)
def test_a_value_is_shown_in_the_unit_asked_for(value, unit, text):
    assert units.show(value, unit) == text


def test_the_help_lists_every_kind_with_its_spellings():
    rows = {row[0]: row for row in units.help_rows()}
    assert len(rows) == len(kinds.KINDS)
    assert rows["pressure"][2].startswith("bar absolute, barg")

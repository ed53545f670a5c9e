"""The case file: what is read, what is assumed, and how every fault is said."""

import contextlib
import copy
import dataclasses
import datetime
import subprocess
import sys
import time

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reactor import case, units
from reactor.case import places, species, templates
from reactor.errors import CaseError

TEXT = """\
[case]
title = "Dotterel: a case for the tests"
revision = "B"
date = 2026-12-01

[feed.alkane]
flow = "36 mol/s"
composition = { CH4 = "99 mol%", N2 = "balance" }
temperature = "50 degC"

[feed.chlorine]
ratio = 10
temperature = "30 degC"

[vessel]
kind = "plug flow"
geometry = "annulus"
shell_inside = "154 mm"
length = "1.2 m"
pressure = "0.5 barg"

[[lamp]]
kind = "LED 365 nm"
power = "0.4 kW"

[sleeve]
outside = "60 mm"
thickness = "2.5 mm"

[chemistry]
wall_loss = "0.1 1/s"
"""
FLOW = TEXT.replace("ratio = 10", 'flow = "101.6 kg/h"')
TANK = TEXT.replace('"plug flow"\ngeometry = "annulus"', '"stirred tank"\nstirring = "300 rpm"')


def faults(text, **options):
    """Return the faults of a text."""
    with pytest.raises(CaseError) as caught:
        case.loads(text, **options)
    return caught.value.faults


def with_line(after, line):
    """Return the text with one line put behind another, which must be there."""
    assert after in TEXT
    return TEXT.replace(after, f"{after}\n{line}", 1)


def swapped(old, new, text=TEXT):
    """Return the text with one place changed, which must be there."""
    assert old in text
    return text.replace(old, new, 1)


def test_a_case_holds_si_floats_under_the_names_of_the_file():
    read = case.loads(TEXT)
    # limit: definitions of the units
    assert read.vessel.shell_inside == pytest.approx(0.154, rel=1e-14)
    assert read.vessel.pressure == pytest.approx(151325.0, rel=1e-14)
    assert (read.vessel.length, read.vessel.parallel, read.lamp[0].power) == (1.2, 1, 400.0)
    assert read.feed["alkane"].temperature == pytest.approx(323.15, rel=1e-14)
    assert read.about.date == datetime.date(2026, 12, 1)
    assert read.title == "Dotterel: a case for the tests"
    assert read.cooling.mode == "none"
    assert (read.lamp[0].lit_from, read.lamp[0].lit_to, read.lamp[0].end_of_life) == (0.0, 1.2, 0.8)


def test_the_ratio_sets_the_chlorine_from_the_alkane_moles():
    read = case.loads(TEXT)
    # limit: 36 mol/s x 0.99 / 10
    assert read.feed["chlorine"].moles == {"Cl2": pytest.approx(3.564, rel=1e-14)}
    assert read.feed["alkane"].moles == pytest.approx({"CH4": 35.64, "N2": 0.36}, rel=1e-12)


def test_the_ratio_counts_only_the_chlorine_of_a_mixed_chlorine_stream():
    text = with_line("ratio = 10", 'composition = { Cl2 = "98 mol%", N2 = "2 mol%" }')
    moles = case.loads(text).feed["chlorine"].moles
    # limit: alkane over chlorine is the ratio typed
    assert 35.64 / moles["Cl2"] == pytest.approx(10, rel=1e-12)
    assert moles["N2"] == pytest.approx(moles["Cl2"] * 2 / 98, rel=1e-12)


def test_a_mass_flow_becomes_moles_through_the_molar_mass():
    # worked: 101.6 kg/h over 70.90 g/mol, weights of data/atoms.csv (seen)
    assert case.loads(FLOW).feed["chlorine"].moles["Cl2"] == pytest.approx(101.6 / 3600 / 0.0709, rel=1e-12)


def test_a_composition_by_mass_becomes_mole_fractions():
    text = swapped('{ CH4 = "99 mol%", N2 = "balance" }', '{ CH4 = "50 wt%", N2 = "50 wt%" }')
    moles = case.loads(text).feed["alkane"].moles
    # worked: equal masses stand as the inverse of the molar masses 16.043 and 28.014 g/mol
    assert moles["CH4"] / moles["N2"] == pytest.approx(28.014 / 16.043, rel=1e-12)
    assert sum(moles.values()) == pytest.approx(36, rel=1e-12)


def test_traces_join_a_composition_of_the_same_base():
    text = swapped('N2 = "balance"', 'N2 = "balance", O2 = "20 ppm_mol"')
    moles = case.loads(text).feed["alkane"].moles
    assert moles["O2"] == pytest.approx(36 * 20e-6, rel=1e-12)
    assert sum(moles.values()) == pytest.approx(36, rel=1e-12)


def test_species_answer_to_their_trade_names():
    text = swapped("CH4 =", '"methane" =')
    assert case.loads(text).feed["alkane"].moles == case.loads(TEXT).feed["alkane"].moles
    assert species.find("ethylene dichloride") == "1,2-C2H4Cl2"
    # worked: 2 x 12.011 + 4 x 1.008 + 2 x 35.45 g/mol
    assert species.molar_mass("1,2-C2H4Cl2") == pytest.approx(0.098954, rel=1e-12)


LENGTHS = 'a length is written in m, cm, mm, um, inch, ft; like "154 mm"'
GAUGE = "does not say absolute or gauge; say bar absolute or barg, psia or psig, kPa absolute or kPa gauge"
INJECT = '\n[[inject]]\nshare = "60 %"\nposition = "0.4 m"\n'
WRONG = [
    # what stands in the file, what the one fault says
    (swapped("length =", "lenght ="), [
        "case.toml:19: vessel.lenght: unknown; did you mean 'length'?",
        'case.toml:15: vessel.length: missing; write a length, like "3 m"',
    ]),
    (swapped('"1.2 m"', '"3 s"'),
     'case.toml:19: vessel.length: "3 s": s is a time, a length is due; write it like "3 m"'),
    (swapped('"1.2 m"', "1.2"),
     "case.toml:19: vessel.length: 1.2: the unit is missing; a length is written in m, cm, mm, um, inch, ft; "
     'like "3 m"'),
    (swapped('"1.2 m"', '"1,2 m"'),
     'case.toml:19: vessel.length: "1,2 m": a comma cannot stand in a number; write "1.2 m"'),
    (swapped('"154 mm"', '"1 540 mm"'),
     'case.toml:18: vessel.shell_inside: "1 540 mm": the digits of a number stand together; write "1540 mm"'),
    (swapped('"154 mm"', '"154 milli"'),
     f"case.toml:18: vessel.shell_inside: \"154 milli\": unknown unit 'milli'; {LENGTHS}"),
    (swapped('"154 mm"', '"154 m"'),
     'case.toml:18: vessel.shell_inside: "154 m": outside 0.002 m to 20 m; write it like "154 mm"'),
    (swapped('"0.5 barg"', '"1.5 bar"'),
     f'case.toml:20: vessel.pressure: "1.5 bar": bar {GAUGE}; write it like "1.5 bar absolute"'),
    (swapped('"50 degC"', '"50 C"'),
     'case.toml:9: feed.alkane.temperature: "50 C": C is the coulomb; a temperature is written in degC; '
     'write it like "25 degC"'),
    (swapped('"50 degC"', '"50 K"'),
     'case.toml:9: feed.alkane.temperature: "50 K": outside 200 K to 1500 K; write it like "25 degC"'),
    (swapped('"36 mol/s"', '"321 m3/h"'),
     'case.toml:7: feed.alkane.flow: "321 m3/h": m3/h is a volume at unsaid conditions; say Nm3/h (0 degC, '
     "1.01325 bar), Sm3/h (15 degC, 1.01325 bar), scfm (60 degF, 14.696 psia), or a flow in kg/h or mol/s; "
     'write it like "100 kg/h"'),
    (swapped('"36 mol/s"', '"0 mol/s"'),
     'case.toml:7: feed.alkane.flow: "0 mol/s": a flow is more than 0; write it like "100 kg/h"'),
    (swapped('"plug flow"', '"plugflow"'),
     'case.toml:16: vessel.kind: "plugflow": did you mean "plug flow"? write "plug flow" or "stirred '
     'tank" or "tanks in series"'),
    (swapped('"LED 365 nm"', '"LED 356 nm"'),
     "case.toml:23: lamp.1.kind: \"LED 356 nm\": unknown; "
     "did you mean 'LED 395 nm' or 'LED 385 nm' or 'LED 365 nm'?"),
    (swapped('CH4 = "99', 'CH_4 = "99'),
     "case.toml:8: feed.alkane.composition.CH_4: unknown; did you mean 'CH4'?"),
    (swapped('N2 = "balance"', 'N2 = "2 mol%"'),
     'case.toml:8: feed.alkane.composition: sums to 101 %; it must be 100 %, '
     'or one species must be "balance"'),
    (swapped('N2 = "balance"', 'N2 = "1 wt%"'),
     "case.toml:8: feed.alkane.composition.N2: by mass, where others are by mol; "
     "write all of them on one base"),
    (swapped('N2 = "balance"', 'N2 = "balance", O2 = "20 ppm"'),
     'case.toml:8: feed.alkane.composition.O2: "20 ppm": ppm does not say its base; say ppm_mol or ppm_wt; '
     'write it like "99 mol%"'),
    (swapped('N2 = "balance"', 'N2 = "balance", CO2 = "balance"'),
     "case.toml:8: feed.alkane.composition.CO2: only one species may be the balance"),
    (swapped('N2 = "balance"', 'nitrogen = "0.5 mol%", N2 = "0.5 mol%"'),
     "case.toml:8: feed.alkane.composition.N2: N2 stands here twice"),
    (swapped('CH4 = "99 mol%", N2', 'N2 = "99 mol%", CO2', FLOW),
     'case.toml: feed: no stream brings an alkane; add one with composition = { CH4 = "100 mol%" }'),
    (swapped("[feed.chlorine]\nratio = 10",
             '[feed.inert]\nflow = "1 mol/s"\ncomposition = { N2 = "100 mol%" }'),
     'case.toml: feed: no stream brings chlorine; add [feed.chlorine] with flow = "100 kg/h"'),
    (with_line("ratio = 10", 'flow = "5 kg/h"'),
     "case.toml:12: feed.chlorine.ratio: flow is given too; write one of the two"),
    (swapped('flow = "36 mol/s"', "ratio = 10", FLOW),
     "case.toml:7: feed.alkane.ratio: only a stream that brings chlorine and no alkane "
     "may be given by ratio"),
    (swapped("ratio = 10", "", TEXT),
     'case.toml:11: feed.chlorine.flow: missing; write a flow, like "100 kg/h", or ratio = 8 for chlorine'),
    (with_line('power = "0.4 kW"', 'lit_to = "1.5 m"'),
     "case.toml:25: lamp.1.lit_to: 1.5 m lies beyond the vessel, which ends at 1.2 m"),
    (with_line('power = "0.4 kW"', 'lit_from = "0.8 m"\nlit_to = "0.6 m"'),
     "case.toml:25: lamp.1.lit_from: 0.8 m is not before lit_to, 0.6 m"),
    (with_line('power = "0.4 kW"', "number = 2.5"),
     "case.toml:25: lamp.1.number: 2.5: write a whole number from 1 to 100000, without quotes"),
    (with_line('power = "0.4 kW"', "number = true"),
     "case.toml:25: lamp.1.number: true: write a whole number from 1 to 100000, without quotes"),
    (with_line('power = "0.4 kW"', 'spectrum = "mine.csv"'), [
        "case.toml:25: lamp.1.spectrum: kind is given too; write one of the two",
        'case.toml:25: lamp.1.spectrum: "mine.csv": cannot be read (No such file or directory); '
        "paths start at the case file",
    ]),
    (swapped('kind = "LED 365 nm"\n', ""),
     'case.toml:22: lamp.1.kind: missing; write a kind, like "LED 365 nm", or spectrum = "mine.csv"'),
    (swapped("[[lamp]]", "[lamp]"),
     "case.toml:22: lamp: may stand several times: write [[lamp]] with two brackets"),
    (swapped("[vessel]", "[[vessel]]"),
     "case.toml:15: vessel: stands once: write [vessel] with single brackets"),
    (swapped("[vessel]", "[vesel]"), [
        "case.toml:15: vesel: unknown; did you mean 'vessel'?",
        "case.toml: vessel: this section is missing; write [vessel] and its keys",
    ]),
    (TEXT + '\n[targets]\nslip = "1 %"\n',
     "case.toml:34: targets.slip: unknown; did you mean 'chlorine_slip' or 'chlorine_slip_mass'?"),
    (swapped('outside = "60 mm"', 'outside = "160 mm"'),
     "case.toml:27: sleeve.outside: 0.16 m does not fit into vessel.shell_inside, 0.154 m"),
    (with_line('thickness = "2.5 mm"', 'material = "fuzed silica"'),
     "case.toml:29: sleeve.material: \"fuzed silica\": unknown; did you mean 'fused silica'?"),
    (with_line('wall_loss = "0.1 1/s"', "wall_sticking = 1e-4"),
     "case.toml:32: chemistry.wall_sticking: wall_loss is given too; write one of the two"),
    (TEXT + '\n[cooling]\nmode = "counter-current"\nmedium = "watre"\n', [
        'case.toml:33: cooling.inlet: missing; counter-current cooling needs it; '
        'write a temperature, like "30 degC"',
        'case.toml:33: cooling.flow: missing; counter-current cooling needs it; '
        'write a mass flow, like "1200 kg/h"',
        "case.toml:35: cooling.medium: \"watre\": unknown; did you mean 'water'?",
    ]),
    (TEXT + INJECT + INJECT,
     "case.toml:33: inject: shares sum to 120 %; they are of all chlorine, at most 100 %"),
    (TEXT + INJECT.replace("0.4 m", "1.2 m"),
     "case.toml:35: inject.1.position: 1.2 m lies beyond the vessel, which ends at 1.2 m"),
    (TANK.replace('stirring = "300 rpm"\n', ""),
     'case.toml:15: vessel.stirring: missing; a stirred tank needs it; write it like "300 rpm"'),
    (with_line('kind = "plug flow"', 'start = "hot"'),
     "case.toml:17: vessel.start: belongs to a stirred tank; take it out of plug flow"),
    (TEXT + '\n[limits.window.CH4]\nlel = "70 vol%"\nuel = "6 vol%"\nsource = "site report"\n',
     "case.toml:34: limits.window.CH4.lel: is not below uel"),
    (TEXT + '\n[meters]\nalkane = 3\n',
     'case.toml:34: meters.alkane: 3: outside 0 to 0.5; write it like "3 %"'),
    (swapped("date = 2026-12-01", 'date = "today"'),
     'case.toml:4: case.date: "today": write a date without quotes, like 2026-12-01'),
    (swapped('title = "Dotterel: a case for the tests"', 'title = ""'),
     'case.toml:2: case.title: "": write words in quotes, like "as built"'),
    (swapped('length = "1.2 m"', "length = 1.2 m"),
     "case.toml:19: not readable as TOML: Expected newline or end of document after a statement; "
     'quantities stand in quotes, like length = "3 m"'),
    (with_line('length = "1.2 m"', 'length = "2 m"'),
     "case.toml:20: not readable as TOML: Cannot overwrite a value; a key or section stands twice"),
]  # fmt: skip


@pytest.mark.parametrize(("text", "expected"), WRONG, ids=range(len(WRONG)))
def test_a_wrong_case_is_refused_with_file_line_key_and_cure(text, expected, tmp_path):
    expected = [expected] if isinstance(expected, str) else expected
    assert sorted(faults(text, folder=tmp_path)) == sorted(expected)


def test_an_empty_file_names_what_must_stand_in_it():
    assert faults("") == [
        "case.toml: case: this section is missing; write [case] and its keys",
        "case.toml: vessel: this section is missing; write [vessel] and its keys",
        "case.toml: feed: this section is missing; write [feed.alkane] and [feed.chlorine]",
    ]


def test_all_faults_of_a_file_are_told_at_once_in_the_order_of_its_lines():
    text = TEXT.replace('"1.2 m"', '"3 s"').replace('"0.4 kW"', "4").replace("ratio", "ration")
    lines = [int(fault.split(":")[1]) for fault in faults(text)]
    assert lines == sorted(lines)
    assert set(lines) >= {12, 19, 24}


def test_a_file_that_cannot_be_read_is_one_fault(tmp_path):
    latin = tmp_path / "latin.toml"
    latin.write_bytes('[case]\ntitle = "Möwe"\n'.encode("latin-1"))
    for path, words in [
        (tmp_path / "none.toml", "none.toml: cannot be read (No such file or directory); check the path"),
        (tmp_path, "cannot be read (Is a directory); check the path"),
        (latin, "latin.toml: is not UTF-8 text (byte 17); save it as UTF-8"),
    ]:
        with pytest.raises(CaseError) as caught:
            case.load(path)
        assert len(caught.value.faults) == 1
        assert caught.value.faults[0].endswith(words)


def test_a_file_from_a_windows_editor_reads_the_same(tmp_path):
    path = tmp_path / "dotterel.toml"
    path.write_bytes(b"\xef\xbb\xbf" + TEXT.replace("\n", "\r\n").encode())
    assert case.load(path) == case.loads(TEXT)


def test_lines_are_found_through_strings_arrays_and_quoted_keys():
    text = '\n'.join([
        "a = '''", "b = 1", "'''", 'list = [', '  "c = 2", # ]', "]", "[feed.x]", 'k.l = "]"  # m = 1',
        '"1,2-C2H4Cl2" = 3', "[[lamp]]", "p = 1", "[[lamp]]", "p = { q = 1 }", "[lamp.inner]", "r = 2",
    ])  # fmt: skip
    assert places.lines(text) == {
        "a": 1, "list": 4, "feed.x": 7, "feed.x.k.l": 8, "feed.x.1,2-C2H4Cl2": 9, "lamp.1": 10, "lamp": 10,
        "lamp.1.p": 11, "lamp.2": 12, "lamp.2.p": 13, "lamp.2.inner": 14, "lamp.inner": 14,
        "lamp.2.inner.r": 15,
    }  # fmt: skip


def test_an_override_replaces_a_value_and_is_kept_as_a_deviation():
    read = case.loads(TEXT, overrides=["vessel.length=2 m", "feed.chlorine.ratio=8", "lamp.1.power=2 kW"])
    assert (read.vessel.length, read.lamp[0].power, read.lamp[0].lit_to) == (2.0, 2000.0, 2.0)
    assert read.typed["vessel.length"] == units.Typed("2 m", 2.0, "m")
    assert read.deviations == (
        ("vessel.length", "1.2 m", "2 m"),
        ("feed.chlorine.ratio", "10", "8"),
        ("lamp.1.power", "0.4 kW", "2 kW"),
    )


def test_an_override_without_a_number_means_every_entry():
    text = TEXT + '\n[[lamp]]\nkind = "LED 385 nm"\npower = "1 kW"\n'
    read = case.loads(text, overrides=["lamp.power=3 kW", 'vessel.length="2 m"'])
    assert [lamp.power for lamp in read.lamp] == [3000.0, 3000.0]
    assert [key for key, _, _ in read.deviations] == ["lamp.1.power", "lamp.2.power", "vessel.length"]


def test_an_override_of_one_alternative_replaces_the_other():
    read = case.loads(TEXT, overrides=["feed.chlorine.flow=101.6 kg/h", "chemistry.wall_sticking=1e-4"])
    assert read == case.loads(FLOW.replace('wall_loss = "0.1 1/s"', "wall_sticking = 1e-4"))
    assert read.deviations[0] == ("feed.chlorine.flow", "ratio = 10", "101.6 kg/h")


@pytest.mark.parametrize(
    ("override", "fault"),
    [
        ("vessel.lenght=2 m", "--set: vessel.lenght: unknown; did you mean 'length'?"),
        ("vessel.length", '--set: vessel.length: write it like vessel.length="2 m"'),
        (
            "vessel.length=2 s",
            '--set: vessel.length: "2 s": s is a time, a length is due; write it like "3 m"',
        ),
        (
            "lamp.2.power=2 kW",
            "--set: lamp.2.power: there is no entry 2; entries run from 1 to 1",
        ),
        ("inject.1.share=20 %", "--set: inject.1.share: the case has no [[inject]]; add one to the file"),
        ("lamp.1=2 kW", "--set: lamp.1: name the key to set, like lamp.1.power"),
        ("vessel.length.x=2", "--set: vessel.length.x: a value stands there, not a section"),
    ],
)
def test_a_wrong_override_is_refused_in_the_same_form(override, fault):
    assert faults(TEXT, overrides=[override]) == [fault]


def test_a_case_can_be_changed_after_reading():
    first = case.loads(TEXT, overrides=["vessel.length=2 m"])
    second = case.changed(first, ["vessel.length=3 m", "lamp.1.power=1 kW"])
    assert second == case.loads(TEXT, overrides=["vessel.length=3 m", "lamp.1.power=1 kW"])
    assert first.vessel.length == 2.0
    assert [key for key, _, _ in second.deviations] == ["vessel.length", "lamp.1.power"]


def test_every_default_taken_is_listed_with_its_reason():
    read = case.loads(TEXT)
    assert {item.key: item.value for item in read.assumed} == {
        "vessel.parallel": "1",
        "vessel.shell_wall": "not given",
        "vessel.shell_material": "not stated",
        "vessel.wall_reflectance": "0",
        "lamp.1.number": "1",
        "lamp.1.lit_from": "0 m",
        "lamp.1.lit_to": "1.2 m",
        "lamp.1.end_of_life": "0.8",
        "sleeve.material": "fused silica",
        "sleeve.deposit": "0",
        "cooling.mode": "none",
        "chemistry.radicals": "mixed",
        "feed.chlorine.composition": "Cl2 100 mol%",
    }
    assert all(item.why for item in read.assumed)


def test_a_stirred_tank_takes_the_trades_defaults():
    read = case.loads(TANK)
    assert read.vessel.impeller == pytest.approx(0.154 / 3, rel=1e-14)
    assert (read.vessel.start, read.sleeve.number, read.vessel.stirring) == ("cold", 1, 5.0)
    assert {"vessel.impeller", "vessel.start", "sleeve.number"} <= {item.key for item in read.assumed}


def test_an_injector_takes_the_temperature_of_the_chlorine():
    read = case.loads(TEXT + INJECT)
    assert (read.inject[0].share, read.inject[0].position) == (0.6, 0.4)
    assert read.inject[0].temperature == read.feed["chlorine"].temperature
    assert ("inject.1.temperature", "303.1 K", "as feed.chlorine") in read.assumed


def test_strict_reading_refuses_every_default_by_its_key():
    read = case.loads(TEXT)
    found = faults(TEXT, strict=True)
    assert len(found) == len(read.assumed)
    assert (
        "case.toml:22: lamp.1.end_of_life: missing; strict reading takes no default "
        "(0.8: common practice: replaced at 80 % of the light)" in found
    )


def test_strict_reading_accepts_a_case_that_says_everything():
    full = [
        "vessel.parallel=1", "vessel.shell_wall=3 mm", "vessel.shell_material=nickel 201", "lamp.1.number=1",
        "vessel.wall_reflectance=0",
        "lamp.1.lit_from=0 m", "lamp.1.lit_to=1.2 m", "lamp.1.end_of_life=0.8",
        "sleeve.material=fused silica",
        "sleeve.deposit=0", "cooling.mode=none", "chemistry.radicals=mixed",
        'feed.chlorine.composition={ Cl2 = "100 mol%" }',
    ]  # fmt: skip
    assert case.loads(TEXT, overrides=full, strict=True).assumed == ()


def test_the_listing_shows_typed_and_si_beside_each_other():
    rows = case.loads(TEXT).listing()
    assert ("vessel.shell_inside", "154 mm", "0.154 m", "typed", "") in rows
    assert ("vessel.parallel", "", "1", "assumed", "one vessel, nothing in parallel") in rows
    assert ("lamp.1.driver", "", "from the data", "data", "driver efficiency in the lamp data") in rows
    assert {row[3] for row in rows} == {"typed", "assumed", "data"}


def test_a_written_case_reads_back_equal():
    text = (
        TEXT
        + INJECT
        + '\n[limits.window.CH4]\nlel = "6 vol%"\nuel = "70 vol%"\nsource = "a \\"site\\" report"\n'
    )
    read = case.loads(text)
    again = case.loads(case.dump(read))
    assert again == read
    assert again.hash() == read.hash()


@settings(max_examples=40, deadline=None)
@given(
    length=st.floats(0.1, 100.0),
    ratio=st.integers(1, 200) | st.floats(0.5, 200.0),
    tubes=st.integers(1, 500),
    title=st.text(st.characters(exclude_categories=["Cs"]), min_size=1).filter(str.strip),
)
def test_any_case_reads_back_equal_from_its_own_text(length, ratio, tubes, title):
    overrides = [f"vessel.length={length!r} m", f"feed.chlorine.ratio={ratio!r}", f"vessel.parallel={tubes}"]
    read = case.loads(TEXT, overrides=overrides)
    tree = read.tree | {"case": read.tree["case"] | {"title": title}}
    read = case.reader.build(tree, ".", (), False, "case.toml", {})
    again = case.loads(case.dump(read))
    assert again == read
    assert again.hash() == read.hash()


def test_a_case_changed_by_hand_is_not_written_as_something_else():
    read = case.loads(TEXT)
    other = dataclasses.replace(read, vessel=dataclasses.replace(read.vessel, length=3.0))
    with pytest.raises(ValueError, match="differs from its typed text"):
        case.dump(other)


def test_the_hash_ignores_remarks_order_and_spelling_of_units():
    blocks = TEXT.split("\n\n")
    shuffled = "# a remark\n" + "\n\n".join(reversed(blocks)).replace('"154 mm"', '"15.4 cm"')
    assert case.loads(shuffled).hash() == case.loads(TEXT).hash()


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("154 mm", "155 mm"),
        ("ratio = 10", "ratio = 11"),
        ('"99 mol%"', '"98 mol%"'),
        ("365", "385"),
        ('"B"', '"C"'),
    ],
)
def test_the_hash_moves_with_any_value(old, new):
    assert case.loads(swapped(old, new)).hash() != case.loads(TEXT).hash()


def test_the_hash_follows_the_content_of_named_files_and_not_their_place(tmp_path):
    text = swapped('kind = "LED 365 nm"', 'spectrum = "mine.csv"')
    hashes = []
    for folder, content in (("a", "1"), ("b", "1"), ("c", "2")):
        (tmp_path / folder).mkdir()
        (tmp_path / folder / "mine.csv").write_text(content)
        read = case.loads(text, folder=tmp_path / folder)
        assert read.path(read.lamp[0].spectrum).read_text() == content
        hashes.append(read.hash())
    assert hashes[0] == hashes[1] != hashes[2]


@pytest.mark.parametrize("name", templates.names())
def test_every_template_reads_without_fault_and_explains_itself(name):
    text = case.template(name)
    read = case.loads(text)
    assert "invented" in text
    assert "1.5 bar absolute" in text
    assert read.title
    assert max(map(len, text.splitlines())) <= 110


def test_an_unknown_template_is_refused_with_what_is_known():
    with pytest.raises(CaseError) as caught:
        case.template("butane")
    assert str(caught.value) == "--from butane: unknown; known here: methane, ethane, propane, tank"


def test_reading_a_case_takes_less_than_50_ms():
    case.loads(TEXT)  # the data files are read once
    start = time.perf_counter()
    case.loads(TEXT)
    assert time.perf_counter() - start < 0.05


def test_reading_a_case_loads_no_heavy_package():
    code = (
        "import sys; from reactor import case; case.loads(case.template('methane')); "
        "print(sorted({'pint', 'pandas', 'cantera', 'scipy', 'matplotlib'} & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


JUNK = (
    [],
    {},
    [1],
    {"a": 1},
    True,
    -1,
    float("nan"),
    10**400,
    "",
    "3 m",
    "balance",
    datetime.date(2026, 1, 1),
)


def keys(tree, above=()):
    """Yield the path of every key of a tree."""
    for key, value in tree.items() if isinstance(tree, dict) else enumerate(tree):
        yield (*above, key)
        if isinstance(value, dict | list):
            yield from keys(value, (*above, key))


@pytest.mark.parametrize("text", [TEXT + INJECT, TANK], ids=["plug flow", "stirred tank"])
def test_no_value_of_any_key_escapes_as_another_error(text):
    tree = case.loads(text).tree
    for path in list(keys(tree)):
        for junk in JUNK:
            spoilt = copy.deepcopy(tree)
            node = spoilt
            for key in path[:-1]:
                node = node[key]
            node[path[-1]] = junk
            with contextlib.suppress(CaseError):
                read = case.reader.build(spoilt, ".", (), False, "case.toml", {})
                assert case.loads(case.dump(read)) == read

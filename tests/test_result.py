"""The result as a record: plain values, JSON, data frame, and what is refused on reading back."""

import json
from pathlib import Path

import numpy as np
import pytest
from conftest import CASES

import reactor
from reactor import result as results
from reactor.errors import CaseError
from reactor.result import Result, Verdict, from_json, quantity

SMALL = Result("Wheatear", "A", "", {"class_inlet": "MARGIN"}, {}, (Verdict("light", "PASS", "", "", ""),))


def test_what_is_no_finite_number_becomes_null():
    for value in (None, float("nan"), float("inf"), np.float64("nan")):
        assert quantity(value, "K") == {"value": None, "unit": "K"}
    assert type(quantity(np.float64(1), "K")["value"]) is float


def test_a_band_stands_beside_its_value():
    assert quantity(2.0, "K", (1.0, 2.0, 3.0))["band"] == {"low": 1.0, "mid": 2.0, "high": 3.0}


def test_a_name_gives_its_plain_value(rated):
    r = rated("lapwing")
    assert isinstance(r["chlorine_slip"], float)
    assert isinstance(r["products"]["CH3Cl"], float)
    assert r["class_inlet"] == "OUTSIDE (estimate)"
    assert r["mixtures"][0]["where"] == "feed methane"
    with pytest.raises(KeyError):
        r["chlorine_slop"]


def test_the_worst_word_is_that_of_the_gravest_verdict():
    def worst(*words):
        return Result("", "", "", {}, {}, tuple(Verdict("x", word, "", "", "") for word in words)).worst

    assert worst("PASS", "CAUTION", "NOT ASSESSED") == "CAUTION"
    assert worst("FAIL", "OUT OF DATA RANGE") == "FAIL"
    assert worst() == "NOT ASSESSED"


def test_the_profile_is_a_data_frame_with_units(rated):
    frame = rated("lapwing").profile_frame()
    assert frame.attrs["units"]["temperature [K]"] == "K"
    assert frame.attrs["units"]["CH3Cl [mol/s]"] == "mol/s"
    assert frame.attrs["units"]["class"] == ""
    assert list(frame.columns) == list(rated("lapwing").profile)
    assert frame["temperature [K]"].iloc[-1] == rated("lapwing")["temperature_outlet"]
    assert len(frame) <= 402


def test_every_number_in_the_json_has_its_unit_or_is_named_without(rated):
    record = json.loads(rated("lapwing_ten").to_json())
    bare = {"closures", "numerics", "profile", "format"}

    def walk(node, path):
        if isinstance(node, dict) and {"value", "unit"} <= set(node):
            return
        if isinstance(node, dict):
            for key, inner in node.items():
                walk(inner, [*path, key])
        elif isinstance(node, list):
            for inner in node:
                walk(inner, path)
        else:
            assert isinstance(node, str | bool | None), path

    for key, inner in record.items():
        if key not in bare:
            walk(inner, [key])


def test_a_small_result_goes_through_json():
    assert from_json(SMALL.to_json()) == SMALL


REFUSED = {
    "another version": (json.dumps(json.loads(SMALL.to_json()) | {"format": 99}), "saved by another version"),
    "truncated": (SMALL.to_json()[:-40], "is not a saved result"),
    "empty": ("", "is not a saved result"),
    "a list": ("[1, 2]", "is not a saved result"),
    "a number": ("3", "is not a saved result"),
    "no format": ("{}", "no 'format' in it"),
    "unknown entry": (json.dumps(json.loads(SMALL.to_json()) | {"colour": 1}), "is not a saved result"),
    "missing entry": (
        json.dumps({k: v for k, v in json.loads(SMALL.to_json()).items() if k != "title"}),
        "title",
    ),
}


@pytest.mark.parametrize("kind", REFUSED)
def test_what_is_no_result_is_refused_with_its_place(kind):
    text, said = REFUSED[kind]
    with pytest.raises(CaseError) as caught:
        from_json(text, "old.json")
    assert str(caught.value).startswith("old.json: ")
    assert said in str(caught.value)


def test_the_documented_names_have_known_units():
    from reactor import units

    for documented in (results.NAMES, results.MIXTURE, results.STATE):
        for unit, meaning in documented.values():
            assert meaning
            if unit not in ("1", "word", "list", "yes or no"):
                units.to_si(1.0, unit)


def test_the_front_door_of_the_package_loads_and_rates():
    case = reactor.load(
        CASES / "lapwing.toml", ["solver.rtol=1e-4", "vessel.length=1.5 m", "lamp.lit_to=1.5 m"]
    )
    assert case.vessel.length == 1.5
    result = reactor.rate(case)
    assert result["chlorine_slip"] < 0.0464
    assert [d["key"] for d in result.deviations] == ["solver.rtol", "vessel.length", "lamp.1.lit_to"]


def test_a_dark_case_gives_nulls_and_says_why():
    result = reactor.rate(
        reactor.load(CASES / "lapwing_ten.toml", ["chemistry.photolysis_rate=0 1/s", "cooling.mode=none"])
    )
    words = {v.name: v for v in result.verdicts}
    assert words["closures"].word == "PASS"
    assert words["reaction"].figure == "no chlorine reacts"
    assert words["light"].figure == "rate of photolysis typed: 0 1/s"
    for name in (
        "adiabatic_rise",
        "poly_share_mol",
        "quantum_yield",
        "light_order",
        "sleeve_skin_temperature",
    ):
        assert result[name] is None
    assert result.ledger == ()


def test_the_readme_lists_every_name_with_its_unit_and_meaning():
    readme = (Path(__file__).parent.parent / "README.md").read_text(encoding="utf-8")
    for names in (results.NAMES, results.MIXTURE, results.STATE):
        for name, (unit, meaning) in names.items():
            assert f"| `{name}` | {unit} | {meaning} |" in readme

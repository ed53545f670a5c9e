"""The hand rules beside the full model."""

import pytest
from conftest import CASES

import reactor
from reactor.rating.hand import hand
from reactor.report.hand import render


def lines(rated, name):
    return {one.name: one for one in hand(reactor.load(CASES / f"{name}.toml"), rated(name))}


def test_the_hand_case_of_methane_ten_to_one_is_reproduced(rated):
    # Source: hand case (memory constants), all chlorine used: duty 40.2 kW, rise 244 K, poly 18 mol%, HCl
    # 52.3 kg/h; here 2.8 % of the chlorine is left. Evidence: worked, transcription check of the rules.
    found = lines(rated, "lapwing_ten")
    assert found["heat of reaction"].hand == pytest.approx(40.2 * 0.972, rel=0.02)
    assert found["adiabatic rise"].hand == pytest.approx(244, rel=0.02)
    assert found["poly share by mol"].hand == pytest.approx(18, rel=0.05)
    assert found["HCl"].hand == pytest.approx(52.3 * 0.972, rel=0.01)
    assert found["absorbed at the inlet"].hand == pytest.approx(76, rel=0.05)


@pytest.mark.parametrize(
    "name", ["lapwing", "lapwing_ten", "fulmar", "linnet", "dunnock_tube", "dunnock_tank"]
)
def test_flows_and_heat_agree_with_the_hand_rules_within_ten_per_cent(name, rated):
    # Evidence: worked; the rules and their constants are remembered, not the model's.
    found = lines(rated, name)
    assert found["HCl"].ratio == pytest.approx(1, abs=0.10)
    assert found["heat of reaction"].ratio == pytest.approx(1, abs=0.10)


@pytest.mark.parametrize("name", ["lapwing", "dunnock_tube"])
def test_light_of_methane_in_plug_flow_agrees_within_a_factor_two(name, rated):
    assert 0.5 < lines(rated, name)["light into the gas"].ratio < 2.0


def test_light_of_the_hottest_and_richest_tube_misses_the_factor_two_by_a_hair(rated):
    # Chloromethyl radicals, and light lost by ends and slant, add up to 2.06: recorded as a miss, marked in the report.
    assert lines(rated, "lapwing_ten")["light into the gas"].ratio == pytest.approx(2.06, abs=0.02)


def test_a_ratio_outside_a_half_to_two_is_marked(rated):
    # 5 ppm of oxygen, which the rule leaves out, asks ethane for more light.
    found = lines(rated, "fulmar")
    one = found["light into the gas"]
    assert one.marked
    assert one.ratio > 2
    assert "OUTSIDE 0.5 TO 2" in render(tuple(found.values()))
    assert not found["HCl"].marked

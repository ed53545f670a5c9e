"""Tube and tank as models of a case: what a correct answer must show, and how one is chosen among several."""

from dataclasses import replace

import numpy as np
import pytest

import reactor
from reactor import chemistry
from reactor.case import loads
from reactor.models import SOLVERS, chain
from reactor.rating import figures
from reactor.rating.plant import lamps, plant

approx = pytest.approx
GAS = chemistry.mechanism()
CL2, HCL = GAS.index["Cl2"], GAS.index["HCl"]

HEAD = """
[case]
title = "Redstart"
[feed.alkane]
flow = "{flow} mol/s"
composition = {{ {alkane} }}
temperature = "{T} degC"
[feed.chlorine]
ratio = {ratio}
composition = {{ Cl2 = "balance"{traces} }}
temperature = "{T} degC"
[sleeve]
outside = "60 mm"
thickness = "2.5 mm"
[solver]
rtol = {rtol}
[chemistry]
wall_loss = "{wall} 1/s"
"""
LAMP = """
[[lamp]]
kind = "LED 365 nm"
power = "{power} W"
lit_to = "{lit} m"
end_of_life = "100 %"
"""
TUBE = (
    HEAD
    + LAMP
    + """
[vessel]
kind = "plug flow"
geometry = "annulus"
shell_inside = "100 mm"
length = "{length} m"
pressure = "1.5 bar absolute"
parallel = {parallel}
[cooling]
{cooling}
"""
)
TANK = (
    HEAD
    + LAMP
    + """
[vessel]
kind = "stirred tank"
shell_inside = "1.2 m"
length = "1.33 m"
pressure = "1.5 bar absolute"
stirring = "5 1/s"
start = "{start}"
[cooling]
{cooling}
"""
)
ADIABATIC = 'mode = "none"'
HELD = 'mode = "constant"\ninlet = "{} degC"\noverall = "100000 W/m2/K"'
STAGED = "".join(f'[[inject]]\nshare = "25 %"\nposition = "{z} m"\n' for z in (0.6, 1.2, 1.8))
USUAL = {"flow": 0.3, "alkane": 'CH4 = "100 mol%"', "T": 40, "ratio": 10, "traces": "", "wall": 0,
         "power": 300, "length": 1.2, "lit": 1.2, "parallel": 1, "cooling": ADIABATIC, "start": "cold",
         "rtol": 1e-6}  # fmt: skip
THREE = {"flow": 0.9, "ratio": 3, "T": 60, "lit": 1.33, "wall": 0.1}


def case_of(text=TUBE, more="", **changes):
    return loads(text.format(**USUAL | changes) + more)


def solved(case):
    """Return the profile of a case."""
    return SOLVERS[case.vessel.kind](case, plant(case, GAS, lamps(case)))


def stations(profile, *numbers):
    """Return a profile with these stations only."""
    keep = list(numbers)
    arrays = ("z", "moles", "temperature", "pressure", "photolysis")
    return replace(profile, **{name: getattr(profile, name)[keep] for name in arrays})


@pytest.fixture(scope="module")
def milliwatt():
    return solved(case_of(TANK, **THREE, power=1e-3))


def slip(profile):
    return profile.outlet.moles[CL2] / profile.fed[CL2]


def poly(profile):
    """Return the share of products with two or more chlorine, by mol."""
    return figures.products(profile, GAS)["poly_share_mol"]["value"]


# --- what a correct tool must show ---


def test_twenty_ppm_oxygen_stall_a_weakly_lit_ethane_tube_and_make_it_linear_in_light():
    # Limit: O2 takes ethyl in a first-order step, so a radical pool that ends on it answers light in
    # proportion. Direction from an independent model of such a tube (0.2 % to 33 %, computed); the numbers
    # were measured here: slip 0.7 % clean and 70 % with 20 ppm of the mixed feed (140 ppm in the chlorine).
    weak = {"alkane": 'C2H6 = "100 mol%"', "ratio": 6, "power": 1}
    clean = reactor.rate(case_of(**weak))
    foul = reactor.rate(case_of(**weak, traces=', O2 = "140 ppm_mol"'))
    assert clean["chlorine_slip"] < 0.02
    assert foul["chlorine_slip"] > 30 * clean["chlorine_slip"]
    assert clean["light_order"] == approx(0.5, abs=0.02)
    assert foul["light_order"] > 0.98
    assert foul["chain_length"] < 0.5 * clean["chain_length"]


def test_four_per_cent_of_ethane_and_propane_in_methane_take_most_of_the_chlorine():
    # Limit: they react five hundred and more times faster than methane at 298 K; two in three measured here.
    mixed = 'CH4 = "96 mol%", C2H6 = "3 mol%", C3H8 = "1 mol%"'
    profile = solved(case_of(alkane=mixed))
    formed = np.maximum(profile.outlet.moles - profile.fed, 0.0)
    chloride = figures.chlorinated(GAS)
    carbon, chlorine = (GAS.atoms[chloride, GAS.elements.index(e)] for e in ("C", "Cl"))
    bound = formed[chloride] * chlorine
    assert slip(profile) < 0.05
    assert 0.5 < bound[carbon > 1].sum() / bound.sum() < 0.8
    left = profile.outlet.moles / np.maximum(profile.fed, 1e-300)
    assert left[GAS.index["C3H8"]] < left[GAS.index["C2H6"]] < 0.1 < 0.9 < left[GAS.index["CH4"]]


def test_chlorine_staged_cold_makes_more_poly_than_all_at_the_inlet():
    # Limit: k(Cl + CH3Cl)/k(Cl + CH4) falls with temperature (Bryukov 2002: activation energies), so a cold
    # tube favours the second chlorine; a feed of four portions buys temperature, not selectivity. Measured
    # here: poly 16.6 % adiabatic at once (537 K at the end), 16.5 % held at 200 degC, 21.5 % held at 40 degC,
    # 23 % staged there.
    tube = {"flow": 0.05, "power": 600, "length": 2.4, "lit": 2.4}
    at_once = solved(case_of(**tube))
    warm = solved(case_of(**tube | {"T": 200, "cooling": HELD.format(200)}))
    cold = solved(case_of(**tube, cooling=HELD.format(40)))
    staged = solved(case_of(**tube, cooling=HELD.format(40), more=STAGED))
    assert max(slip(profile) for profile in (at_once, warm, cold, staged)) < 0.02
    assert poly(staged) > poly(at_once) + 0.03
    assert poly(cold) > poly(warm) + 0.03
    assert poly(staged) > poly(cold)
    assert staged.hottest[0] < at_once.hottest[0] - 200


def test_a_tank_at_a_milliwatt_has_three_steady_states_and_the_hot_one_ignores_the_lamp(milliwatt):
    # Limit: heat gained is a bent curve of temperature, heat removed nearly a line; the middle crossing is
    # unstable.
    one, ten = milliwatt.states, solved(case_of(TANK, **THREE, power=1e-2)).states
    for states in (one, ten):
        assert [state.stable for state in states] == [True, False, True]
        assert states[1].growth_rate > 0
    assert ten[0].T > one[0].T + 50
    assert abs(ten[2].T - one[2].T) < 0.1
    assert one[2].T > 800 > 700 > one[1].T > 600 > 400 > one[0].T


def test_a_tube_lights_off_by_heat_well_downstream_of_its_lamp():
    # Limit: in an unlit, adiabatic tail the chain goes on from the dissociation of chlorine, slowly at first.
    # Measured here: fed at 300 degC and lit for 0.1 m, the gas rises most steeply near 0.7 m.
    hot = {
        "alkane": 'C2H6 = "100 mol%"',
        "ratio": 6,
        "flow": 0.02,
        "T": 300,
        "length": 2.0,
        "lit": 0.1,
        "power": 1e-5,
    }
    profile = solved(case_of(**hot))
    z, T = profile.z, profile.temperature
    apart = np.diff(z) > 0
    steepest = z[1:][apart][(np.diff(T)[apart] / np.diff(z)[apart]).argmax()]
    lit_end = np.flatnonzero(z == 0.1)[-1]
    assert profile.moles[lit_end, CL2] > 0.9 * profile.fed[CL2]
    assert steepest > 0.4
    assert T[-1] > T[lit_end] + 150
    assert slip(profile) < 0.01
    assert profile.total("thermal_starts") > 100 * 2 * profile.total("photons")


def test_above_seven_hundred_kelvin_the_data_no_longer_hold():
    # Limit: the mechanism has no pyrolysis and no loss of HCl; the verdict says so, and closures still hold.
    result = reactor.rate(case_of(ratio=4, flow=0.05, power=600))
    verdict = {v.name: v for v in result.verdicts}["data range"]
    assert result["temperature_hottest"] > 700
    assert verdict.word == "OUT OF DATA RANGE"
    assert "pyrolysis" in verdict.why
    assert {v.name: v for v in result.verdicts}["closures"].word == "PASS"


# --- how an answer is found ---


def test_tubes_in_parallel_share_the_feed():
    # Limit: four tubes with four times the feed are four times one tube.
    one = solved(case_of())
    four = solved(case_of(flow=1.2, parallel=4))
    assert four.outlet.moles == approx(4 * one.outlet.moles, rel=1e-6, abs=1e-12)
    assert four.outlet.temperature == approx(one.outlet.temperature, abs=1e-4)
    assert four.total("photons") == approx(4 * one.total("photons"), rel=1e-6)
    assert four.total("time") == approx(one.total("time"), rel=1e-6)
    assert four.volume == approx(4 * one.volume)


def counter(kind, flow="60 kg/h"):
    return f'mode = "{kind}"\nmedium = "water"\ninlet = "25 degC"\nflow = "{flow}"'


def test_coolant_against_the_gas_enters_at_its_inlet_and_takes_what_the_gas_gives():
    # Limit: the boundary value is met, and the coolant's own balance closes.
    case = case_of(flow=0.1, cooling=counter("counter-current"))
    equipment = plant(case, GAS, lamps(case))
    profile = SOLVERS["plug flow"](case, equipment)
    assert profile.coolant[-1] == approx(298.15, abs=1e-5)
    gained = equipment.coolant * (profile.coolant[0] - profile.coolant[-1])
    assert gained == approx(profile.total("coolant"), rel=1e-5)
    assert any("cold side" in remark for remark in profile.remarks)
    assert any("hotter solution" in remark for remark in profile.remarks)


def test_coolant_with_the_gas_leaves_warmer_by_what_it_takes():
    # Limit: balance of the coolant; with plenty of it the constant temperature is met.
    case = case_of(flow=0.1, cooling=counter("co-current"))
    equipment = plant(case, GAS, lamps(case))
    profile = SOLVERS["plug flow"](case, equipment)
    assert equipment.coolant * (profile.coolant[-1] - 298.15) == approx(profile.total("coolant"), rel=1e-5)
    plenty = solved(case_of(flow=0.1, cooling=counter("co-current", "1000000 kg/h")))
    constant = solved(case_of(flow=0.1, cooling='mode = "constant"\nmedium = "water"\ninlet = "25 degC"'))
    assert plenty.outlet.temperature == approx(constant.outlet.temperature, abs=0.05)


def test_injected_chlorine_is_counted_as_fed_and_enters_where_it_is_said():
    # Limit: conservation.
    profile = solved(case_of(length=2.4, lit=2.4, more=STAGED, cooling=HELD.format(40)))
    whole = solved(case_of(length=2.4, lit=2.4, cooling=HELD.format(40)))
    assert profile.fed == approx(whole.fed, rel=1e-12)
    assert profile.inlet.moles[CL2] == approx(0.25 * profile.fed[CL2], rel=1e-9)
    for z in (0.6, 1.2, 1.8):
        before, after = np.flatnonzero(profile.z == z)
        assert profile.moles[after, CL2] - profile.moles[before, CL2] == approx(
            0.25 * profile.fed[CL2], rel=1e-9
        )
    assert profile.outlet.atoms(GAS) == approx(profile.fed @ GAS.atoms, rel=1e-9, abs=1e-12)


def test_a_tank_goes_where_its_start_leads(milliwatt):
    # Limit: of three states the cold start reaches the cold one, the hot start the hottest stable one.
    cold = milliwatt
    hot = solved(case_of(TANK, **THREE, power=1e-3, start="hot"))
    assert cold.outlet.temperature == approx(cold.states[0].T, abs=1e-6)
    assert hot.outlet.temperature == approx(hot.states[2].T, abs=1e-6)
    assert "3 steady states" in cold.remarks[0]
    assert "hottest stable" in hot.remarks[0]


@pytest.mark.parametrize(("alkane", "ratio", "power"), [("CH4", 10, 300), ("C2H6", 6, 10), ("C3H8", 8, 10)])
def test_light_order_is_the_answer_of_the_chain_to_a_little_more_light(alkane, ratio, power):
    # Limit: the derivative against a step of two per cent in J, radicals brought to rest by a long march.
    from reactor.kernel.rates import Rates

    profile = solved(
        case_of(alkane=f'{alkane} = "100 mol%"', ratio=ratio, power=power, traces=', O2 = "5 ppm_mol"')
    )
    i = len(profile.z) // 2
    first, order, last = chain.light_order(stations(profile, 1, i, -1), GAS, 0.0)
    assert np.isfinite([first, order, last]).all()
    rates, radical = Rates(GAS.tables, GAS.photolysis, GAS.wall), np.flatnonzero(GAS.radical)
    T = profile.temperature[i]

    def acid(J):
        c = profile.concentrations[i].copy()
        for _ in range(60):
            w, by_c, *_ = rates.derivatives(c, T, J, 0.0)
            c[radical] -= np.linalg.solve(by_c[np.ix_(radical, radical)], w[radical])
        return rates.production(c, T, J, 0.0)[HCL]

    J = profile.photolysis[i]
    assert np.log(acid(1.01 * J) / acid(0.99 * J)) / np.log(1.01 / 0.99) == approx(order, abs=1e-4)


def test_light_order_is_known_at_the_inlet_of_a_clean_tube_without_wall_loss():
    # Limit: no radicals yet, and no first-order end of the chain: the answer is still one half.
    for alkane in ("CH4", "C2H6", "C3H8"):
        profile = solved(case_of(alkane=f'{alkane} = "100 mol%"', power=10, length=0.02, lit=0.02))
        assert chain.light_order(stations(profile, 0), GAS, 0.0)[0] == approx(0.5, abs=0.01)


def test_a_fixed_rate_of_photolysis_acts_where_lamps_are_lit():
    # Limit: the tail beyond the lamp stays dark.
    text = TUBE.replace('wall_loss = "{wall} 1/s"', 'wall_loss = "{wall} 1/s"\nphotolysis_rate = "2e-3 1/s"')
    profile = solved(case_of(text, lit=0.5))
    assert profile.photolysis[profile.z < 0.5] == approx(2e-3)
    assert profile.photolysis[profile.z > 0.5] == approx(0.0)
    lit = np.flatnonzero(profile.z == 0.5)[0]
    assert profile.total("photons") == approx(profile.totals["photons"][lit], rel=1e-12)


def test_dark_tube_and_dark_tank_leave_the_feed_alone():
    # Limit: no light and no heat, no chain.
    dark = {"flow": 0.1, "ratio": 10}
    tube = solved(loads((TUBE.replace(LAMP, "")).format(**USUAL | dark)))
    tank = solved(loads((TANK.replace(LAMP, "")).format(**USUAL | dark)))
    for profile in (tube, tank):
        assert slip(profile) == approx(1.0, abs=1e-9)
        assert profile.outlet.temperature == approx(313.15, abs=1e-3)
        assert profile.total("photons") == 0.0


def test_a_tank_without_lamp_or_sleeve_is_a_tank():
    # Limit: as above; nothing in it has to be invented.
    text = TANK.replace(LAMP, "").replace('[sleeve]\noutside = "60 mm"\nthickness = "2.5 mm"\n', "")
    result = reactor.rate(loads(text.format(**USUAL | {"flow": 0.1})))
    assert result["chlorine_slip"] == approx(1.0, abs=1e-9)

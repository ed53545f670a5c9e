"""Upsets: the dynamic models, the table, the curves of steady states, and what must never happen."""

import csv
import io
import json
import time
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reactor import chemistry, library
from reactor.case import load, loads
from reactor.cli import cli
from reactor.errors import CaseError
from reactor.hazards import corners, explosive, paths
from reactor.hazards.explosive import Class
from reactor.kernel.continuation import trace
from reactor.models import assemble
from reactor.rating import hazard, judge, surroundings
from reactor.report import upset as printed
from reactor.stream import Stream
from reactor.upsets import curves, elements, record, regimes, rows, vessel
from reactor.upsets.changes import Changed, warmer_feeds
from reactor.upsets.setting import setting

CASES = Path(__file__).parent.parent / "cases"
GAS = chemistry.mechanism()
BOOK = explosive.rulebook(GAS)
few = settings(derandomize=True, max_examples=12, deadline=None)


@pytest.fixture(scope="module")
def tube():
    return setting(load(CASES / "lapwing_ten.toml", ["solver.rtol=1e-6"]))


@pytest.fixture(scope="module")
def tank():
    return setting(load(CASES / "dunnock_tank.toml"))


def stream(name, T=298.15, **moles):
    flow = np.zeros(len(GAS.species))
    for species, amount in moles.items():
        flow[GAS.index[species]] = amount
    return Stream(name, flow, T, 1e5)


# --- moving elements ------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def unchanged(tube):
    old = elements.disturbed(tube.case, tube.plant, tube.profile, tube.gas)
    return elements.transient(tube.case, tube.plant, old, tube.profile, tube.gas)


def test_gas_in_an_unchanged_tube_goes_on_along_the_steady_profile(tube, unchanged):
    # Limit: nothing is changed, so every element leaves at the rest of its residence time, as warm as the
    # outlet. 0.3 % by twelve elements.
    whole = tube.profile.total("time")
    expected = [whole * (1 - (i + 0.5) / len(unchanged.old)) for i in range(len(unchanged.old))]
    assert [e.leaves for e in unchanged.old] == pytest.approx(expected, abs=3e-3 * whole)
    for element in unchanged.old:
        T = np.interp(element.leaves, element.clock, element.T)
        assert pytest.approx(tube.profile.outlet.temperature, abs=0.1) == T


def test_gas_that_passes_an_injector_goes_on_along_the_steady_profile():
    # Limit: as above, with 30 % of the chlorine injected at 0.3 m. 0.5 %: one element straddles the injector.
    case = (CASES / "lapwing_ten.toml").read_text()
    case += '\n[[inject]]\nshare = "30 %"\nposition = "0.3 m"\n'
    at = setting(loads(case))
    old = elements.disturbed(at.case, at.plant, at.profile, at.gas)
    found = elements.transient(at.case, at.plant, old, at.profile, at.gas)
    whole = at.profile.total("time")
    expected = [whole * (1 - (i + 0.5) / len(old)) for i in range(len(old))]
    assert [e.leaves for e in found.old] == pytest.approx(expected, abs=5e-3 * whole)
    for element in found.old:
        T = np.interp(element.leaves, element.clock, element.T)
        assert pytest.approx(at.profile.outlet.temperature, abs=0.5) == T


def test_old_elements_fill_the_tube(tube, unchanged):
    # Limit: the volumes of all elements at time zero add up to the volume of the tube; 0.5 % by twelve elements.
    filled = sum(element.volume(0.0) for element in unchanged.old)
    assert filled == pytest.approx(tube.profile.volume / tube.case.vessel.parallel, rel=5e-3)


@pytest.mark.parametrize("full", [False, True], ids=["lamp trip", "relit on a full tube"])
def test_a_lamp_trip_in_a_tube_conserves_atoms(tube, full):
    # Limit (conservation): inside + left = before + fed, for every element, at several times; 1e-6 by the
    # kernel.
    changed = Changed(tube.case, light=1.0 if full else 0.0)
    found = tube.follow(changed, tube.feed if full else None)
    fed, start = tube.feed.moles @ tube.gas.atoms, found.held(0.0) @ tube.gas.atoms
    for t in (0.1, 0.5, 0.9, 1.5):
        gap = (found.held(t) + found.released(t)) @ tube.gas.atoms - fed * t - start
        assert np.abs(gap).max() < 1e-6 * start.max()


def test_old_gas_is_pushed_out_by_the_cold_gas_behind_it(tube):
    # Limit: after a lamp trip nothing expands any more, so the front moves with the inlet velocity and the
    # last old element leaves just before the time that the cold gas needs for the whole tube.
    found = tube.follow(Changed(tube.case, light=0.0))
    speed = tube.feed.volume_flow() / tube.profile.volume
    assert found.new.leaves == pytest.approx(1 / speed, rel=0.01)
    assert max(e.leaves for e in found.old) < found.new.leaves
    assert [e.leaves for e in found.old] == sorted((e.leaves for e in found.old), reverse=True)


def test_a_lamp_trip_ends_on_the_dark_tube(tube):
    # Limit: long after the trip the outflow is that of the steady dark tube: all chlorine unreacted.
    found = tube.follow(Changed(tube.case, light=0.0))
    chlorine = tube.chlorine
    assert found.outflow()[chlorine] == pytest.approx(tube.feed.moles[chlorine], rel=1e-6)
    assert found.peak()[0] == pytest.approx(tube.profile.hottest[0], abs=2.0)


# --- stirred tank ---------------------------------------------------------------------------------


def test_a_tank_ends_on_the_steady_state_of_the_solver(tank):
    # Limit: filled with unreacted feed and lit, the tank's transient ends where the solver found the steady
    # state.
    found = vessel.transient(tank.case, tank.plant, tank.profile, tank.gas, full=tank.feed)
    assert found.T[-1] == pytest.approx(tank.profile.outlet.temperature, abs=5e-3)
    assert found.outflow() == pytest.approx(tank.profile.outlet.moles, rel=1e-4, abs=1e-7)


def test_a_lamp_trip_in_a_tank_conserves_atoms(tank):
    # Limit (conservation): inside + left = before + fed; 1e-6 by quadrature over the steps of the solver.
    found = tank.follow(Changed(tank.case, light=0.0))
    fed, start = tank.feed.moles @ tank.gas.atoms, found.held(0.0) @ tank.gas.atoms
    for t in (0.05, 0.4, 3.0):
        gap = (found.held(t) + found.released(t)) @ tank.gas.atoms - fed * t - start
        assert np.abs(gap).max() < 1e-6 * start.max()
    assert found.released(3.0)[tank.chlorine] > 0


def test_a_trip_of_a_well_cooled_tank_leaves_the_chlorine_of_a_purge(tank):
    # Limit: in the dark nothing reacts; chlorine rises towards the feed as 1 - exp(-t/tau) at constant
    # density. The gas cools and its density rises by 30 %, which bounds the difference.
    found = tank.follow(Changed(tank.case, light=0.0))
    inside = found.mass * found.n[:, tank.chlorine] * found.tanks
    end = inside[-1]
    tau = found.mass[-1] / found.out[-1]
    at = float(np.interp(tau, found.clock, inside)) / end
    assert 0.5 < at < 0.75


# --- curves of steady states ----------------------------------------------------------------------


def test_a_cubic_turns_where_its_slope_vanishes():
    # Limit: y^3 - y + p = 0 turns at y = +-1/sqrt(3), p = +-2/(3 sqrt(3)).
    def cubic(y, p):
        return y**3 - y + p, np.diag(3 * y**2 - 1), np.ones(1)

    found = trace(cubic, [2.0], -6.0, np.ones(1), 1.0, (-7.0, 7.0))
    assert sorted(p for p, _ in found.turns) == pytest.approx([-0.3849, 0.3849], abs=1e-5)
    assert found.p[-1] > 7.0 or found.p[-1] < -7.0
    residual = found.y[:, 0] ** 3 - found.y[:, 0] + found.p
    assert np.abs(residual).max() < 1e-6


@pytest.fixture(scope="module")
def folded():
    changes = ["cooling.mode=none", "feed.chlorine.flow=400 kg/h", "lamp.1.power=0.001 W", "lamp.1.number=1",
               "sleeve.number=1"]  # fmt: skip
    at = setting(load(CASES / "dunnock_tank.toml", changes))
    tank = record.tank_of(at.case, at.plant, at.feed)
    state = at.profile.states[0]
    return at, curves.against_feed_temperature(tank, state, at.feed.temperature, 300.0, 760.0)


def test_a_weakly_lit_tank_ignites_and_goes_out_by_its_feed_temperature(folded):
    # Limit: ignition needs a hotter feed than extinction, and stands at a colder gas; between the two there
    # are three states, of which the middle one is unstable.
    _, curve = folded
    (ignition, cold, one), (extinction, hot, two) = curve.turns
    assert (one, two) == ("ignition", "extinction")
    assert ignition > extinction
    assert cold < hot
    between = (curve.temperature > cold + 1) & (curve.temperature < hot - 1)
    assert between.any()
    assert not curve.stable[between].any()
    assert curve.stable[(curve.temperature < cold - 1) | (curve.temperature > hot + 1)].all()


@pytest.mark.parametrize(("share", "count"), [(0.5, 3), (1.5, 1)])
def test_the_solver_counts_the_states_that_the_curve_shows(folded, share, count):
    # Limit: half way between the turning points the tank has three steady states, beyond ignition one.
    # Independent: the solver scans temperatures, the curve is followed by arc length.
    at, curve = folded
    (ignition, *_), (extinction, *_) = curve.turns
    step = extinction + share * (ignition - extinction) - at.feed.temperature
    _, profile = at.steady(Changed(warmer_feeds(at.case, step)))
    assert len(profile.states) == count


# --- the table ------------------------------------------------------------------------------------

CHEAP = {"U02", "U05", "U07", "U09", "U13", "U16", "U22", "U23", "U24", "U25", "U26", "U27", "U28", "U30"}


@pytest.fixture(scope="module")
def table(tube):
    return {row.id: row for row in rows.table(tube, CHEAP)}


def value(row, name):
    return row.results[name]["value"]


def test_every_guide_word_has_a_row():
    listed = library.table("hazards/deviations.csv")
    words = set(listed.text("guideword"))
    assert {"No", "More", "Less", "As well as", "Part of", "Reverse", "Other than", "Early", "Late"} <= words
    assert len(set(listed.text("id"))) == len(listed)
    known = set(rows.CHANGES) | set(rows.OTHER) | {"none"}
    assert set(listed.text("change")) <= known


def test_a_row_that_is_not_assessed_says_why(table):
    for row in table.values():
        assert row.assessed in ("computed", "NOT ASSESSED")
        assert bool(row.why) == (row.assessed == "NOT ASSESSED")
    assert table["U30"].assessed == "NOT ASSESSED"


def test_one_dark_tube_of_four_lets_a_quarter_of_the_chlorine_pass(table, tube):
    # Limit: one tube passes all its chlorine, three slip as before.
    slip = tube.profile.outlet.moles[tube.chlorine] / tube.feed.moles[tube.chlorine]
    assert value(table["U13"], "chlorine_flow") == pytest.approx(101.6 * (0.25 + 0.75 * slip), rel=1e-3)


def test_twice_the_chlorine_is_hotter_and_comes_nearer_to_the_range(table, tube):
    row = table["U02"]
    assert value(row, "peak") > tube.profile.hottest[0] + 50
    assert Class(row.class_reached).rank > 0
    # Limit: new gas enters at time zero, so that the limit is reached within its residence time.
    assert 0 < value(row, "time_to_limit") < tube.profile.total("time")


def test_lamps_off_send_all_chlorine_to_the_scrubber(table, tube):
    # Limit: 101.6 kg/h of chlorine fed; 2 mol NaOH each: 2 x 39.997/70.906.
    row = table["U09"]
    assert value(row, "chlorine_flow") == pytest.approx(101.6, rel=1e-3)
    assert value(row, "naoh") == pytest.approx(101.6 * 2 * 39.997 / 70.906, rel=1e-3)
    assert value(row, "time_to_limit") is None
    assert "limit is not reached" in row.acts


def test_lost_cooling_is_hotter_and_no_trip_is_quick_enough(table, tube):
    row = table["U16"]
    assert value(row, "peak") > tube.profile.hottest[0]
    assert value(row, "time_to_limit") < tube.times.direct
    assert "too late" in row.acts


def test_alkane_shut_passes_through_the_range(table):
    assert table["U07"].class_reached == "INSIDE"
    assert table["U25"].class_reached == "INSIDE"


def test_oxygen_above_the_gate_is_unknown_and_lets_chlorine_pass(table):
    assert table["U22"].class_reached == "UNKNOWN"
    assert value(table["U22"], "chlorine_flow") > 50


def test_a_slower_plant_acts_later(tube):
    slow = tube.times._replace(valve=30.0)
    entry = library.table("hazards/deviations.csv").where("id", "U02").rows[0]
    row = rows.row(replace(tube, times=slow), entry)
    assert f"direct trip ({tube.times.direct + 28:.1f} s) is too late" in row.acts


def test_a_chlorine_valve_of_unknown_size_is_not_assessed(tube):
    entry = library.table("hazards/deviations.csv").where("id", "U03").rows[0]
    assert rows.row(tube, entry).assessed == "NOT ASSESSED"
    wide = rows.row(replace(tube, times=tube.times._replace(chlorine_wide_open=6.0)), entry)
    assert wide.class_reached == "INSIDE"


def test_the_worksheet_begins_with_the_columns_of_a_hazop_and_loses_no_row(table):
    plain = {"rows": [record.asdict(row) for row in table.values()]}
    lines = list(csv.reader(io.StringIO(printed.worksheet_csv(plain))))
    assert lines[0][:10] == list(printed.COLUMNS)
    assert [line[0] for line in lines[1:]] == list(table)
    assert {len(line) for line in lines} == {len(lines[0])}


def test_the_whole_record_survives_json_and_prints(tube):
    found = json.loads(json.dumps(record.upset(tube.case, {"U23", "U29"}), allow_nan=False))
    text = printed.render(found)
    assert "NOT ASSESSED: back-flow" in text
    assert "upsets.valve = 2 s" in text
    assert not {"safe", "Safe", "SAFE"} & set(text.replace(".", " ").replace(",", " ").split())
    assert max(len(line) for line in text.splitlines()) <= 80
    points = list(csv.reader(io.StringIO(printed.triangle_csv(found["ternary"]))))
    assert {row[0] for row in points[1:]} >= {"grid", "feed", "corner", "path"}
    assert all(sum(map(float, row[1:4])) == pytest.approx(1, abs=1e-4) for row in points[1:])


def test_an_unknown_row_and_strict_reading_are_refused(tube):
    with pytest.raises(CaseError, match="no deviation U99"):
        record.upset(tube.case, {"U99"})
    with pytest.raises(CaseError, match=r"upsets\.valve: missing"):
        record.upset(tube.case, {"U29"}, strict=True)


def test_the_command_writes_worksheet_and_triangle(tmp_path, capsys):
    pytest.importorskip("matplotlib")
    sheet, points, figure = (str(tmp_path / name) for name in ("sheet.csv", "points.csv", "triangle.png"))
    case = str(CASES / "lapwing_ten.toml")
    for triangle in (points, figure):
        words = ["upset", case, "--row", "U09", "--csv", sheet, "--triangle", triangle]
        cli(words, standalone_mode=False)
    out = capsys.readouterr().out
    assert "U09  No: lamp power" in out
    assert len(Path(sheet).read_text().splitlines()) == 2
    assert Path(points).read_text().startswith("part,fuel [1]")
    assert Path(figure).read_bytes().startswith(b"\x89PNG")


def test_fifteen_rows_of_a_tube_take_less_than_twenty_seconds(tube):
    listed = [row["id"] for row in library.table("hazards/deviations.csv").rows][:15]
    start = time.perf_counter()
    found = rows.table(tube, set(listed))
    assert time.perf_counter() - start < 20
    assert len(found) == 15


# --- regimes --------------------------------------------------------------------------------------


def test_the_dark_chain_of_the_mechanism_stays_below_its_upper_bound(tube):
    # Limit: termination only slows it.
    own, bound = regimes.chain_of(tube, light=False), regimes.upper_bound(tube)
    for T in (450.0, 600.0, 750.0):
        assert own.rate(T) <= bound.rate(T) * 1.01


def test_light_hardly_makes_the_rate_depend_on_temperature(tube):
    # Source: own worked example (computed): 10 kJ/mol of propagation with light, 130 kJ/mol in the dark.
    # Limit.
    lit = regimes.chain_of(tube, light=True).activation(350.0)
    assert 0 < lit < 15e3
    assert 120e3 < regimes.upper_bound(tube).activation(350.0) < 140e3


def test_a_limit_above_the_mtsr_is_not_reached_by_the_chlorine_inside(tube, tank):
    # Limit: the tank (157 degC MTSR, limit 200 degC) cannot get there; the tube (265 and 250 degC) can.
    assert regimes.heating(tank)[1] is None
    rate, seconds = regimes.heating(tube)
    assert 0 < seconds < 0.2
    assert rate > 100


def test_the_chlorine_inside_is_that_of_the_profile(tube):
    # Limit: moles inside = mean flow of chlorine times residence, summed over the stations.
    flow, time = tube.profile.moles[:, tube.chlorine], tube.profile.totals["time"]
    assert regimes.inventory(tube)["moles"] == pytest.approx(float(np.trapezoid(flow, time)), rel=2e-3)


# --- paths between streams ------------------------------------------------------------------------

fuels = st.sampled_from(["CH4", "C2H6", "C3H8", "CH3Cl", "C2H5Cl"])


@few
@given(fuels, st.floats(0.2, 60), st.floats(0, 3))
def test_a_line_is_never_better_than_its_ends(fuel, ratio, inert):
    one, two = stream("fuel", **{fuel: ratio, "N2": inert}), stream("chlorine", Cl2=1.0)
    found = paths.line(BOOK, one, two, 1e5)
    ends = [explosive.classify(BOOK, s.moles, s.temperature, 1e5).class_.rank for s in (one, two)]
    assert found.class_.rank >= max(ends)
    assert found.class_ is Class.INSIDE or inert > 0  # pure fuel and pure chlorine pass through the range


@few
@given(fuels, st.floats(1, 60))
def test_the_segregation_tolerated_is_where_the_class_changes(fuel, ratio):
    one, two = stream("fuel", **{fuel: ratio}), stream("chlorine", Cl2=1.0)
    found = paths.segregation(BOOK, one, two, 1e5)
    if np.isnan(found.tolerated):
        assert found.line.class_ is found.mean
        return
    mean = paths.mean_share(one, two)
    for factor, worse in ((0.999, False), (1.001, True)):
        ranks = []
        for stop in (0.0, 1.0):
            y = mean + min(found.tolerated * factor, 1.0) * (stop - mean)
            mixture = {fuel: 1 - y, "Cl2": y}
            ranks.append(explosive.classify(BOOK, mixture, 298.15, 1e5).class_.rank)
        assert (max(ranks) > found.mean.rank) is worse


@few
@given(st.floats(1, 30), st.floats(0.005, 0.1), st.floats(1, 3))
def test_widening_the_box_of_meter_errors_never_improves_its_worst(ratio, error, wider):
    feeds, ranks = [stream("alkane", CH4=ratio), stream("chlorine", Cl2=1.0)], []
    offsets = np.array([(a, c) for a in np.linspace(-1, 1, 9) for c in np.linspace(-1, 1, 9)])
    for e in (error, error * wider):
        box = corners.worst_corner(BOOK, feeds, {"alkane": e, "chlorine": e}, 1e5).class_.rank
        mixtures = [{"CH4": ratio * (1 + a * e), "Cl2": 1 + c * e} for a, c in offsets]
        x = np.vstack([explosive.fractions(BOOK, mixture) for mixture in mixtures])
        same = np.full(len(x), 298.15)
        inside = explosive.find(BOOK, x, same, np.full(len(x), 1e5), same, True).rank
        assert box >= inside.max()
        ranks.append(box)
    assert ranks[1] >= ranks[0]


@few
@given(st.sampled_from(["C3H8", "CHCl3", "C2H5Cl", "1-C3H7Cl", "n-C4H10"]), st.floats(5, 500))
def test_a_calculated_range_never_gives_pass(fuel, ratio):
    mixture = explosive.classify(BOOK, {fuel: ratio, "Cl2": 1}, 298.15, 1e5)
    worst = corners.worst_corner(BOOK, [stream("all", **{fuel: ratio, "Cl2": 1})], {}, 1e5)
    found = judge.explosive_range({"mixtures": [hazard.record("inlet, mixed", mixture, worst)]})
    assert found.word in ("CAUTION", "FAIL")


@pytest.mark.parametrize(("changes", "word"), [([], "NOT ASSESSED"), (["upsets.chlorine_wide_open=6"], "FAIL")])
def test_the_open_chlorine_valve_gets_a_verdict(changes, word):
    case = load(CASES / "lapwing_ten.toml", changes)
    records = surroundings.met(case, GAS, BOOK)
    assert surroundings.valve(case, records).word == word
    assert surroundings.path(records).word == "PASS"
    assert surroundings.mixing(records).word == "CAUTION"


def test_alkane_first_stays_out_of_the_range_and_chlorine_first_does_not():
    alkane, chlorine, purge = stream("alkane", CH4=10), stream("chlorine", Cl2=1), stream("N2", N2=1)
    mixed = assemble.mix("mixed", [alkane, chlorine], GAS, 1e5)
    good, bad = (
        max(one.class_.rank for _, one in paths.filling(BOOK, purge, alkane, mixed, chlorine, 1e5, order))
        for order in ("alkane first", "chlorine first")
    )
    assert (good, bad) == (Class.OUTSIDE.rank, Class.INSIDE.rank)

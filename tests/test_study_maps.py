"""Bands, maps and fronts: against formulas whose quantiles, indices, boundaries and fronts are known."""

import math
from pathlib import Path

import numpy as np
import pytest
import standin_band
import standin_map

from reactor import study
from reactor.case import load
from reactor.errors import CaseError
from reactor.study import window as maps
from reactor.study.band import band, deviates, noise_level
from reactor.study.frontier import Goal, front, frontier, goal, knee
from reactor.study.plane import Cell, Plane, crossed, lines
from reactor.study.ranking import rank_correlation, saltelli, sobol_indices
from reactor.study.uncertain import factors, inputs
from reactor.study.variation import axis

CASES = Path(__file__).parent.parent / "cases"
HERE = study.Crew(0)


@pytest.fixture(scope="module")
def case():
    return load(CASES / "fulmar.toml", ["limits.chlorine_slip=2 %"])


# bands


@pytest.fixture(scope="module")
def banded(tmp_path_factory, case):
    path = tmp_path_factory.mktemp("band") / "a.study"
    band(
        case,
        path,
        error=0.05,
        most=2048,
        sobol=1024,
        result="temperature_hottest",
        crew=HERE,
        evaluator="standin_band",
        found=standin_band.INPUTS,
    )
    return study.read(path).about


def test_the_band_of_a_sum_of_normal_deviates_is_as_calculated(banded):
    # limit: a sum of independent normal deviates, 3 a + 2 b + c, has the standard deviation sqrt(14)
    found = banded["bands"]["temperature_hottest"]
    half = 1.6448536 * math.sqrt(14)
    width = 2 * half
    for name, value in (("low", 400 - half), ("mid", 400.0), ("high", 400 + half)):
        assert abs(found[name] - value) < 3 * found["error"] * width
    assert found["value"] == 400.0
    assert banded["converged"]["reached"]
    assert banded["converged"]["error"] <= 0.05


def test_a_result_that_does_not_move_has_a_band_without_width_and_no_ranking(banded):
    found = banded["bands"]["poly_share_mol"]
    assert found["low"] == found["high"] == 0.05
    assert "poly_share_mol" not in banded["ranking"]


def test_the_ranking_puts_the_heaviest_input_first(banded):
    rows = banded["ranking"]["temperature_hottest"]
    assert [row["input"] for row in rows] == ["a", "b", "c", "idle"]
    assert abs(rows[-1]["rank_correlation"]) < banded["converged"]["noise"]
    # limit: Pearson's correlation is 3/sqrt(14); Spearman's of normal deviates is 6/pi asin(r/2)
    assert rows[0]["rank_correlation"] == pytest.approx(
        6 / math.pi * math.asin(3 / math.sqrt(14) / 2), abs=0.05
    )


def test_sobol_indices_of_a_sum_are_the_squares_of_its_weights(banded):
    # limit: an additive model, 9/14, 4/14, 1/14, 0; first order and total are the same
    shares = {row["name"]: row for row in banded["sobol"]["shares"]}
    for name, exact in (("a", 9 / 14), ("b", 4 / 14), ("c", 1 / 14), ("idle", 0.0)):
        for which in ("first", "total"):
            assert abs(shares[name][which] - exact) <= 3 * shares[name][f"{which}_error"] + 1e-12


def test_sobol_indices_of_the_ishigami_function_are_as_published():
    # worked: Ishigami function, a 7, b 0.1 (memory): first order 0.3139, 0.4424, 0; total 0.5576, 0.4424,
    # 0.2437
    rng = np.random.default_rng(3)
    a, b = (np.pi * (2 * rng.random((8192, 3)) - 1) for _ in range(2))
    x = saltelli(a, b, [[0], [1], [2]])
    y = np.sin(x[:, 0]) + 7 * np.sin(x[:, 1]) ** 2 + 0.1 * x[:, 2] ** 4 * np.sin(x[:, 0])
    found = sobol_indices(y, ["x1", "x2", "x3"], seed=1)
    for row, first, total in zip(found, (0.3139, 0.4424, 0.0), (0.5576, 0.4424, 0.2437), strict=True):
        assert abs(row.first - first) < 3 * row.first_error
        assert abs(row.total - total) < 3 * row.total_error
        assert row.first_error < 0.03


def test_rank_correlation_is_that_of_scipy():
    from scipy.stats import spearmanr

    rng = np.random.default_rng(5)
    x = rng.random((50, 2))
    y = x[:, 0] ** 3 + 0.3 * rng.random(50)
    assert rank_correlation(x, y)[0] == pytest.approx(spearmanr(x[:, 0], y).statistic)


def test_a_longer_draw_begins_with_the_shorter_one_and_is_not_correlated_with_itself():
    from reactor.study.band import _drawn

    short, long = _drawn(90, 64, 1), _drawn(90, 256, 1)
    assert long[:64] == short
    x = np.array([p.inputs for p in long])
    correlation = np.corrcoef(x.T) - np.eye(90)
    assert np.abs(correlation).max() < 5.2 / math.sqrt(256)  # 4005 pairs: none beyond five standard errors
    assert deviates(64, 3, (1, 2)) == pytest.approx(deviates(64, 3, (1, 2)))


def test_the_noise_level_is_what_the_best_of_many_idle_inputs_reaches():
    rng = np.random.default_rng(7)
    level = noise_level(64, 90)
    beyond = sum(
        np.abs(rank_correlation(rng.random((64, 90)), rng.random(64))).max() > level for _ in range(200)
    )
    assert 1 <= beyond <= 22  # 5 % of 200 draws, within four standard deviations


def test_a_band_goes_on_where_it_was(tmp_path, case):
    path = tmp_path / "a.study"
    first = dict(crew=HERE, evaluator="standin_band", found=standin_band.INPUTS, error=1e-9)
    band(case, path, most=64, **first)
    kept = study.read(path)
    with pytest.raises(CaseError):
        band(case, path, most=64, seed=2, **first)
    band(case, path, most=64, **first)
    assert study.read(path).points["temperature_hottest"] == kept.points["temperature_hottest"]


def test_the_uncertain_inputs_of_a_case_are_its_rates_light_films_walls_traces_and_meters(case):
    found = inputs(case)
    kinds = {each.kind for each in found}
    assert kinds == {"rate", "cross_section", "lamp_output", "exchange", "wall_loss", "species", "stream"}
    assert [each.which for each in found if each.kind == "species"] == ["O2"]
    assert len({each.name for each in found}) == len(found)
    fixed = load(
        CASES / "fulmar.toml",
        ["uncertainty.lamp_output=1", "uncertainty.rates=0", "meters.alkane=0 %", "uncertainty.impurity=2"],
    )
    left = {each.name: each for each in inputs(fixed)}
    assert "lamp output" not in left
    assert not any(each.kind == "rate" for each in left.values())
    assert "meter of ethane" not in left
    assert left["O2 in the feeds"].up == 2.0


def test_one_standard_deviation_of_a_meter_reaches_its_error_at_95_percent(case):
    found = inputs(case)
    (place,) = (i for i, each in enumerate(found) if each.name == "meter of chlorine")
    x = [0.0] * len(found)
    x[place] = 1.6448536
    assert factors(found, x).streams["chlorine"] == pytest.approx(1 + case.meters.chlorine, rel=1e-6)


def test_a_rating_moves_with_its_factors_the_way_physics_says(rated, case):
    from reactor.rating import Factors, rate

    base = rated("fulmar")
    more_light = rate(load(CASES / "fulmar.toml"), Factors(lamp_output=1.2))
    assert more_light["light_into_gas"] == pytest.approx(1.2 * base["light_into_gas"], rel=1e-9)
    assert more_light["light_electrical"] == base["light_electrical"]
    assert more_light["chlorine_slip"] < base["chlorine_slip"]
    assert all(gap < 1e-6 for gap in (more_light.closures["photons"], more_light.closures["enthalpy"]))
    dirty = rate(load(CASES / "fulmar.toml"), Factors(species={"O2": 2.0}))
    assert dirty["chlorine_slip"] > base["chlorine_slip"]


def test_a_rate_at_its_uncertainty_factor_is_moved_forward_and_reverse():
    from reactor import chemistry
    from reactor.chemistry.varied import varied

    gas = chemistry.mechanism()
    x = np.zeros(len(gas.f298))
    place = gas.equations.index("CH4 + Cl <=> CH3 + HCl")
    x[place] = 2.0
    moved = varied(gas, x).tables
    ratio = moved.A / gas.tables.A
    assert ratio[place] == pytest.approx(gas.f298[place] ** 2)
    assert np.delete(ratio, place) == pytest.approx(1.0)
    assert moved.reversible is gas.tables.reversible


# maps


def test_a_map_finds_a_circle_and_a_line_and_asks_only_near_them(tmp_path, case):
    # limit: the slip of the stand-in is at its limit where ln(x/10)^2 + ln(y/100)^2 = 1, its margin 0 at x =
    # 6
    place = maps.plane(case, "feed.ratio=2..50, log", "lamp.power=10..1000 W, log", 6, 3)
    path = tmp_path / "a.study"
    maps.window(case, place, path, crew=HERE, evaluator="standin_map", columns=standin_map.COLUMNS)
    tables = study.read(path)
    block = tables.about["window"]
    rules = {rule["name"]: rule for rule in block["rules"]}
    (circle,) = rules["chlorine slip"]["lines"]
    assert len(circle) > 60
    assert max(abs(math.hypot(math.log(x / 10), math.log(y / 100)) - 1) for x, y in circle) < 2e-3
    assert circle[0] == pytest.approx(circle[-1])
    assert all(x == pytest.approx(6.0, rel=2e-3) for line in rules["exotherm"]["lines"] for x, _ in line)
    assert len(tables) < 0.25 * (place.steps[0] + 1) * (place.steps[1] + 1)
    area = math.pi / (math.log(25) * math.log(100))
    assert 1 - rules["chlorine slip"]["share"] == pytest.approx(area, rel=0.02)
    assert (
        maps.window(
            case, place, path, crew=HERE, evaluator="standin_map", columns=standin_map.COLUMNS
        ).finished
        == 0
    )


def test_a_map_without_a_range_lies_round_the_case(case):
    place = maps.plane(case, "feed.ratio", "lamp.power")
    assert (place.x.low, place.x.high) == pytest.approx((2.0, 18.0))
    assert (place.y.low, place.y.high, place.y.typed) == (pytest.approx(16.67), 150.0, "W")
    with pytest.raises(CaseError, match="range"):
        maps.plane(case, "feed.chlorine.temperature", "lamp.power")
    with pytest.raises(CaseError, match="other axis"):
        maps.plane(case, "lamp.power", "lamp.power")


def test_a_saddle_gives_two_lines_that_do_not_cross():
    field = {(0, 0): 1.0, (1, 0): -1.0, (1, 1): 1.0, (0, 1): -1.0}
    found = lines([Cell(0, 0, 1)], field)
    assert len(found) == 2
    assert all(len(line) == 2 for line in found)


def test_a_cell_is_crossed_where_its_corners_disagree_or_one_has_no_answer():
    same = {(0, 0): 1.0, (1, 0): 2.0, (1, 1): 3.0, (0, 1): 4.0}
    assert not crossed(Cell(0, 0, 1), [same])
    assert crossed(Cell(0, 0, 1), [same | {(1, 1): -0.1}])
    assert crossed(Cell(0, 0, 1), [same | {(1, 1): None}])


def test_quarters_cover_their_cell():
    plane = Plane(axis("x=1..2"), axis("y=1..2"), (1, 1), 2)
    (cell,) = plane.coarse()
    assert sorted(part.corners[0] for part in cell.quarters) == [(0, 0), (0, 2), (2, 0), (2, 2)]
    assert sum(part.size**2 for part in cell.quarters) == cell.size**2


def test_the_figure_names_what_forbids_and_hatches_it(tmp_path, case):
    from reactor.report.figures.window import draw

    place = maps.plane(case, "feed.ratio=2..50, log", "lamp.power=10..1000 W, log", 4, 1)
    maps.window(
        case,
        place,
        tmp_path / "a.study",
        crew=HERE,
        evaluator="standin_map",
        columns=standin_map.COLUMNS,
        contours=[study.claim("chlorine_slip=1 %")],
    )
    block = study.read(tmp_path / "a.study").about["window"]
    drawn = draw(block, case.title, tmp_path / "a.svg")
    again = draw(block, case.title, tmp_path / "b.svg")
    labels = [text.get_text() for legend in drawn.legends for text in legend.get_texts()]
    assert any(label.startswith("forbidden: chlorine slip") for label in labels)
    assert "the case as it stands" in labels
    assert drawn.axes[0].get_ylabel() == "lamp.power [W]"
    assert (tmp_path / "a.svg").read_bytes() == (tmp_path / "b.svg").read_bytes()
    assert again is not drawn


# fronts


def test_a_front_holds_every_point_that_no_other_betters():
    rng = np.random.default_rng(2)
    values = rng.random((200, 3))
    kept = set(front(values).tolist())
    for i in range(200):
        others = np.delete(values, i, axis=0)
        bettered = np.any(np.all(others <= values[i], axis=1) & np.any(others < values[i], axis=1))
        assert (i in kept) == (not bettered)


def test_the_knee_lies_furthest_from_the_chord():
    assert knee(np.array([[0.0, 10.0], [1.0, 2.0], [5.0, 1.0], [10.0, 0.0]])) == 1


def test_a_front_of_slip_and_power_ends_on_the_known_curve(tmp_path, case):
    # limit: at a given power the slip of the stand-in is least at a ratio of 10; it falls with power up to
    # 100 W
    axes = [axis("feed.chlorine.ratio=2..50, log"), axis("lamp.power=10..1000 W, log")]
    goals = [goal("min chlorine_slip"), goal("min lamp.power", ["lamp.power"])]
    path = tmp_path / "a.study"
    frontier(
        case,
        axes,
        goals,
        path,
        number=64,
        rounds=4,
        crew=HERE,
        evaluator="standin_map",
        columns=standin_map.COLUMNS,
    )
    block = study.read(path).about["frontier"]
    powers = [row["inputs"]["lamp.power"] for row in block["points"]]
    ratios = [row["inputs"]["feed.chlorine.ratio"] for row in block["points"]]
    assert len(powers) > 8
    assert max(powers) < 130
    assert abs(math.log(np.median(ratios) / 10)) < 0.25
    assert block["knee"] is not None
    assert (
        frontier(
            case,
            axes,
            goals,
            path,
            number=64,
            rounds=4,
            crew=HERE,
            evaluator="standin_map",
            columns=standin_map.COLUMNS,
        ).finished
        == 0
    )


@pytest.mark.parametrize("text", ["chlorine_slip", "min slip", "least chlorine_slip", "min class_worst"])
def test_what_is_no_goal_is_refused(text):
    with pytest.raises(CaseError):
        goal(text)


def test_goals_count_two_or_three(tmp_path, case):
    with pytest.raises(CaseError, match="two or three"):
        frontier(
            case, [axis("lamp.power=1..2 W")], [Goal("chlorine_slip", 1.0)], tmp_path / "a.study", crew=HERE
        )

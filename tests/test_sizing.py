"""Sizing: what is asked for comes out, what cannot be is said, and the loads behind the reactor add up."""

import json
import math

import pytest
from conftest import CASES

import reactor
from reactor import case as cases
from reactor.case import targets
from reactor.errors import CaseError
from reactor.result import NAMES, from_json
from reactor.sizing import goals, light, loads, loop, run, search, side_by_side, stages, tubes
from reactor.sizing.probe import Probe
from reactor.sizing.size import size
from reactor.sizing.unknown import unknown

TEN = CASES / "lapwing_ten.toml"


def sized(find, wanted, keeps=(), between=None, case=TEN, changes=()):
    loaded = reactor.load(case, changes)
    return size(loaded, find, goals.read(wanted, "--for"), goals.read(keeps, "--keep"), between)


@pytest.fixture(scope="module")
def ten():
    return Probe(reactor.load(TEN))


# The search, on functions whose roots are known


@pytest.mark.parametrize(
    ("f", "root"),
    [
        (lambda x: -2 * (x - 3.0), 3.0),
        (lambda x: math.exp(-x) - 0.01, math.log(100)),
        (lambda x: math.atan(5 * (x + 4.0)), -4.0),
        (lambda x: (x - 1) ** 3, 1.0),
    ],
)
def test_the_search_finds_the_root_of_a_known_function_in_few_trials(f, root):
    # Kind: limit; the roots are exact.
    found = search.one(f, 0.0, -9.0, 9.0)
    assert found.found
    assert abs(f(found.x)) <= search.EXACT
    assert found.x == pytest.approx(root, abs=1e-2 if root == 1.0 else 1e-6)
    assert len(found.trials) < 15


def test_the_search_says_which_end_of_the_range_stands_in_the_way():
    found = search.one(lambda x: x - 5.0, 0.0, -1.0, 2.0)
    assert not found.found
    assert found.x == 2.0
    assert "highest" in found.limit


def test_the_search_stops_where_nothing_can_be_solved_and_gives_the_reason():
    def trial(x):
        if x > 1.0:
            raise search.Blocked("the sleeve does not fit")
        return x - 3.0

    found = search.one(trial, 0.0, -5.0, 5.0)
    assert not found.found
    assert "does not fit" in found.limit
    assert 0.5 < found.x <= 1.0


def test_two_unknowns_meet_two_targets():
    # Kind: limit; x + y = 3 and x y = 2 hold at (1, 2) and (2, 1).
    def trial(x):
        return [x[0] + x[1] - 3.0, x[0] * x[1] - 2.0]

    found = search.several(trial, [0.3, 2.5], [-5, -5], [5, 5])
    assert found.found
    assert found.x == pytest.approx((1.0, 2.0), abs=1e-5)


# Sizing a case


@pytest.mark.parametrize(
    ("find", "goal"),
    [
        ("lamp.power", "chlorine_slip=1 %"),
        ("vessel.length", "chlorine_slip=1 %"),
        ("feed.chlorine.flow", "products.CH3Cl=60 kg/h"),
        ("vessel.pressure", "conversion_chlorine=99 %"),
    ],
)
def test_a_size_run_followed_by_a_rate_run_returns_the_target(find, goal):
    # Kind: limit; the target is the expected value. Under 15 solved cases, as promised.
    found = sized([find], [goal])
    assert found.record["solved"]
    assert found.record["ratings"] < 15
    texts = [f"{key}={value}" for key, value in found.record["inputs"].items()]
    texts += [f"{key}={found.record['inputs']['vessel.length']}" for key in found.record["along"]]
    again = reactor.rate(reactor.load(TEN, texts))
    wanted = targets.goal(goal)
    name, _, species = wanted.name.partition(".")
    got = again[name][species] / 3600 if species else again[name]
    assert got == pytest.approx(wanted.value, rel=1e-6)


def test_two_inputs_are_found_for_two_results():
    found = sized(["lamp.power", "feed.methane.flow"], ["chlorine_slip=1 %", "poly_share_mol=10 %"])
    assert found.record["solved"]
    assert found.probe["chlorine_slip"] == pytest.approx(0.01, rel=1e-6)
    assert found.probe["poly_share_mol"] == pytest.approx(0.10, rel=1e-6)


def test_a_count_is_the_first_whole_number_that_passes_the_target():
    found = sized(["vessel.parallel"], ["chlorine_slip=1 %"])
    number = int(found.record["inputs"]["vessel.parallel"])
    fewer = Probe(cases.changed(reactor.load(TEN), [f"vessel.parallel={number - 1}"]))
    assert found.probe["chlorine_slip"] < 0.01 < fewer["chlorine_slip"]


def test_a_constraint_that_breaks_is_named_and_the_nearest_case_keeps_it():
    found = sized(["lamp.power"], ["chlorine_slip=1 %"], ["temperature_hottest<240 degC"])
    assert not found.record["solved"]
    assert "temperature_hottest<240 degC" in found.record["limited_by"]
    assert found.probe["temperature_hottest"] <= 513.15
    assert found.record["target_met_at"] is not None
    assert len(found.record["curve"]) >= 3


def test_a_range_that_is_too_narrow_is_said_to_be_the_limit():
    found = sized(["lamp.power"], ["chlorine_slip=1 %"], between=("10 W", "100 W"))
    assert not found.record["solved"]
    assert found.record["inputs"]["lamp.power"] == "0.1 kW"
    assert "end of the range" in found.record["limited_by"]


@pytest.mark.parametrize(
    ("wanted", "keeps"),
    [
        (["chlorine_slip=5 %"], ["chlorine_slip<2 %"]),
        (["conversion_chlorine=90 %"], ["chlorine_slip<2 %"]),
        (["mtsr=500 K"], ["pressure_drop<1 mbar", "pressure_drop>2 mbar"]),
    ],
)
def test_wishes_that_exclude_each_other_are_told_before_anything_is_solved(wanted, keeps):
    with pytest.raises(goals.Contradiction, match="contradict"):
        goals.check(goals.read(wanted, "--for"), goals.read(keeps, "--keep"))


@pytest.mark.parametrize(
    ("find", "wanted", "words"),
    [
        (["lamp.powr"], ["chlorine_slip=1 %"], "did you mean 'power'"),
        (["lamp.kind"], ["chlorine_slip=1 %"], "holds words"),
        (["lamp.power"], ["chlorine_slip<1 %"], "--keep"),
        (["lamp.power", "vessel.length"], ["chlorine_slip=1 %"], "as many of one"),
        ([], ["chlorine_slip=1 %"], "nothing to find"),
        (["lamp.power"], [], "no target"),
    ],
)
def test_a_question_that_makes_no_sense_is_refused_with_its_cure(find, wanted, words):
    with pytest.raises(CaseError, match=words):
        sized(find, wanted)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("slip=1 %", "did you mean 'chlorine_slip'"),
        ("chlorine_slip", "write it like"),
        ("products=5 kg/h", "name the species"),
        ("temperature_hottest=120", "unit is missing"),
        ("products.CH3C=5 kg/h", "unknown"),
    ],
)
def test_a_goal_that_cannot_be_read_is_refused_with_its_cure(text, words):
    with pytest.raises(CaseError, match=words):
        goals.read([text], "--for")


def test_every_result_that_may_be_asked_for_has_its_name_and_unit_in_the_result():
    for name, kind in {**targets.WANTED, **targets.BY_SPECIES}.items():
        unit = NAMES[name][0]
        assert {"1": "-", "kg/h": "kg/s"}.get(unit, unit) == kind.si, name


def test_targets_of_the_case_are_read_and_its_limits_hold():
    case = reactor.load(TEN)
    wanted, keeps = goals.of_case(case)
    assert [str(goal) for goal in wanted] == ["chlorine_slip=1 %"]
    assert "temperature_hottest<250 degC" in map(str, keeps)
    assert case.targets.find == ("lamp.power",)


def test_lit_ends_at_the_outlet_go_with_the_length():
    found = unknown(reactor.load(TEN), "vessel.length")
    assert found.overrides(2.0) == ["vessel.length=2 m", "lamp.1.lit_to=2 m"]


def test_the_numbers_of_a_probe_are_those_of_the_rating(rated, ten):
    result = rated("lapwing_ten")
    for name in (
        "chlorine_slip",
        "temperature_hottest",
        "poly_share_mol",
        "light_into_gas",
        "chain_length",
        "mtsr",
    ):
        assert ten[name] == pytest.approx(result[name], rel=1e-12), name
    assert ten["products.CH3Cl"] * 3600 == pytest.approx(result["products"]["CH3Cl"], rel=1e-12)


def test_a_sized_result_survives_its_file():
    case = reactor.load(CASES / "linnet.toml")
    result = run(case, ["lamp.power"], goals.read(["chlorine_slip=0.5 %"], "--for"), parts=("tubes", "loads"))
    again = from_json(result.to_json())
    assert again.sizing == json.loads(json.dumps(result.sizing))
    assert set(again.sizing) == {"found", "tubes", "loads"}


# Tables


def test_lamp_power_rises_about_a_decade_for_a_decade_less_slip(ten):
    # Source: hand law of the slip tail, c_out ~ 1/light (memory). Evidence: worked. The full model bends it
    # a little.
    one = light.lamp_curve(ten.case, ten, None, None)
    slips = [row["slip"] for row in one["curve"]]
    assert slips == sorted(slips, reverse=True)
    assert max(slips) / min(slips) > 1e4
    laws = [row["law"] for row in one["curve"] if row["law"] and 2e-3 < row["slip"] < 5e-2]
    assert all(0.5 < law < 2.0 for law in laws)
    names = [point["name"] for point in one["points"]]
    assert names == ["end of life (design)", "fresh lamp", "lamp at 70 % of fresh"]
    assert one["points"][1]["slip"] < one["points"][0]["slip"] < one["points"][2]["slip"]


def test_seventy_per_cent_of_the_light_raises_the_slip_by_the_hand_ratio(ten):
    # Source: hand case, lamp at 70 %: slip 1.43 to 1.45 times (memory). Evidence: worked; within 20 %.
    dark, full = (Probe(light.of_fresh(ten.case, share))["chlorine_slip"] for share in (0.7, 1.0))
    assert dark / full == pytest.approx(1.44, rel=0.2)


def test_watts_times_litres_is_about_constant(ten):
    # Source: hand finding (memory): doubling the volume halves the watts. Evidence: worked.
    longer = light.stretched(ten.case, 2.0)
    _, found = light.needed(longer, ten["chlorine_slip"], 0.5)
    product = found["light_into_gas"] * found.profile.volume
    assert product == pytest.approx(ten["light_into_gas"] * ten.profile.volume, rel=0.2)


def test_the_absorber_and_the_scrubber_have_the_loads_of_the_hand_case():
    # Source: hand case, methane 10:1: 52.3 kg/h HCl -> 163.4 kg/h acid, 111.1 kg/h water, 24.5 kW (computed);
    # 101.6 kg/h Cl2 -> 114.6 kg/h NaOH, 573 kg/h of 20 wt%, 39.8 kW (computed). Evidence: worked.
    acid = loads.absorber(52.3, 52.3 / 3.6 / 36.461)
    assert [acid[k] for k in ("acid", "water", "heat")] == pytest.approx([163.4, 111.1, 24.5e3], rel=2e-3)
    gas = Probe(reactor.load(TEN)).gas
    soda = loads.scrubber(101.6 / 3600 / 0.070906, 0.0, gas)
    assert [soda[k] for k in ("soda", "liquor", "heat")] == pytest.approx([114.6, 573, 39.8e3], rel=3e-3)


def test_scrubber_peak_over_normal_is_about_one_over_the_slip():
    # Source: hand case: peak over normal 100 at 1 % slip (memory). Evidence: worked; HCl takes a little
    # soda too.
    found = sized(["lamp.power"], ["chlorine_slip=1 %"])
    one = loads.loads(found.case, found.probe, None, None)
    assert one["scrubber_peak"]["soda"] / one["scrubber_normal"]["soda"] == pytest.approx(100, rel=0.1)


def test_a_flash_leaves_vapour_and_liquid_in_equilibrium(ten):
    import numpy as np

    from reactor.hazards.dewpoint import vapour_pressure

    gas, moles = ten.gas, np.zeros(len(ten.gas.species))
    moles[gas.index["CH4"]], moles[gas.index["CCl4"]] = 1.0, 1.0
    liquid = loads.flash(moles, 298.15, 2e5, gas)
    x = liquid / liquid.sum()
    y = (moles - liquid) / (moles - liquid).sum()
    i = gas.index["CCl4"]
    # Kind: limit, Raoult's law.
    assert y[i] * 2e5 == pytest.approx(x[i] * vapour_pressure("CCl4", 298.15), rel=1e-6)


@pytest.mark.parametrize(
    ("diluent", "cap", "stages_due"), [(0, 0.10, 14), (5, 0.10, 5), (10, 0.10, 3), (0, 0.15, 9), (2, 0.15, 5)]
)
def test_the_number_of_stages_follows_the_formula(diluent, cap, stages_due):
    # Source: hand case of deep chlorination, Cl2:CH4 = 3.3 (computed by the same formula). Evidence:
    # worked. At diluent 2 and 10 % the formula gives 7.04: the hand case rounds it to 7, the cap asks for
    # 8.
    assert stages.count(1 + diluent, 3.3, cap)[0] == stages_due


def test_a_train_of_stages_conserves_atoms_and_keeps_below_the_cap():
    case = cases.changed(reactor.load(TEN), ["feed.methane.flow=60 Nm3/h"])
    gas_feed, chlorine = stages.split_feed(case)
    rows, last = stages.train(
        case, gas_feed, chlorine, *stages.count(sum(gas_feed.moles.values()), 0.398, 0.2), 323.15
    )
    given = sum(gas_feed.moles.values()) + sum(chlorine.moles.values())
    assert last.profile.outlet.total == pytest.approx(given, rel=1e-3)
    assert len(rows) > 1
    assert all(row["chlorine_share"] < 0.21 for row in rows)
    assert sum(row["chlorine"] for row in rows) == pytest.approx(101.6, rel=1e-3)


def test_the_pipe_of_six_inches_schedule_40_is_named():
    # Source: ASME B36.10 as held by fluids: NPS 6 schedule 40, 168.3 x 7.11 mm. Evidence: transcription
    # check.
    one = tubes.named_pipe(0.154)
    assert (one["dn"], one["nps"], one["schedule"]) == (150, 6, "40")
    assert one["outside"] == pytest.approx(0.1683, abs=1e-4)
    assert tubes.named_pipe(0.1) is None or abs(tubes.named_pipe(0.1)["inside"] - 0.1) < 2e-3


def test_parallel_tubes_hardly_add_conductance_and_series_passes_do(ten):
    # Source: hand finding: UA 28 W/K in parallel, 79 W/K with four passes in series (computed by films).
    # Evidence: worked.
    rows = {row["passes"]: row["conductance"] for row in tubes.series(ten.case, ten)}
    assert rows[4] / rows[1] == pytest.approx(79 / 28, rel=0.15)
    few, many = (tubes.exchange(ten.case, ten, n)[0] for n in (4, 16))
    assert many < 2.5 * few


def test_the_binding_count_is_the_largest_and_is_named(ten):
    one = tubes.tubes(ten.case, ten, None, None)
    known = [c for c in one["counts"] if c["asked"] and c["count"] is not None]
    assert one["binding_count"] == max(c["count"] for c in known)
    cold = cases.changed(ten.case, ["limits.hottest=120 degC"])
    assert tubes.tubes(cold, ten, None, None)["binding"] == "heat"


# The recycle


def test_a_recycle_closes_on_atoms_and_piles_up_the_inert_as_the_balance_says():
    # Kind: limit. All nitrogen that comes in leaves with the purge: n_purge = n_fresh.
    one = loop.close(reactor.load(CASES / "sandpiper.toml"))
    record = loop.record(one)
    assert max(record["closure"].values()) < 1e-9
    assert record["gap"] < 1e-8
    flows = {s["name"]: s["composition"] for s in record["streams"]}
    assert flows["purge"]["N2"] == pytest.approx(flows["fresh gas"]["N2"], rel=1e-6)
    assert flows["reactor inlet"]["CH4"] + flows["reactor inlet"].get("C2H6", 0) == pytest.approx(
        0.99 * 324 * 0.0123931, rel=1e-4
    )


def test_nitrogen_in_the_loop_costs_the_methane_of_the_hand_case():
    # Source: hand case, 1 % N2 in the fresh gas: 15 % N2 in the loop, purge 1.7 Nm3/h, 5.7 % of the methane
    # lost (memory). Evidence: worked; within 10 %.
    case = cases.changed(reactor.load(CASES / "sandpiper.toml"), ["recycle.purge=0.54 %"])
    record = loop.record(loop.close(case))
    assert record["build_up"]["N2"]["loop"] == pytest.approx(0.15, rel=0.05)
    assert record["alkane_lost_in_purge"] == pytest.approx(0.057, rel=0.1)
    purge = next(s for s in record["streams"] if s["name"] == "purge")
    assert purge["normal_volume"] == pytest.approx(1.7, rel=0.15)


def test_an_inert_without_a_way_out_is_refused():
    case = cases.changed(reactor.load(CASES / "sandpiper.toml"), ["recycle.purge=0 %"])
    with pytest.raises(CaseError, match="no way out"):
        loop.close(case)


# Tank, chain, tube


def test_one_tank_in_series_is_the_stirred_tank(rated):
    single = rated("dunnock_tank")
    case = reactor.load(CASES / "dunnock_tank.toml", ["vessel.kind=tanks in series", "vessel.tanks=1"])
    chain = Probe(case)
    assert chain["chlorine_slip"] == pytest.approx(single["chlorine_slip"], rel=1e-9)
    assert chain["poly_share_mol"] == pytest.approx(single["poly_share_mol"], rel=1e-9)


def test_a_chain_of_tanks_lies_between_the_tank_and_the_tube():
    case = reactor.load(CASES / "dunnock_tube.toml")
    slips = [Probe(side_by_side.as_tanks(case, n))["chlorine_slip"] for n in (1, 3)]
    assert slips[0] > slips[1] > Probe(case)["chlorine_slip"]


def test_a_tank_and_its_tube_have_the_same_gas_volume():
    case = reactor.load(CASES / "dunnock_tank.toml")
    tube = side_by_side.as_tube(case)
    assert tube.vessel.kind == "plug flow"
    one, other = (sum(lamp.power * lamp.number for lamp in c.lamp) * c.vessel.parallel for c in (case, tube))
    assert one == pytest.approx(other, rel=1e-9)
    assert Probe(tube).profile.volume == pytest.approx(Probe(case).profile.volume, rel=1e-6)


def bare(node, name=""):
    """Yield the names of numbers that stand without a unit."""
    if isinstance(node, dict):
        if set(node) != {"value", "unit"}:
            for key, value in node.items():
                yield from bare(value, f"{name}.{key}") if key != "rules" else ()
    elif isinstance(node, list):
        for value in node:
            yield from bare(value, name)
    elif isinstance(node, int | float) and not isinstance(node, bool):
        yield name


def test_every_number_of_the_block_has_a_unit_and_every_table_prints():
    from reactor.report.sizing import render
    from reactor.sizing import PARTS

    case = reactor.load(TEN)
    result = run(case, ["lamp.power"], goals.read(["chlorine_slip=1.5 %"], "--for"), parts=PARTS)
    assert set(result.sizing) == {"found", *PARTS}
    assert list(bare(result.sizing)) == []
    page = render(from_json(result.to_json()))
    assert page.isascii()
    for heading in (
        "SIZED",
        "LAMP POWER",
        "HOW MANY TUBES",
        "CHLORINE IN STAGES",
        "WHICH LAMP",
        "AGEING",
        "CAUTIONS",
    ):
        assert heading in page
    assert result.sizing["loads"]["absorber"]["acid"]["unit"] == "kg/h"


# The command


@pytest.fixture
def command(monkeypatch, capsys):
    """Return a function: words of a `reactor size` command line -> (exit code, output, errors)."""

    def call(*words):
        from reactor.cli import main

        monkeypatch.setattr("sys.argv", ["reactor", "size", *words])
        with pytest.raises(SystemExit) as stop:
            main()
        out, err = capsys.readouterr()
        return stop.value.code or 0, out, err

    return call


def test_a_bare_size_reads_targets_and_limits_from_the_case(command, tmp_path):
    file = tmp_path / "sized.toml"
    code, out, _ = command(str(TEN), "--write", str(file), "--show", "trade")
    assert code == 0
    assert "keeps temperature_hottest<250 degC" in out
    assert "LAMPS OR STEEL" in out
    assert all(len(line) <= 80 for line in out.splitlines())
    assert reactor.rate(reactor.load(file))["chlorine_slip"] == pytest.approx(0.01, rel=1e-6)


@pytest.mark.parametrize(
    ("words", "code", "said"),
    [
        (["--find", "lamp.power", "--for", "chlorine_slip=1 %", "--between", "10 W..100 W"], 1, "nearest is lamp.power"),
        (["--find", "lamp.power", "--for", "chlorine_slip=5 %", "--keep", "chlorine_slip<2 %"], 1, "contradict"),
        (["--set", "feed.methane.flow=0 kg/h"], 2, "more than 0"),
        (["--find", "lamp.power", "--for", "slip=1 %"], 2, "did you mean 'chlorine_slip'"),
        (["--show", "everything"], 2, "known here"),
        (["--between", "1 W"], 2, "write both ends"),
        (["--cap", "5 K"], 2, "--cap"),
    ],
)
def test_what_cannot_be_sized_ends_with_its_code_and_its_sentence(words, code, said, command):
    found, out, err = command(str(TEN), *words)
    assert found == code
    assert said in " ".join((out + err).split())


def test_an_input_that_does_not_act_is_named_as_the_reason():
    found = sized(["meters.chlorine"], ["chlorine_slip=1 %"])
    assert not found.record["solved"]
    assert "does not depend" in found.record["limited_by"]


@pytest.mark.parametrize("key", ["lamp.2.power", "inject.share", "recycle.purge"])
def test_an_input_that_the_case_does_not_have_is_refused(key):
    with pytest.raises(CaseError):
        sized([key], ["chlorine_slip=1 %"])


def test_an_input_that_is_nought_today_is_searched_on_a_straight_scale():
    found = sized(["sleeve.deposit"], ["chlorine_slip=4 %"])
    assert found.record["solved"]
    assert 0.3 < found.case.sleeve.deposit < 0.5

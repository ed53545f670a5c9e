"""Studies: what is varied, the file that survives, workers that die, resume, parts, claims, progress."""

import io
import math
import os
import random
import signal
import sqlite3
import subprocess
import sys
import time
from pathlib import Path

import pytest
import standin

from reactor import study
from reactor.case import load
from reactor.errors import CaseError, ReactorError
from reactor.report.progress import Progress
from reactor.study import sweeps
from reactor.study.file import writing
from reactor.study.points import Job, evaluate
from reactor.study.run import Clock, Tally
from reactor.study.sampling import Sample
from reactor.study.scenarios import from_csv
from reactor.study.variation import Grid, Point, axis

HERE = Path(__file__).parent
CASE = HERE.parent / "cases" / "fulmar.toml"


@pytest.fixture(scope="module")
def case():
    return load(CASE)


def swept(case, path, vary, jobs=0, **more):
    """Sweep the stand-in and return the tally."""
    crew = study.Crew(jobs, more.pop("scheduler", None), more.pop("budget", 60.0))
    points = more.pop("points", None) or study.design(case, vary)
    return study.sweep_file(case, points, path, crew, evaluator="standin", columns=standin.COLUMNS, **more)


def rows(path):
    """Return all that a run must reproduce: every column but the time taken."""
    tables = study.read(path)
    names = [name for name in tables.points if name != "seconds"]
    return [
        (*(str(tables.points[name][i]) for name in names), str(tables.more[i])) for i in range(len(tables))
    ]


# what is varied


@pytest.mark.parametrize(
    ("text", "values"),
    [
        ("lamp.power=0.5,1,2 kW", ["0.5 kW", "1 kW", "2 kW"]),
        ("lamp.power=500 W, 1 kW", ["500 W", "1 kW"]),
        ("lamp.power=1..3 kW, 3", ["1 kW", "2 kW", "3 kW"]),
        ("lamp.power=1..3 kW/3", ["1 kW", "2 kW", "3 kW"]),
        ("lamp.power=10..1000 W, 3 log", ["10 W", "100 W", "1000 W"]),
        ("lamp.power=500 W..1 kW, 2", ["0.5 kW", "1 kW"]),
        ("feed.alkane.temperature=20 degC..40 degC, 3", ["20 degC", "30 degC", "40 degC"]),
        ("feed.alkane.temperature=300 K..310 K, 2", ["300 K", "310 K"]),
        ("feed.chlorine.ratio=5,10,20", ["5", "10", "20"]),
        ("cooling.mode=none,constant", ["none", "constant"]),
        ("lamp.kind=LED 365 nm,LED 385 nm", ["LED 365 nm", "LED 385 nm"]),
    ],
)
def test_lists_and_ranges_are_read_as_typed(text, values):
    assert list(axis(text).values) == values


def test_inputs_are_kept_in_si(case):
    found = [
        p.inputs
        for p in study.design(case, ["feed.chlorine.temperature=20,30 degC", "lamp.power=1,2 kW"]).points()
    ]
    assert found == [(293.15, 1000.0), (293.15, 2000.0), (303.15, 1000.0), (303.15, 2000.0)]


def test_the_ratio_of_the_feed_means_the_stream_that_brings_chlorine(case):
    assert axis("feed.ratio=5,10", case).key == "feed.chlorine.ratio"


@pytest.mark.parametrize(
    "text",
    [
        "lamp.power",
        "lamp.power=",
        "lamp.power=1,,2 kW",
        "lamp.power=1..2 kW,",
        "x=0..5, 3 log",
        "x=1..1, 3",
        "x=1..2, 1",
        "x=1 kW..2 m, 3",
        "x=1 kW, 2 m",
        "x=1..2 parsec",
    ],
)
def test_what_is_no_variation_is_refused_with_the_forms(text):
    with pytest.raises(CaseError):
        axis(text)


def test_a_grid_is_every_combination_and_a_zip_goes_through_together(case):
    vary = ["feed.ratio=5,10,20", "lamp.power=1,2,3 kW"]
    assert study.design(case, vary).size == 9
    zipped = study.design(case, vary, zipped=True)
    assert [p.inputs for p in zipped.points()] == [(5.0, 1000.0), (10.0, 2000.0), (20.0, 3000.0)]
    with pytest.raises(CaseError, match="equal length"):
        study.design(case, ["feed.ratio=5,10", "lamp.power=1,2,3 kW"], zipped=True)


@pytest.mark.parametrize("way", ["latin", "sobol"])
def test_a_sample_fills_the_ranges_evenly_and_the_seed_repeats_it(case, way):
    vary = ["feed.ratio=5..45", "lamp.power=10..1000 W, log"]
    first, again = (list(study.design(case, vary, sample=f"{way} 64", seed=7).points()) for _ in range(2))
    assert first == again
    assert first != list(study.design(case, vary, sample=f"{way} 64", seed=8).points())
    # limit: a stratified sample has half of its points on each side of the middle
    assert sum(p.inputs[0] < 25 for p in first) == 32
    assert sum(p.inputs[1] < 100 for p in first) == 32


def test_a_table_of_scenarios_gives_a_point_a_row(tmp_path, case):
    path = tmp_path / "s.csv"
    path.write_text("# remark\nlamp.power [kW],feed.ratio,cooling.mode\n1,5,none\n2,10,constant\n")
    found = [p for p in from_csv(path, case).points()]
    assert found[1] == Point(
        1, ("lamp.power=2 kW", "feed.chlorine.ratio=10", "cooling.mode=constant"), (2000.0, 10.0, "constant")
    )
    path.write_text("lamp.power [kW],feed.ratio\n1\n,5\n")
    with pytest.raises(CaseError) as error:
        from_csv(path, case)
    assert ":2:" in str(error.value)
    assert ":3:" in str(error.value)


# the file


def test_a_study_reads_back_with_units_and_definitions(tmp_path, case):
    path = tmp_path / "a.study"
    tally = swept(case, path, ["lamp.power=10..30 W, 3"])
    tables = study.read(path)
    assert (tally.finished, len(tables), tables.missing, tables.failed) == (3, 3, 0, [])
    assert tables.units == {
        "lamp.power": "W",
        "chlorine_slip": "1",
        "temperature_hottest": "K",
        "worst": "word",
    }
    assert tables.points["lamp.power"] == [10.0, 20.0, 30.0]
    assert tables.points["temperature_hottest"][0] == pytest.approx(300 + math.sqrt(10))
    assert tables.more[0]["share_mol"]["CH3Cl"] == pytest.approx(1 - tables.points["chlorine_slip"][0])
    assert {"case", "data", "code", "program"} <= set(tables.about["identity"])
    frame = tables.frame()
    assert frame.attrs["units"]["lamp.power"] == "W"
    assert len(frame) == 3


def test_a_failed_point_is_a_row_with_its_reason(tmp_path, case):
    path = tmp_path / "a.study"
    tally = swept(case, path, [], points=Grid((axis("x=-1,1,2"),)))
    assert (tally.finished, tally.failed) == (3, 1)
    assert study.read(path).failed == [(0, "below nought")]


def test_the_same_command_skips_what_is_done_and_another_study_is_refused(tmp_path, case):
    path = tmp_path / "a.study"
    swept(case, path, ["lamp.power=1..9 W, 9"])
    before = rows(path)
    assert swept(case, path, ["lamp.power=1..9 W, 9"]).skipped == 9
    assert rows(path) == before
    with pytest.raises(CaseError, match="design"):
        swept(case, path, ["lamp.power=1..9 W, 8"])
    with pytest.raises(CaseError, match="case"):
        swept(load(CASE, ["vessel.length=2 m", "lamp.lit_to=2 m"]), path, ["lamp.power=1..9 W, 9"])
    assert swept(case, path, ["lamp.power=1..9 W, 8"], fresh=True).skipped == 0


def test_failed_points_are_tried_again_when_asked(tmp_path, case):
    path, points = tmp_path / "a.study", Grid((axis("x=-1,1,2"),))
    swept(case, path, [], points=points)
    assert swept(case, path, [], points=points).skipped == 3
    tally = swept(case, path, [], points=points, retry=True)
    assert (tally.skipped, tally.finished, tally.failed) == (2, 1, 1)


def test_any_number_of_workers_gives_the_same_numbers(tmp_path, case):
    found = []
    for jobs in (0, 1, 3):
        path = tmp_path / f"{jobs}.study"
        swept(case, path, ["lamp.power=1..500 W, 200"], jobs=jobs)
        found.append(rows(path))
    assert found[0] == found[1] == found[2]


def test_workers_use_one_thread_of_arithmetic_each(tmp_path, monkeypatch):
    from reactor.study import crew

    seen = {}

    def start(words, **more):
        seen.update(more["env"])
        raise OSError

    monkeypatch.setattr(crew.subprocess, "Popen", start)
    local = crew.Local(Job("standin", None), 1)
    local.send([Point(0, (), (1.0,))])
    time.sleep(0.2)
    local.close()
    assert {seen[name] for name in crew.ONE_THREAD} == {"1"}


def test_a_reader_sees_finished_batches_while_the_study_runs(tmp_path, case):
    path, seen = tmp_path / "a.study", []
    swept(
        case,
        path,
        ["lamp.power=1..500 W, 50"],
        tell=lambda tally: seen.append((len(study.read(path)), tally.finished)),
    )
    assert len(seen) > 2
    assert all(read == done for read, done in seen)


def test_a_second_writer_is_refused(tmp_path, case):
    path = tmp_path / "a.study"
    swept(case, path, ["lamp.power=1..9 W, 3"])
    about = study.read(path).about
    with writing(path, about, standin.COLUMNS), pytest.raises(CaseError, match="another run"):
        swept(case, path, ["lamp.power=1..9 W, 3"])
    assert swept(case, path, ["lamp.power=1..9 W, 3"]).skipped == 3


def test_what_is_no_study_file_is_refused_with_a_sentence(tmp_path, case):
    path = tmp_path / "a.study"
    path.write_text("no database, but long enough to be taken for one by its size" * 20)
    for act in (study.read, lambda p: swept(case, p, ["lamp.power=1..9 W, 3"])):
        with pytest.raises(CaseError, match=r"study file"):
            act(path)
    with pytest.raises(CaseError, match="no such study file"):
        study.read(tmp_path / "none.study")


def test_a_full_disk_stops_with_a_sentence_and_keeps_what_was_written(tmp_path, case, monkeypatch):
    # SQLite's own limit on the size of a file stands for the disk: the same error, SQLITE_FULL.
    from reactor.study import file

    path, opened = tmp_path / "a.study", file._open

    def small(path):
        connection = opened(path)
        connection.execute("PRAGMA max_page_count=60")
        return connection

    monkeypatch.setattr(file, "_open", small)
    with pytest.raises(ReactorError, match=r"full.*run the same command again"):
        swept(case, path, ["lamp.power=1..500 W, 3000"])
    kept = len(study.read(path))
    assert 0 < kept < 3000
    monkeypatch.undo()
    tally = swept(case, path, ["lamp.power=1..500 W, 3000"])
    assert (tally.skipped, tally.finished) == (kept, 3000 - kept)
    swept(case, tmp_path / "b.study", ["lamp.power=1..500 W, 3000"])
    assert rows(path) == rows(tmp_path / "b.study")


def started(path, points, jobs=2, **environment):
    """Start a sweep of the stand-in as a program of its own."""
    known = os.pathsep.join([str(HERE.parent), str(HERE), os.environ.get("PYTHONPATH", "")])
    return subprocess.Popen(
        [sys.executable, str(HERE / "run_standin.py"), str(path), str(points), str(jobs)],
        env=os.environ | {"PYTHONPATH": known} | environment,
        stdout=subprocess.PIPE,
        text=True,
    )


def killed_at_random(tmp_path, case, times, points):
    """Kill a sweep at random moments, resume it to the end, and compare with an unbroken one."""
    path, rng = tmp_path / "a.study", random.Random(11)
    resumed = []
    for _ in range(times):
        run = started(path, points, STANDIN_PAUSE="0.002")
        while run.poll() is None and not (path.exists() and _count(path) > sum(resumed[-1:])):
            time.sleep(0.01)
        time.sleep(rng.uniform(0.0, 0.25))
        run.kill()
        run.communicate()
        resumed.append(_count(path))
    out, _ = started(path, points).communicate(timeout=120)
    skipped, finished, failed, _ = map(int, out.split())
    assert resumed == sorted(resumed)  # nothing that was there was lost
    assert 0 < resumed[0] < points
    assert (skipped, skipped + finished, failed) == (resumed[-1], points, 0)
    swept(case, tmp_path / "b.study", [f"lamp.power=1..3000 W, {points}"])
    assert rows(path) == rows(tmp_path / "b.study")


def _count(path):
    try:
        return len(study.read(path))
    except CaseError:  # the first transaction, which lays out the file, is not there yet
        return 0


def test_a_killed_sweep_goes_on_and_ends_as_an_unbroken_one(tmp_path, case):
    killed_at_random(tmp_path, case, 2, 600)


@pytest.mark.slow
def test_ten_kills_of_a_sweep_of_2000_points_lose_and_double_nothing(tmp_path, case):
    killed_at_random(tmp_path, case, 10, 2000)


def test_ctrl_c_keeps_the_finished_points(tmp_path, case):
    path = tmp_path / "a.study"

    def interrupt(tally):
        if tally.finished > 20:
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        swept(case, path, ["lamp.power=1..500 W, 200"], jobs=2, tell=interrupt)
    kept = len(study.read(path))
    assert 20 < kept < 200
    assert swept(case, path, ["lamp.power=1..500 W, 200"]).skipped == kept


# workers that die or hang


def test_a_point_that_ends_its_worker_fails_alone(tmp_path, case, monkeypatch):
    monkeypatch.setenv("STANDIN_DEADLY", "17")
    path = tmp_path / "a.study"
    tally = swept(case, path, ["lamp.power=1..40 W, 40"], jobs=2)
    assert (tally.finished, tally.failed) == (40, 1)
    ((number, reason),) = study.read(path).failed
    assert number == 17
    assert "signal 9" in reason


def test_a_point_beyond_its_budget_fails_alone(tmp_path, case):
    path = tmp_path / "a.study"
    tally = swept(case, path, [], points=Grid((axis("x=1,2,1e9,3"),)), jobs=1, budget=0.3)
    assert (tally.finished, tally.failed) == (4, 1)
    assert "budget of 0.3 s" in study.read(path).failed[0][1]


def test_a_fault_of_the_program_is_a_reason_too(case):
    row = evaluate(Job("standin", None), [Point(0, (), ())])[0]
    assert (row.state, row.reason.split(":")[:2]) == ("failed", ["fault of the program", " IndexError"])


# array jobs


def test_parts_of_an_array_job_merge_into_the_whole(tmp_path, case):
    vary = ["lamp.power=1..50 W, 50"]
    parts = []
    for place in (1, 2, 3):
        parts.append(tmp_path / f"{place}.study")
        tally = swept(case, parts[-1], vary, part=f"{place}/3")
        assert tally.finished == len(range(place - 1, 50, 3))
    whole, merged = tmp_path / "whole.study", tmp_path / "merged.study"
    swept(case, whole, vary)
    assert study.merge(merged, parts[:2]).finished == 34
    assert study.read(merged).missing == 16
    assert study.merge(merged, parts[1:]).finished == 50  # a part that comes twice is kept once
    assert rows(merged) == rows(whole)
    swept(case, tmp_path / "other.study", ["lamp.power=1..51 W, 50"])
    with pytest.raises(CaseError, match="another study"):
        study.merge(merged, [parts[0], tmp_path / "other.study"])


@pytest.mark.parametrize("text", ["0/3", "4/3", "3", "a/b", "-1/3"])
def test_a_part_that_is_none_is_refused(text):
    with pytest.raises(CaseError, match="3/40"):
        sweeps.part_of(text)


# claims


def test_claims_name_the_points_that_break_them(tmp_path, case):
    path = tmp_path / "a.study"
    swept(case, path, ["lamp.power=100..1000 W, 10"])
    slips = study.read(path).points["chlorine_slip"]
    limit = sorted(slips)[5]
    found = study.check(
        path, [study.claim(f"chlorine_slip<{limit!r}"), study.claim("temperature_hottest<100 degC")]
    )
    assert [number for _, number in found.broken] == [n for n, slip in enumerate(slips) if not slip < limit]
    assert study.check(path, [study.claim("share_mol.CH3Cl>0")]).kept
    assert study.check(path, [], "caution").kept


@pytest.mark.parametrize(
    "text",
    [
        "slip<2 %",
        "chlorine_slip",
        "chlorine_slip<2 K",
        "temperature_hottest<150",
        "share_mol<5 %",
        "mixtures<1",
        "pressure_drop<1 kg",
    ],
)
def test_claims_that_make_no_sense_are_refused(text):
    with pytest.raises(CaseError):
        study.claim(text)


def test_claims_hold_for_a_rating_too(rated):
    results = rated("fulmar").results
    assert not study.broken([study.claim("chlorine_slip<2 %"), study.claim("share_mol.C2H5Cl>90 %")], results)
    assert study.broken([study.claim("chlorine_slip<0.1 %")], results)


# progress


def test_a_bar_shows_time_left_and_failures_on_a_terminal():
    clock = [0.0]
    shown = io.StringIO()
    progress = Progress(shown, True, Clock(lambda: clock[0]), lambda: clock[0])
    tally = Tally(100)
    for _ in range(5):
        clock[0] += 1.0
        tally.finished += 10
        tally.failed += 1
        progress(tally)
    assert "50 of 100, 5 failed, about 5 s left" in shown.getvalue()


def test_a_log_gets_one_line_a_minute_and_a_short_run_none():
    clock = [0.0]
    shown = io.StringIO()
    progress = Progress(shown, False, Clock(lambda: clock[0]), lambda: clock[0])
    tally = Tally(1000)
    for _ in range(50):
        clock[0] += 1.0
        tally.finished += 1
        progress(tally)
    assert shown.getvalue() == ""
    for _ in range(150):
        clock[0] += 1.0
        tally.finished += 1
        progress(tally)
    progress.end(tally)
    assert len(shown.getvalue().splitlines()) == 3


# the real rating


def test_a_sweep_rates_as_a_single_rating_does_and_a_rerun_is_the_same(tmp_path, case, rated):
    frame = study.sweep(case, {"lamp.power": ["50 W"], "feed.ratio": [6]}, jobs=0, out=tmp_path / "a.study")
    result = rated("fulmar")
    for name in ("chlorine_slip", "temperature_hottest", "poly_share_mol"):
        assert frame[name].iloc[0] == result[name]
        assert frame.attrs["units"][name] == result.results[name]["unit"]
    again = study.rerun(tmp_path / "a.study", 0)
    assert again.same
    assert again.identity == []


def test_a_rerun_says_what_differs(tmp_path, case):
    path = tmp_path / "a.study"
    swept(case, path, ["lamp.power=1..9 W, 3"])
    connection = sqlite3.connect(path)
    connection.execute("UPDATE points SET chlorine_slip = 0.5 WHERE number = 1")
    connection.commit()
    connection.close()
    again = study.rerun(path, 1)
    assert not again.same
    assert [(name, old) for name, _, old, _ in again.numbers] == [("chlorine_slip", 0.5)]
    assert study.rerun(path, 2).same
    with pytest.raises(CaseError, match="no point 9"):
        study.rerun(path, 9)


def test_a_frame_of_points_goes_in_with_its_units(case):
    import pandas

    frame = pandas.DataFrame({"lamp.power": [10.0, 20.0], "feed.ratio": [6, 7]})
    frame.attrs["units"] = {"lamp.power": "W"}
    found = list(sweeps._frame(frame, case).points())
    assert found[1].overrides == ("lamp.power=20.0 W", "feed.chlorine.ratio=7")
    assert found[1].inputs == (20.0, 7.0)


def memory(tmp_path, points):
    out, _ = started(tmp_path / f"{points}.study", points).communicate(timeout=300)
    return int(out.split()[-1])


@pytest.mark.slow
def test_memory_stays_flat_from_1000_to_100000_points(tmp_path):
    few, many = memory(tmp_path, 1000), memory(tmp_path, 100_000)
    assert many < 1.15 * few


def test_memory_stays_flat_from_1000_to_10000_points(tmp_path):
    few, many = memory(tmp_path, 1000), memory(tmp_path, 10_000)
    assert many < 1.15 * few


def test_a_sample_is_no_grid():
    with pytest.raises(CaseError, match="range"):
        Sample((axis("lamp.power=1,2 kW"),), "latin", 10)


@pytest.fixture(autouse=True)
def quiet_interrupts():
    """Leave the handling of Ctrl-C as it was."""
    before = signal.getsignal(signal.SIGINT)
    yield
    signal.signal(signal.SIGINT, before)

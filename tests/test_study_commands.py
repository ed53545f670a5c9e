"""Studies as a user meets them: commands, what they print where, exit codes."""

import csv
import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
CASE = str(ROOT / "cases" / "fulmar.toml")
POINTS = ["--vary", "lamp.power=30,60 W", "--vary", "feed.ratio=6,10"]
FASTER = {"PYTHONPATH": os.pathsep.join([str(ROOT), os.environ.get("PYTHONPATH", "")])}


def reactor(folder, *words):
    """Run the command line and return exit code, output, errors."""
    done = subprocess.run(
        [sys.executable, "-m", "reactor", *words],
        cwd=folder,
        env=os.environ | FASTER,
        capture_output=True,
        text=True,
    )
    return done.returncode, done.stdout, done.stderr


@pytest.fixture(scope="module")
def swept(tmp_path_factory):
    folder = tmp_path_factory.mktemp("sweep")
    return folder, reactor(
        folder, "sweep", CASE, *POINTS, "--out", "a.study", "--jobs", "2", "--csv", "a.csv"
    )


def test_a_sweep_announces_its_size_on_standard_error_and_prints_what_it_found(swept):
    folder, (code, out, err) = swept
    assert code == 0
    assert err == "4 points (2 lamp.power x 2 feed.chlorine.ratio) into a.study\n"
    assert "4 points in a.study: 4 done, 0 failed, 0 missing" in out
    with open(folder / "a.csv", newline="") as file:
        rows = list(csv.DictReader(file))
    assert [float(row["lamp.power [W]"]) for row in rows] == [30.0, 30.0, 60.0, 60.0]
    assert all(0 < float(row["chlorine_slip"]) < 1 for row in rows)


def test_the_same_command_goes_on_and_says_what_it_skips(swept):
    folder, _ = swept
    code, _, err = reactor(folder, "sweep", CASE, *POINTS, "--out", "a.study", "--jobs", "2")
    assert code == 0
    assert "skipping 4 of 4 done" in err


def test_claims_and_verdicts_make_a_sweep_a_check(swept):
    folder, _ = swept
    again = ("sweep", CASE, *POINTS, "--out", "a.study")
    assert reactor(folder, *again, "--assert", "chlorine_slip<50 %")[0] == 0
    code, out, _ = reactor(folder, *again, "--assert", "chlorine_slip<0.01 %")
    assert (code, out.count("does not hold at point")) == (1, 4)
    assert reactor(folder, *again, "--fail-on", "caution")[0] == 1
    code, _, err = reactor(folder, *again, "--assert", "slip<1 %")
    assert code == 2
    assert "chlorine_slip" in err


def test_a_stored_point_comes_out_the_same_again(swept):
    folder, _ = swept
    code, out, _ = reactor(folder, "rerun", "a.study", "2")
    assert code == 0
    assert "the same to the last digit" in out


def test_a_failed_point_makes_a_partial_sweep(tmp_path):
    code, out, _ = reactor(
        tmp_path, "sweep", CASE, "--vary", "lamp.lit_to=3,5 m", "--out", "a.study", "--jobs", "1"
    )
    assert code == 6
    assert "1 x, first point 1: " in out
    assert "lies beyond the vessel" in out


def test_a_wrong_key_is_told_before_anything_runs(tmp_path):
    code, _, err = reactor(tmp_path, "sweep", CASE, "--vary", "lamp.pwer=1,2 kW")
    assert code == 2
    assert "did you mean 'power'" in err
    assert not list(tmp_path.iterdir())


def test_a_dry_run_only_says_the_size(tmp_path):
    code, out, _ = reactor(
        tmp_path, "sweep", CASE, "--vary", "lamp.power=1..9 W", "--sample", "latin 50", "--dry-run"
    )
    assert (code, out) == (0, "50 points (50 points, latin, seed 1, over lamp.power)\n")
    assert not list(tmp_path.iterdir())


def test_parts_merge_and_a_missing_part_is_told(tmp_path):
    for part in ("1/2", "2/2"):
        name = f"{part[0]}.study"
        assert reactor(tmp_path, "sweep", CASE, *POINTS, "--part", part, "--out", name, "--jobs", "1")[0] == 0
    code, out, _ = reactor(tmp_path, "merge", "all.study", "1.study")
    assert (code, "2 missing" in out) == (6, True)
    assert reactor(tmp_path, "merge", "all.study", "1.study", "2.study")[0] == 0


def test_ctrl_c_says_what_is_kept_and_the_next_run_goes_on(tmp_path):
    words = ["sweep", CASE, "--vary", "lamp.power=20..80 W, 1000", "--out", "a.study", "--jobs", "1"]
    code = (  # a job in the background of a shell inherits a deaf ear for Ctrl-C
        "import signal; signal.signal(signal.SIGINT, signal.default_int_handler)\n"
        "from reactor.cli import main; main()"
    )
    run = subprocess.Popen(
        [sys.executable, "-c", code, *words],
        cwd=tmp_path,
        env=os.environ | FASTER,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        start_new_session=True,
    )
    from reactor import study
    from reactor.errors import CaseError

    deadline = time.monotonic() + 120
    while time.monotonic() < deadline:
        try:
            if len(study.read(tmp_path / "a.study")) > 1:
                break
        except CaseError:
            pass
        time.sleep(0.05)
    os.killpg(run.pid, signal.SIGINT)
    _, err = run.communicate(timeout=60)
    assert run.returncode == 130
    assert "finished points are kept in a.study" in err
    assert 1 < len(study.read(tmp_path / "a.study")) < 1000


def test_a_rating_can_be_asserted(tmp_path):
    assert reactor(tmp_path, "rate", CASE, "--assert", "chlorine_slip<50 %")[0] == 0
    code, _, err = reactor(tmp_path, "rate", CASE, "--assert", "chlorine_slip<0.01 %")
    assert (code, err) == (1, "does not hold: chlorine_slip<0.01 %\n")


def test_a_band_prints_its_error_and_says_when_it_is_not_reached(tmp_path):
    code, out, _ = reactor(tmp_path, "band", CASE, "--most", "16", "--out", "a.study", "--json")
    assert code == 6
    found = json.loads(out)
    band = found["bands"]["chlorine_slip"]
    assert band["low"] < band["mid"] < band["high"]
    assert found["converged"]["reached"] is False
    code, out, _ = reactor(tmp_path, "band", CASE, "--most", "16", "--out", "a.study")
    assert "NOT REACHED: raise --most" in out


def test_a_map_is_drawn_and_its_boundaries_written(tmp_path):
    code, out, _ = reactor(
        tmp_path,
        *("window", CASE, "--x", "feed.ratio=4..12, log", "--y", "lamp.power=10..100 W, log"),
        *("--cells", "2", "--levels", "1", "--csv", "a.csv", "--figure", "a.png", "--out", "a.study"),
    )
    assert code == 0
    assert "allowed: " in out
    assert (tmp_path / "a.png").read_bytes()[:4] == b"\x89PNG"
    with open(tmp_path / "a.csv", newline="") as file:
        rows = list(csv.DictReader(file))
    assert {"boundary", "kind", "piece", "feed.chlorine.ratio", "lamp.power [W]"} == set(rows[0])
    assert {row["boundary"] for row in rows} >= {"chlorine slip"}


def test_a_front_is_printed_in_order_of_its_first_goal(tmp_path):
    code, out, _ = reactor(
        tmp_path,
        *("frontier", CASE, "--vary", "feed.ratio=6..20, log", "--vary", "lamp.power=20..200 W, log"),
        *("--goal", "min chlorine_slip", "--goal", "min lamp.power", "--points", "8", "--rounds", "1"),
        *("--out", "a.study"),
    )
    assert code == 0
    assert "chlorine_slip min" in out
    assert "12 points in a.study" in out

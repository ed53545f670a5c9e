"""The program as a user meets it: commands, options, errors, files, pipes, exit codes."""

import csv
import importlib.metadata
import io
import json
import os
import re
import shutil
import signal
import subprocess
import sys

import pytest
from conftest import CASES

from reactor import cli, rating
from reactor.cli import common
from reactor.errors import ConvergenceError, RangeError
from reactor.hazards.cautions import FIXED
from reactor.result import WORDS, Verdict

NAMES = sorted(path.stem for path in CASES.glob("*.toml"))
CASE = str(CASES / "lapwing.toml")


@pytest.fixture
def run(monkeypatch, capsys):
    """Return a function: words of the command line -> (exit code, standard output, standard error)."""

    def call(*words):
        monkeypatch.setattr(sys, "argv", ["reactor", *map(str, words)])
        code = 0
        try:
            cli.main()
        except SystemExit as stop:
            code = stop.code or 0
        out, err = capsys.readouterr()
        assert "Traceback" not in out + err
        return code, out, err

    return call


@pytest.fixture
def solved(monkeypatch, rated):
    """Let `rate` answer with the result that the session already has; with another one where it is given."""

    def use(result=None, error=None):
        def rate(case):
            if error:
                raise error
            return result or rated(case.name.removesuffix(".toml"))

        monkeypatch.setattr(rating, "rate", rate)

    use()
    return use


def shell(line, cwd=None, **environment):
    """Return what a shell line prints and its exit code; `reactor` runs with this Python."""
    line = line.replace("reactor ", f"{sys.executable} -m reactor ")
    return subprocess.run(
        ["bash", "-o", "pipefail", "-c", line],
        cwd=cwd,
        capture_output=True,
        timeout=120,
        env=os.environ | {"LC_ALL": "C.UTF-8"} | environment,
    )


# help and the commands that need no solver


@pytest.mark.parametrize("words", [[], ["--help"], ["-h"]])
def test_help_lists_every_command_in_full(words, run):
    _, out, err = run(*words)
    for name in ("new", "check", "rate", "sources"):
        assert re.search(rf"^  {name}\s+\S.*\.$", out + err, re.M), name
    assert "Exit codes" in out + err
    assert not re.search(r"^  .*\.\.\.$", out + err, re.M)


def test_every_command_explains_itself(run):
    for name in cli.cli.list_commands(None):
        code, out, _ = run(name, "--help")
        assert code == 0
        assert f"reactor {name}" in out


def test_the_version_is_that_of_the_package(run):
    assert run("--version")[:2] == (0, f"reactor, version {importlib.metadata.version('photochlorination-reactor')}\n")


@pytest.mark.parametrize("kind", ["methane", "ethane", "propane", "tank"])
def test_a_new_case_passes_its_check_and_is_rated_without_a_violation(
    kind, run, tmp_path, monkeypatch, request
):
    # counter-current cooling is solved many times over: without --run-slow two starts get a constant coolant
    quick = kind in ("ethane", "propane") and not request.config.getoption("--run-slow")
    monkeypatch.chdir(tmp_path)
    assert run("new", kind, "--from", kind)[0] == 0
    code, out, _ = run("check", f"{kind}.toml")
    assert code == 0
    assert "no fault found" in out
    code, out, err = run("rate", f"{kind}.toml", *(["--set", "cooling.mode=constant"] if quick else []))
    assert (code, err) == (0, "")
    assert all(len(line) <= 80 for line in out.splitlines())


def test_new_does_not_overwrite_unless_forced(run, tmp_path):
    path = tmp_path / "mine.toml"
    path.write_text("keep me")
    code, _, err = run("new", path)
    assert code == 2
    assert "exists already" in err
    assert path.read_text() == "keep me"
    assert run("new", path, "--force")[0] == 0
    assert path.read_text() != "keep me"


def test_new_prints_to_standard_output(run):
    code, out, _ = run("new", "-", "--from", "propane")
    assert code == 0
    assert "[feed.alkane]" in out


def test_sources_without_a_case_grade_all_data(run):
    code, out, _ = run("sources")
    assert code == 0
    assert "photons/cl2_cross_section.csv: 30 seen" in out
    assert "CH4 + Cl <=> CH3 + HCl" in out
    assert all(len(line) <= 80 for line in out.splitlines())


# what is typed wrong


def wrong_files(folder):
    (folder / "empty.toml").write_text("")
    (folder / "binary.toml").write_bytes(b"\x00\xff\xfe\x00")
    (folder / "nul.toml").write_bytes(b"a = \x00")
    (folder / "text.toml").write_text("this is no TOML")
    (folder / "typo.toml").write_text((CASES / "lapwing.toml").read_text().replace("parallel", "paralel"))


FILES = [
    (["nope.toml"], "nope.toml: cannot be read (No such file or directory); check the path"),
    (["."], ".: cannot be read (Is a directory); check the path"),
    (["empty.toml"], "empty.toml: case: this section is missing"),
    (["binary.toml"], "binary.toml: is not UTF-8 text (byte 1); save it as UTF-8"),
    (["nul.toml"], "nul.toml:1"),
    (["text.toml"], "text.toml:1"),
    (["typo.toml"], "typo.toml:27: vessel.paralel: unknown; did you mean 'parallel'?"),
]


@pytest.mark.parametrize("command", ["check", "rate", "sources"])
@pytest.mark.parametrize(("words", "said"), FILES, ids=[words[0] for words, _ in FILES])
def test_a_file_that_is_no_case_is_refused_in_one_line(command, words, said, run, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    wrong_files(tmp_path)
    code, out, err = run(command, *words)
    assert (code, out) == (2, "")
    first = err.splitlines()[0]
    assert first.startswith("reactor: " + said)


WORDING = [
    (["rat", CASE], "No such command 'rat'. Did you mean 'rate'?"),
    (["rate", CASE, "--jsn"], "No such option '--jsn'. (Did you mean one of: '--json', '--set'?)"),
    (["rate"], "Missing argument 'CASE'."),
    (["rate", CASE, "extra"], "Got unexpected extra argument (extra)"),
    (
        ["rate", CASE, "--fail-on", "sunday"],
        "Invalid value for '--fail-on': 'sunday' is not one of 'fail', 'caution'.",
    ),
    (["rate", CASE, "--save"], "Option '--save' requires an argument."),
    (["new", "x", "--from", "methan"], "--from methan: unknown; known here: methane, ethane, propane, tank"),
    (["new", "no/such/folder/x"], "no/such/folder/x.toml: cannot be written"),
    (["check", CASE, "--set", "vessel.lenght=2 m"], "--set: vessel.lenght: unknown; did you mean 'length'?"),
    (
        ["check", CASE, "--set", "vessel.length=2 kg"],
        '--set: vessel.length: "2 kg": kg is a mass, a length is due',
    ),
    (["check", CASE, "--set", "vessel.length=2"], "--set: vessel.length: 2: the unit is missing"),
    (["check", CASE, "--set", "vessel.pressure=2 bar"], '--set: vessel.pressure: "2 bar"'),
    (["check", CASE, "--set", "vessel.length"], "--set: vessel.length: write it like"),
    (
        ["check", CASE, "--set", "vessel.shell_material=carbon stel"],
        "--set: vessel.shell_material: \"carbon stel\": unknown; did you mean 'carbon steel'",
    ),
    (
        ["rate", CASE, "--set", "lamp.kind=LED 366 nm"],
        '--set: lamp.1.kind: "LED 366 nm": unknown; did you mean',
    ),
]


@pytest.mark.parametrize(
    ("words", "said"), WORDING, ids=[" ".join(words[:1] + words[2:]) for words, _ in WORDING]
)
def test_a_slip_of_the_pen_is_answered_in_one_line(words, said, run):
    code, out, err = run(*words)
    assert (code, out) == (2, "")
    assert len(err.splitlines()) == 1
    assert err.startswith("reactor: " + said)


def test_strict_names_every_default_and_refuses(run):
    code, out, err = run("rate", CASE, "--strict")
    assert (code, out) == (2, "")
    assert len(err.splitlines()) > 2
    assert all("strict reading takes no default" in line for line in err.splitlines())


# rating


@pytest.mark.parametrize("name", NAMES)
def test_no_report_comes_without_the_cautions(name, run, solved, tmp_path):
    path = CASES / f"{name}.toml"
    saved = tmp_path / "saved.json"
    for options in (
        [],
        ["--fail-on", "caution"],
        ["--save", saved],
        ["--json"],
        ["--save", "-"],
        ["--profile", "-"],
    ):
        _, out, err = run("rate", path, *options)
        said = " ".join((out + err).split())
        if options[-1:] == ["--json"]:
            assert json.loads(out)["cautions"][: len(FIXED)] == list(FIXED)
        else:
            assert all(" ".join(text.split()) in said.replace(" * ", " ") for text in FIXED)
        assert not re.search(r"\bsafe\b", out + err, re.I)
    assert json.loads(saved.read_text())["cautions"][: len(FIXED)] == list(FIXED)


@pytest.mark.parametrize("name", NAMES)
def test_a_report_is_plain_and_80_columns_wide(name, run, solved):
    _, out, err = run("rate", CASES / f"{name}.toml")
    assert err == ""
    assert out.isascii()
    assert max(map(len, out.splitlines())) <= 80
    assert not re.search(r"[ \t]$", out, re.M)
    assert not re.search(r"\bnan\b|\binf\b|None|\[\]|\{", out)


@pytest.mark.parametrize("name", NAMES)
def test_verdicts_use_the_five_words(name, rated):
    assert {v.word for v in rated(name).verdicts} <= set(WORDS)


def test_check_and_sources_hold_to_80_columns(run):
    for name in NAMES:
        for command in ("check", "sources"):
            code, out, _ = run(command, CASES / f"{name}.toml")
            assert code == 0
            assert max(map(len, out.splitlines())) <= 80
            assert not re.search(r"\bsafe\b", out, re.I)


def test_sources_of_a_case_list_the_weak_first(run):
    _, out, _ = run("sources", CASE)
    heads = re.findall(r"^([A-Z ]+) - ", out, re.M)
    assert heads == ["COMMON PRACTICE", "ESTIMATE", "MEMORY", "COMPUTED", "SEEN"]


def test_an_override_is_rated_printed_and_kept(run, tmp_path):
    saved = tmp_path / "r.json"
    code, out, _ = run(
        "rate", CASE, "--set", 'lamp.power="4 kW"', "--set", "case.title=Zebra", "--save", saved
    )
    assert code == 0
    assert out.startswith("Zebra")
    assert "changed on the command line: lamp.1.power = 4 kW (file: 2 kW)" in out
    record = json.loads(saved.read_text())
    assert {"key": "lamp.1.power", "old": "2 kW", "new": "4 kW"} in record["deviations"]
    assert record["results"]["light_electrical"] == {"value": 16000.0, "unit": "W"}


def test_json_parses_and_is_what_is_saved(run, solved, tmp_path):
    saved = tmp_path / "r.json"
    code, out, err = run("rate", CASE, "--json", "--save", saved)
    assert (code, err) == (0, "")
    assert json.loads(out) == json.loads(saved.read_text())
    assert json.loads(out)["results"]["chlorine_slip"]["unit"] == "1"


def test_a_profile_is_a_csv_with_units_in_its_header(run, solved, rated, tmp_path):
    path = tmp_path / "p.csv"
    assert run("rate", CASE, "--profile", path)[0] == 0
    raw = path.read_bytes()
    assert raw.count(b"\r\n") == raw.count(b"\n")
    header, *rows = csv.reader(io.StringIO(raw.decode(), newline=""))
    assert header[:3] == ["z [m]", "temperature [K]", "coolant [K]"]
    assert all(re.fullmatch(r"\S+ \[\S+\]", name) for name in header[:-1])
    assert header[-1] == "class"
    assert {len(row) for row in rows} == {len(header)}
    position = [float(row[0]) for row in rows]
    assert position[0] == 0
    assert position == sorted(position)
    assert position[-1] == pytest.approx(1.2)
    assert float(rows[-1][1]) == rated("lapwing")["temperature_outlet"]


def test_files_on_standard_output_send_the_report_to_standard_error(run, solved):
    _, out, err = run("rate", CASE, "--profile", "-")
    assert out.startswith("z [m],temperature [K]")
    assert "VERDICTS" in err
    _, out, err = run("rate", CASE, "--save", "-")
    assert json.loads(out)["title"].startswith("Lapwing")
    assert "VERDICTS" in err


def test_a_place_that_cannot_be_written_is_named(run, solved, tmp_path):
    code, _, err = run("rate", CASE, "--save", tmp_path / "no" / "r.json")
    assert code == 2
    assert "cannot be written (No such file or directory)" in err


# exit codes


def with_word(result, name, word):
    """Return a result whose verdict of that name has another word."""
    from dataclasses import replace

    verdicts = tuple(v._replace(word=word) if v.name == name else v for v in result.verdicts)
    return replace(result, verdicts=verdicts)


def test_exit_codes_of_a_result(run, solved, rated):
    assert run("rate", CASE)[0] == 0
    assert run("rate", CASE, "--fail-on", "caution")[0] == 1
    assert run("rate", CASES / "lapwing_ten.toml")[0] == 1
    solved(with_word(rated("lapwing_ten"), "closures", "FAIL"))
    assert run("rate", CASE)[0] == 5
    solved(with_word(rated("lapwing"), "data range", "OUT OF DATA RANGE"))
    assert run("rate", CASE)[0] == 0
    assert common.exit_code(with_word(rated("lapwing"), "data range", "OUT OF DATA RANGE"), True, "fail") == 4


ERRORS = [
    (RangeError("too hot"), 4),
    (ConvergenceError("stuck at z = 1 m"), 3),
    (KeyboardInterrupt(), 130),
    (ZeroDivisionError("oh"), 3),
]


@pytest.mark.parametrize(("error", "code"), ERRORS, ids=[type(error).__name__ for error, _ in ERRORS])
def test_exit_codes_of_an_error(error, code, run, solved):
    solved(error=error)
    found, out, err = run("rate", CASE)
    assert (found, out) == (code, "")
    assert err.strip().splitlines()[0].startswith("reactor: ") or code == 130
    assert str(error) in err


def test_a_time_budget_that_is_too_small_stops_the_solver(run):
    code, out, err = run("rate", CASE, "--set", "solver.seconds=1e-6")
    assert (code, out) == (3, "")
    assert "raise solver.seconds" in err


def test_a_word_from_the_list_of_verdicts_is_never_made_up():
    assert Verdict._fields == ("name", "word", "figure", "limit", "why")
    assert set(WORDS) == {"PASS", "CAUTION", "FAIL", "NOT ASSESSED", "OUT OF DATA RANGE"}


# in a shell


def test_the_module_runs_like_the_command():
    found = shell("reactor check " + CASE)
    assert found.returncode == 0
    assert b"no fault found" in found.stdout


@pytest.mark.parametrize("command", ["sources", "--help"])
def test_a_pipe_that_closes_early_is_no_error(command):
    found = shell(f"reactor {command} | head -c 1")
    assert found.returncode == 0
    assert found.stderr == b""


@pytest.mark.parametrize("encoding", ["latin-1", "ascii", "cp437"])
def test_an_old_locale_prints_every_title(encoding, tmp_path):
    text = (
        (CASES / "lapwing.toml")
        .read_text()
        .replace("Lapwing:", "M\N{LATIN SMALL LETTER O WITH DIAERESIS}we \u6f22:")
    )
    (tmp_path / "gull.toml").write_text(text, encoding="utf-8")
    found = shell(
        "reactor check gull.toml",
        tmp_path,
        LC_ALL="C",
        PYTHONIOENCODING=encoding,
        PYTHONUTF8="0",
        PYTHONCOERCECLOCALE="0",
    )
    assert (found.returncode, found.stderr) == (0, b"")
    assert b"no fault found" in found.stdout
    # where the encoding is plain ASCII the command-line package takes UTF-8 instead
    title = found.stdout.decode("utf-8" if encoding == "ascii" else encoding).splitlines()[0]
    assert title == ("Möwe 漢" if encoding == "ascii" else "Möwe ?") + ": chloromethane, 45:1"


CHILD = """
import signal, sys, time
signal.signal(signal.SIGINT, signal.default_int_handler)
import reactor.cli, reactor.rating
def slow(case):
    print("started", flush=True)
    time.sleep(60)
reactor.rating.rate = slow
sys.argv = ["reactor", "rate", {case!r}]
reactor.cli.main()
"""


def test_an_interrupt_ends_with_130_and_one_line():
    child = subprocess.Popen(
        [sys.executable, "-c", CHILD.format(case=CASE)],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    with child:
        assert child.stdout.readline() == "started\n"
        child.send_signal(signal.SIGINT)
        _, err = child.communicate(timeout=30)
    assert child.returncode == 130
    assert err.strip() == "reactor: interrupted"


SAVED = """
import sys
import reactor.cli, reactor.rating
from reactor.result import from_json
reactor.rating.rate = lambda case: from_json(open("saved.json").read())
sys.argv = ["reactor", "rate", {case!r}]
reactor.cli.main()
"""


@pytest.mark.skipif(not shutil.which("script"), reason="needs the command script to make a terminal")
def test_a_terminal_gets_bold_headings_unless_no_color_is_set(rated, tmp_path):
    (tmp_path / "saved.json").write_text(rated("lapwing").to_json())
    (tmp_path / "child.py").write_text(SAVED.format(case=CASE))
    line = f"script -qec '{sys.executable} child.py' /dev/null"
    bold, plain = shell(line, tmp_path, NO_COLOR=""), shell(line, tmp_path, NO_COLOR="1")
    assert b"\x1b[1mVERDICTS" in bold.stdout
    assert b"\x1b[1mCAUTION" in bold.stdout
    assert b"VERDICTS" in plain.stdout
    assert b"\x1b" not in plain.stdout

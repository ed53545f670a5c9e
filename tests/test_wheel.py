"""The built package: what is in it, and that it works away from the source tree."""

import os
import subprocess
import sys
import venv
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
QUICK = ["--set", "solver.rtol=1e-4"]


@pytest.fixture(scope="module")
def wheel(tmp_path_factory):
    """Return the wheel, built from this tree."""
    folder = tmp_path_factory.mktemp("wheel")
    words = ["wheel", "--quiet", "--no-deps", "--wheel-dir", str(folder), str(ROOT)]
    try:
        import hatchling  # noqa: F401 - then no network is needed

        words.insert(1, "--no-build-isolation")
    except ImportError:
        pass
    subprocess.run([sys.executable, "-m", "pip", *words], check=True, capture_output=True, timeout=300)
    (found,) = folder.glob("*.whl")
    return found


def shipped(name):
    """Return the paths of a folder of the tree, as they stand in the package."""
    return {f"reactor/{p.relative_to(ROOT).as_posix()}" for p in (ROOT / name).rglob("*") if p.is_file()}


def test_the_wheel_holds_program_data_cases_and_cautions(wheel):
    inside = set(zipfile.ZipFile(wheel).namelist())
    modules = {p.relative_to(ROOT).as_posix() for p in (ROOT / "reactor").rglob("*.py")}
    assert inside >= modules
    assert inside >= {name for name in shipped("data") if "__pycache__" not in name}
    assert inside >= {name for name in shipped("cases") if name.endswith(".toml")}
    assert "reactor/SAFETY.md" in inside
    assert not [name for name in inside if name.startswith("tests")]


def test_the_unpacked_wheel_rates_a_shipped_case_from_elsewhere(wheel, tmp_path):
    zipfile.ZipFile(wheel).extractall(tmp_path / "site")
    elsewhere = tmp_path / "elsewhere"
    elsewhere.mkdir()
    case = tmp_path / "site" / "reactor" / "cases" / "lapwing.toml"
    code = (
        "import reactor, sys; print(reactor.__file__, file=sys.stderr); from reactor.cli import main; main()"
    )
    found = subprocess.run(
        [sys.executable, "-c", code, "rate", str(case), *QUICK],
        cwd=elsewhere,
        text=True,
        capture_output=True,
        env=os.environ | {"PYTHONPATH": str(tmp_path / "site")},
        timeout=120,
    )
    assert found.returncode == 0, found.stderr
    assert str(tmp_path / "site") in found.stderr
    assert "PASS              closures" in found.stdout
    assert "CAUTIONS" in found.stdout


def test_the_wheel_installs_into_an_empty_environment_and_runs(wheel, tmp_path):
    venv.create(tmp_path / "empty", with_pip=True)
    scripts = tmp_path / "empty" / ("Scripts" if os.name == "nt" else "bin")
    clean = {k: v for k, v in os.environ.items() if k not in ("PYTHONPATH", "VIRTUAL_ENV")} | {
        "PIP_USER": "0"
    }
    subprocess.run(
        [scripts / "python", "-m", "pip", "install", "--quiet", wheel], check=True, env=clean, timeout=600
    )
    made = subprocess.run(
        [scripts / "reactor", "new", "mine", "--from", "tank"], cwd=tmp_path, env=clean, timeout=60
    )
    assert made.returncode == 0
    (case,) = (tmp_path / "empty").rglob("cases/lapwing.toml")
    for path in (case, tmp_path / "mine.toml"):
        found = subprocess.run(
            [scripts / "reactor", "rate", path],
            cwd=tmp_path,
            env=clean,
            capture_output=True,
            text=True,
            timeout=300,
        )
        assert found.returncode == 0, found.stderr
        assert "PASS              closures" in found.stdout

"""The rooms import upstream only, and the light commands stay light."""

import ast
import subprocess
import sys
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parent.parent / "reactor"
ROOMS = ["errors", "store", "curve", "units", "library", "case", "stream", "photons", "chemistry", "heat", "kernel",
         "models", "hazards", "result", "rating", "upsets", "sizing", "study", "report", "cli"]
MAY_IMPORT = {
    "errors": set(),
    "store": set(),
    "curve": set(),
    "units": {"errors"},
    "library": {"errors", "units"},
    "case": {"errors", "units", "library"},
    "stream": {"errors", "library"},
    "photons": {"errors", "curve", "units", "library"},
    "chemistry": {"errors", "store", "curve", "units", "library"},
    "heat": {"errors", "curve", "units", "library"},
    "kernel": {"errors", "store"},
    "models": {"errors", "curve", "library", "case", "stream", "photons", "chemistry", "heat", "kernel"},
    "hazards": {"errors", "curve", "units", "library", "stream", "chemistry"},
    "result": {"errors", "units", "library", "case", "stream"},
    "rating": {"errors", "store", "curve", "units", "library", "case", "stream", "photons", "chemistry", "heat", "models",
               "hazards", "result"},
    "report": {"errors", "units", "library", "result"},
}
FILES = sorted(p for p in PACKAGE.rglob("*.py") if p.name != "__main__.py" and p != PACKAGE / "__init__.py")


def room(path):
    return path.relative_to(PACKAGE).parts[0].removesuffix(".py")


def imported(path):
    """Yield the rooms of the package that a file imports, wherever in the file."""
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.ImportFrom) and (node.module or "").split(".")[0] == "reactor":
            inner = node.module.split(".")[1:]
            yield from [inner[0]] if inner else [alias.name for alias in node.names]
        elif isinstance(node, ast.Import):
            yield from (a.name.split(".")[1] for a in node.names if a.name.startswith("reactor."))


@pytest.mark.parametrize("path", FILES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_a_room_imports_only_rooms_above_it(path):
    own = room(path)
    assert own in ROOMS, f"{own} is no room of the map; add it to the order or move the file"
    allowed = MAY_IMPORT.get(own, set(ROOMS[: ROOMS.index(own)])) | {own}
    assert set(imported(path)) <= allowed


def test_the_order_of_the_rooms_has_no_circle():
    for own, above in MAY_IMPORT.items():
        assert all(ROOMS.index(other) < ROOMS.index(own) for other in above), own


def test_an_upward_import_would_be_caught(tmp_path):
    wrong = tmp_path / "errors.py"
    wrong.write_text("from reactor.kernel import rates\nimport reactor.models.profile\nfrom reactor import cli\n")
    assert set(imported(wrong)) == {"kernel", "models", "cli"}


def test_rating_a_case_whose_mechanism_is_known_loads_no_heavy_package():
    code = (
        "import sys\nfrom reactor.case import load\nfrom reactor.rating import rate\n"
        f"rate(load({str(PACKAGE.parent / 'cases' / 'lapwing_ten.toml')!r}))\n"
        "heavy = {'pandas', 'matplotlib', 'scipy', 'cantera', 'pint', 'ht', 'fluids', 'numpy.ma'} & set(sys.modules)\n"
        "print('HEAVY', sorted(heavy))\n"
    )
    outs = [subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout for _ in "12"]
    assert outs[-1].splitlines()[-1] == "HEAVY []"  # the first run may have met the mechanism for the first time


@pytest.mark.parametrize("words", [["--help"], ["rate", "--help"], ["--version"]])
def test_help_loads_no_heavy_package(words):
    code = (
        "import sys\nfrom reactor.cli import main\n"
        f"sys.argv = ['reactor', *{words!r}]\n"
        "try:\n    main()\nexcept SystemExit:\n    pass\n"
        "heavy = {'pandas', 'matplotlib', 'scipy', 'cantera', 'pint', 'numpy'} & set(sys.modules)\n"
        "print('HEAVY', sorted(heavy))\n"
    )
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
    assert out.splitlines()[-1] == "HEAVY []"

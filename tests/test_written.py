"""How the code is written: linter, type checker, docstrings with units, sizes, provenance on every data row."""

import ast
import re
import subprocess
import sys
from pathlib import Path

import pytest

from reactor import library

ROOT = Path(__file__).parent.parent
MODULES = sorted((ROOT / "reactor").rglob("*.py"))
TABLES = sorted((ROOT / "data").rglob("*.csv"))


@pytest.mark.parametrize("words", [["ruff", "check", "."], ["mypy"]], ids=["linter", "types"])
def test_checker_finds_nothing(words):
    found = subprocess.run([sys.executable, "-m", *words], cwd=ROOT, capture_output=True, text=True)
    assert found.returncode == 0, found.stdout + found.stderr


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(ROOT)))
def test_a_module_stays_small(path):
    assert len(path.read_text().splitlines()) <= 450
    if path.name == "__init__.py":
        assert len([line for line in path.read_text().splitlines() if line.strip()]) <= 40


def parameters(docstring):
    """Return the descriptions of the arguments in a numpy docstring, joined by argument."""
    block = re.search(r"\n\s*Parameters\n\s*-+\n(.*?)(?:\n\s*\n\s*[A-Z][a-z]+\n\s*-+|\Z)", docstring, re.S)
    return [] if not block else re.split(r"\n(?=\s*[\w, *]+ : )", block.group(1).rstrip())


NUMBERS = re.compile(r" : (float|array|float or array)")


@pytest.mark.parametrize("path", MODULES, ids=lambda p: str(p.relative_to(ROOT)))
def test_every_number_among_the_arguments_has_a_unit(path):
    for node in ast.walk(ast.parse(path.read_text())):
        if isinstance(node, ast.FunctionDef | ast.ClassDef):
            for entry in parameters(ast.get_docstring(node, clean=True) or ""):
                if NUMBERS.search(entry):
                    assert re.search(r"\[[^\]]+\]", entry), f"{node.name}: {entry!r} has no unit"


@pytest.mark.parametrize("path", TABLES, ids=lambda p: str(p.relative_to(ROOT)))
def test_every_data_row_has_a_known_source_and_status(path):
    table = library.read(path)
    for source, status in zip(table.text("source"), table.text("status"), strict=True):
        assert source in library.sources(), f"{source!r} is not in data/sources/"
        assert status in library.STATUS, status


def test_every_source_says_what_was_seen():
    for key, source in library.sources().items():
        assert {"title", "seen"} <= set(source), key
        assert source["seen"].split(":")[0] in ("original", "quoted", "memory", "computed"), key

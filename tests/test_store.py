"""The cache folder, versions read off file names, and curves: small tools that every room leans on."""

import importlib.metadata
import os

import numpy as np
import pytest

from reactor import curve, store
from reactor.hazards.exotherm import crossing

KEY = "ab" * 32


def test_what_is_kept_is_found_under_its_own_key_alone(tmp_path, monkeypatch):
    monkeypatch.setenv("REACTOR_CACHE", str(tmp_path))
    store.keep("thing", KEY, b"some bytes")
    assert store.find("thing", KEY) == b"some bytes"
    assert store.find("other", KEY) is None
    assert store.find("thing", KEY[:32] + "cd" * 16) is None  # the same file name


def test_a_cache_folder_that_cannot_be_used_is_no_reason_to_stop(monkeypatch):
    monkeypatch.setenv("REACTOR_CACHE", os.devnull + "/none")
    store.keep("thing", KEY, b"some bytes")
    assert store.find("thing", KEY) is None


@pytest.mark.parametrize("package", ["photochlorination-reactor", "numpy", "scipy", "cantera"])
def test_a_version_is_that_which_the_installer_recorded(package):
    assert store.version(package) == importlib.metadata.version(package)


def test_a_package_that_is_not_installed_has_no_version():
    with pytest.raises(importlib.metadata.PackageNotFoundError):
        store.version("no-such-package")


@pytest.mark.parametrize("points", [4, 5, 6, 41, 2000])
def test_the_slopes_of_a_spline_are_those_of_scipy(points):
    # Source: scipy.interpolate.CubicSpline, not-a-knot (seen).
    from scipy.interpolate import CubicSpline

    value = np.random.default_rng(points).normal(size=points)
    grid = 0.25 * np.arange(points)  # exact in binary
    expected = CubicSpline(grid, value)(grid, 1)
    assert curve.spline_slopes(value, 0.25) == pytest.approx(expected, rel=1e-12, abs=1e-12)


def test_too_few_points_make_no_spline():
    with pytest.raises(ValueError, match="four values"):
        curve.spline_slopes(np.ones(3), 1.0)


@pytest.mark.parametrize(("function", "low", "high", "place"), [
    (lambda x: np.exp(x) - 5.0, -30.0, 30.0, np.log(5.0)),
    (lambda x: (x - 0.25) ** 9, -1.0, 2.0, 0.25),
    (lambda x: np.arctan(x - 3.0), -1000.0, 500.0, 3.0),
    (lambda x: 1.0 - x, 0.0, 1.0, 1.0),
])
def test_a_crossing_is_found_within_what_is_asked(function, low, high, place):
    # Kind: limit (roots known in closed form).
    asked = []
    assert crossing(lambda x: asked.append(x) or function(x), low, high, 1e-6) == pytest.approx(place, abs=1e-6)
    assert len(asked) < 100

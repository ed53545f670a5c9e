"""The compiled kernel as a machine: equal digits whatever the company, dropped cases, caches, missing libraries."""

import os
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
import reference_kernel.plugflow
import sanitize_kernel
import wide_cases
from fuzz_kernel import fuzz
from wide_cases import CL2, GAS, RATES, K, beam, job, moles

from reactor.curve import constant
from reactor.errors import ConvergenceError, ReactorError
from reactor.kernel import build, native, plan, plugflow
from reactor.kernel.pack import Packed

approx = pytest.approx
ROOT = Path(__file__).parent.parent
OWN = RATES.plan(CL2, GAS.start)
SEEDS = range(60)


@pytest.fixture(scope="module")
def jobs():
    return [job(seed) for seed in SEEDS]


def marched(jobs, wide, stations=1):
    """Return what the kernel itself brings back: results, counts, raw rows of the stations."""
    packed = Packed(OWN)
    for one in jobs:
        packed.tube(*one)
    return native.march(OWN, packed, stations, wide)


def digits(path):
    """Return a path as bytes, or the reason as it is."""
    if isinstance(path, str):
        return path
    return path.state.tobytes(), path.totals.tobytes(), path.z.tobytes(), path.hottest, path.exhausted, path.steps


# --- equal digits ---


def test_one_case_alone_has_the_digits_it_has_in_any_company(jobs):
    # Limit: no lane looks at its neighbour, and every build does the same operations in the same order.
    alone = [digits(plugflow.integrate(*one, between=0)) for one in jobs]
    order = np.random.default_rng(1).permutation(len(jobs))
    for threads in (1, 2, 3):
        found = plugflow.integrate_many([jobs[i] for i in order], between=0, threads=threads)
        assert [digits(path) for path in found] == [alone[i] for i in order]


@pytest.mark.parametrize("wide", [2, 4, 8])
def test_one_or_several_lanes_give_equal_digits(jobs, wide):
    if wide > native.library().reactor_kernel_lanes():
        pytest.skip(f"this processor has no registers for {wide} lanes")
    results, counts, rows = marched(jobs, wide)
    expected = marched(jobs, 1)
    assert np.array_equal(results, expected[0])
    assert np.array_equal(counts, expected[1])
    assert all(np.array_equal(a, b) for a, b in zip(rows, expected[2], strict=True))


def test_the_cut_into_chunks_does_not_move_a_digit(jobs, monkeypatch):
    usual = [digits(path) for path in plugflow.stream(iter(jobs))]
    monkeypatch.setattr(plugflow, "CHUNK", 7)
    assert [digits(path) for path in plugflow.stream(iter(jobs))] == usual


def test_a_solve_leaves_its_inputs_as_they_were(jobs):
    # A prototype divided its slopes in place and so removed all reaction without a word.
    before = [(one.n.copy(), one.tube.sections[0].beam.entering.copy()) for one in jobs]
    tables = GAS.tables.A.copy()
    found = plugflow.integrate_many(jobs)
    assert all(np.array_equal(one.n, n) and np.array_equal(one.tube.sections[0].beam.entering, entering)
               for one, (n, entering) in zip(jobs, before, strict=True))
    assert np.array_equal(GAS.tables.A, tables)
    used = [path.state[-1, CL2] < 0.99 * one.n[CL2] for one, path in zip(jobs, found, strict=True)]
    assert np.mean(used) > 0.5


# --- against its own rates, and the other implementation ---


def fourth_order(function, y, along):
    """Return the derivative of a vector function along a step, by differences of fourth order, and its rounding."""
    f = [function(y + m * along) for m in (-2, -1, 1, 2)]
    return (f[0] - 8 * f[1] + 8 * f[2] - f[3]) / 12, 1e-12 * np.abs(f).max(axis=0)


def test_derivatives_of_the_rates_are_those_by_differences_of_fourth_order():
    # Limit: 1e-6 of the largest entry; rates are of third order in c at most, but for fall-off.
    rng = np.random.default_rng(11)
    for _ in range(40):
        T, c = rng.uniform(250, 1500), rng.dirichlet(np.full(K, 0.3)) * 10 ** rng.uniform(0, 2)
        _, by_c, by_T, by_J, _ = RATES.derivatives(c, T, 5e-3, 0.7)
        for k in (*rng.integers(0, K, 3), CL2):
            step = 1e-3 * c.sum()
            slope, rounding = fourth_order(lambda c, T=T: RATES.production(c, T, 5e-3, 0.7), c, step * np.eye(K)[k])
            assert np.all(np.abs(slope / step - by_c[:, k]) <= 1e-6 * np.abs(by_c[:, k]).max() + rounding / step)
        slope, rounding = fourth_order(lambda T, c=c: RATES.production(c, T, 5e-3, 0.7), T, 0.1)
        assert np.all(np.abs(slope / 0.1 - by_T) <= 1e-6 * np.abs(by_T).max() + rounding / 0.1)
        slope, rounding = fourth_order(lambda J, c=c, T=T: RATES.production(c, T, J, 0.7), 5e-3, 1e-3)
        assert np.all(np.abs(slope / 1e-3 - by_J) <= 1e-6 * np.abs(by_J).max() + rounding / 1e-3)


def test_the_matrix_of_a_tube_is_that_by_differences_of_fourth_order():
    # Limit: 1e-6 of the largest entry of each row, light, wall, coolant and pressure included.
    for seed in (1, 4, 9):
        one = job(seed)
        path = plugflow.integrate(*one)
        balance = plugflow.Balance(one.tube, one.tube.sections[-1], path.mass_flow[-1])
        for y in path.state[[len(path.z) // 3, len(path.z) // 2]]:
            found, scale = balance.jacobian(y), np.maximum(np.abs(y) * 1e-4, 1e-6)
            scale[K:] = 1e-4 * y[K:]
            columns = [fourth_order(lambda y, of=balance: of.slope(y)[:K + 3], y, scale * np.eye(K + 3)[k])
                       for k in range(K + 3)]
            expected = np.array([slope for slope, _ in columns]).T / scale
            rounding = np.array([rounding for _, rounding in columns]).T / scale
            allowed = 1e-6 * np.abs(expected).max(axis=1, keepdims=True) + rounding
            assert np.all(np.abs(found - expected) <= allowed)


def compare(seed):
    """
    Return gaps in chlorine left, in the split of the products, and in the hottest temperature, all relative.

    None where the slow solver gives up: LSODA takes steps without end on a few cases at a rtol of 1e-10.
    """
    path = plugflow.integrate(*job(seed))
    arguments = job(seed, rtol=1e-10, rates=wide_cases.REFERENCE)
    try:
        slow = reference_kernel.plugflow.integrate(*arguments._replace(budget=arguments.budget._replace(steps=60000)))
    except ConvergenceError:
        return None
    ours, theirs = path.state[-1, :K], slow.state[-1, :K]
    carbon, chlorine, oxygen = (GAS.atoms[:, GAS.elements.index(name)] for name in ("C", "Cl", "O"))
    organic = (carbon > 0) & (chlorine > 0) & (oxygen == 0)
    split = np.abs(ours[organic] / ours[organic].sum() - theirs[organic] / theirs[organic].sum()).max()
    return (abs(ours[CL2] - theirs[CL2]) / slow.state[:, CL2].max(), split,
            abs(path.hottest[0] / slow.hottest[0] - 1.0))


def agrees(seed):
    """Check one case; tell whether there was anything to compare with."""
    # Source: numpy and SciPy's LSODA at rtol 1e-10 on the same balances, computed; ours at rtol 1e-5.
    gaps = compare(seed)
    assert gaps is None or (gaps[0] < 1e-5 and gaps[1] < 1e-5 and gaps[2] < 1e-4)
    return gaps is not None


@pytest.mark.parametrize("seed", [0, 2, 3, 7])
def test_wide_cases_agree_with_the_slow_solver(seed):
    assert agrees(seed)


@pytest.mark.slow
def test_five_hundred_wide_cases_agree_with_the_slow_solver():
    assert sum(agrees(seed) for seed in range(540)) >= 500


@pytest.mark.parametrize("rtol", [1e-2, 1e-4, 1e-6])
def test_no_wide_case_is_lost_and_no_species_turns_negative(rtol):
    # An absolute tolerance that grew with the relative one lost 45 to 77 of 2,000 such cases, and let radicals turn
    # negative, with a plausible conversion at 4728 K. Limit: no gas is hotter than its chlorine can make it.
    results, counts, rows = marched([job(seed, rtol) for seed in range(150)], native.lanes())
    assert not counts[:, 0].any()
    assert min(row[:, 2:2 + K].min() for row in rows) >= -1e-13
    for seed, top in enumerate(results[:, 3]):
        one = job(seed)
        chlorine = one.n[CL2] + sum(section.injected[CL2] for section in one.tube.sections) / one.mass_flow
        assert top < max(one.T, 340.0) + 5e3 * 50.0 + 1.5e5 * chlorine / (20.0 * one.n.sum())


def test_atoms_enthalpy_and_photons_close_over_wide_cases():
    # Limit: conservation; atoms to 1e-9, enthalpy to 1e-6, photons to 1e-6, at rtol 1e-5.
    for seed in range(80):
        one = job(seed)
        path = plugflow.integrate(*one)
        n, T, flow = path.state[:, :K], path.state[:, K], path.mass_flow
        added = sum(section.injected for section in one.tube.sections)
        fed = one.mass_flow * one.n @ GAS.atoms + added @ GAS.atoms
        assert np.all(np.abs(flow[-1] * n[-1] @ GAS.atoms - fed) <= 1e-9 * fed + 1e-18)
        totals = dict(zip(plugflow.TOTALS, path.totals[-1], strict=True))
        heat = sum(section.heat for section in one.tube.sections)
        gained = flow[-1] * n[-1] @ RATES.thermo.at(T[-1])[2] - one.mass_flow * one.n @ RATES.thermo.at(one.T)[2] - heat
        given = totals["photon_power"] + totals["lamp_heat"] - totals["to_wall"]
        scale = abs(totals["heat_reaction"]) + totals["photon_power"] + abs(totals["to_wall"]) + totals["lamp_heat"]
        assert abs(gained - given) <= 1e-6 * scale
        entering = sum(s.beam.entering.sum() * (s.stop - s.start) for s in one.tube.sections)
        if entering:
            assert totals["photons"] + totals["outer_wall"] == approx(entering, rel=1e-6)


# --- dropped cases ---


def stuck(one):
    """Return a case that cannot get far: friction would use up three times its pressure."""
    length, gas = one.tube.sections[-1].stop, 8.314 * 500.0 * one.n.sum()
    friction = 3.0 * one.P**2 * one.tube.diameter * one.tube.area**2 / (one.mass_flow**2 * gas * length)
    return one._replace(tube=one.tube._replace(friction=friction))


def test_a_stuck_case_is_dropped_with_its_reason_and_the_lane_goes_on(jobs):
    # A first version silently returned zeros for the rest of the queue.
    mixed = [one for pair in zip(map(stuck, jobs), jobs, strict=True) for one in pair]
    found = plugflow.integrate_many(mixed, threads=1)
    expected = [digits(path) for path in plugflow.integrate_many(jobs, threads=1)]
    assert [digits(path) for path in found[1::2]] == expected
    assert all(isinstance(path, str) and "friction uses up the pressure at z = " in path for path in found[::2])


@pytest.mark.parametrize("change", [
    {"T": float("nan")}, {"P": float("nan")}, {"T": -5.0}, {"mass_flow": 0.0}, {"n": np.full(K, np.nan)},
    {"n": np.zeros(K)},
])
def test_numbers_that_are_none_are_dropped_with_a_reason(jobs, change):
    # -ffast-math would have removed the test for nan. The neighbours do not notice.
    found = plugflow.integrate_many([jobs[0], jobs[0]._replace(**change), jobs[1]], threads=1)
    assert isinstance(found[1], str)
    assert "z = 0 m" in found[1]
    assert [digits(found[0]), digits(found[2])] == [digits(path) for path in plugflow.integrate_many(jobs[:2])]


def test_a_spent_budget_drops_one_case_alone(jobs):
    short = jobs[0]._replace(budget=plugflow.Budget(steps=5))
    timed = jobs[0]._replace(budget=plugflow.Budget(seconds=0.0))
    found = plugflow.integrate_many([short, jobs[1], timed], threads=1)
    assert "budget of 5 steps was used up at z = " in found[0]
    assert digits(found[1]) == digits(plugflow.integrate_many([jobs[1]])[0])
    assert "budget of 0 s was used up at z = " in found[2]


# --- events and stations ---


def tube(*sections):
    return plugflow.Tube(RATES, GAS.molar_mass, 0.1, CL2, GAS.start, 4e-3, 0.05, 0.03, constant(0.0), constant(1.0),
                         np.inf, sections)


def inlet(**parts):
    flow = moles(**parts)
    return flow / (flow @ GAS.molar_mass), 320.0, 300.0, 1.5e5, 0.002


def test_the_end_of_the_chlorine_is_found_inside_a_step():
    # Limit: a march at a much tighter tolerance has the last millionth of the chlorine at the same place.
    pipe = tube(plugflow.Section(0.0, 1.0, beam(2000.0), 0.0, np.zeros(K), 0.0))
    path = plugflow.integrate(pipe, *inlet(C2H6=5.0, Cl2=1.0), plugflow.Budget(rtol=1e-5))
    fine = plugflow.integrate(pipe, *inlet(C2H6=5.0, Cl2=1.0), plugflow.Budget(rtol=1e-9))
    left = fine.state[:, CL2] / fine.state[0, CL2]
    assert 0.0 < path.exhausted < 1.0
    assert path.exhausted == approx(np.interp(np.log(1e-6), np.log(left[::-1] + 1e-300), fine.z[::-1]), rel=1e-3)
    dark = tube(plugflow.Section(0.0, 1.0, beam(0.0), 0.0, np.zeros(K), 0.0))
    assert np.isnan(plugflow.integrate(dark, *inlet(C2H6=5.0, Cl2=1.0)).exhausted)


def test_a_lit_stretch_of_a_tenth_of_a_millimetre_is_not_stepped_over():
    # Limit: photons taken up and passed on are those that enter, however short the stretch.
    none, edge = np.zeros(K), 0.5 + 1e-4
    pipe = tube(plugflow.Section(0.0, 0.5, beam(0.0), 0.0, none, 0.0),
                plugflow.Section(0.5, edge, beam(50.0), 0.0, none, 0.0),
                plugflow.Section(edge, 1.0, beam(0.0), 0.0, none, 0.0))
    path = plugflow.integrate(pipe, *inlet(CH4=8.0, Cl2=1.0))
    total = path.totals[-1, plugflow.TOTALS.index("photons")] + path.totals[-1, plugflow.TOTALS.index("outer_wall")]
    assert total == approx(beam(50.0).entering.sum() * 1e-4, rel=1e-6)
    assert path.state[-1, CL2] < path.state[0, CL2]


def test_stations_between_the_steps_lie_on_the_curve_of_a_finer_march():
    # Limit: dense output against a march at rtol 1e-9 read by a spline through its stations.
    from scipy.interpolate import CubicSpline

    pipe = tube(plugflow.Section(0.0, 1.0, beam(20.0), 0.0, np.zeros(K), 0.0))
    path = plugflow.integrate(pipe, *inlet(CH4=8.0, Cl2=1.0), plugflow.Budget(rtol=1e-5), between=4)
    fine = plugflow.integrate(pipe, *inlet(CH4=8.0, Cl2=1.0), plugflow.Budget(rtol=1e-9), between=0)
    assert len(path.z) == 5 * (len(plugflow.integrate(pipe, *inlet(CH4=8.0, Cl2=1.0), plugflow.Budget(rtol=1e-5),
                                                      between=0).z) - 1) + 1
    T = CubicSpline(fine.z, fine.state[:, K])(path.z)
    assert path.state[:, K] == approx(T, abs=0.02)


def test_the_hottest_point_read_from_the_dense_output_beats_the_hottest_station():
    # Limit: the same maximum at rtol 1e-10; the stations alone miss it by more.
    pipe = tube(plugflow.Section(0.0, 1.0, beam(20.0), 0.0, np.zeros(K), 0.0))._replace(conductance=constant(4.0))
    path = plugflow.integrate(pipe, *inlet(C2H6=5.0, Cl2=1.0), plugflow.Budget(rtol=1e-4), between=0)
    fine = plugflow.integrate(pipe, *inlet(C2H6=5.0, Cl2=1.0), plugflow.Budget(rtol=1e-10), between=0)
    assert path.hottest[0] == approx(fine.hottest[0], rel=1e-5)
    assert abs(path.hottest[0] - fine.hottest[0]) < abs(path.state[:, K].max() - fine.hottest[0])


# --- plan, cache, library ---


@pytest.fixture
def cached(tmp_path, monkeypatch):
    """Return a function that makes the plan afresh, and the file it is kept in."""
    monkeypatch.setenv("REACTOR_CACHE", str(tmp_path))

    def make():
        return plan.plan(GAS.tables, GAS.photolysis, GAS.wall, CL2, GAS.start)

    return make, tmp_path


def same(a, b):
    return all(np.array_equal(x, y) for x, y in zip(a, b, strict=True))


def test_a_plan_is_kept_and_found_again(cached, monkeypatch):
    make, folder = cached
    first = make()
    assert len(list(folder.glob("*.plan"))) == 1
    monkeypatch.setattr(plan, "_make", None)
    assert same(make(), first)


def spoil_end(data):
    return data[:-9]


def spoil_bit(data):
    return data[:5000] + bytes([data[5000] ^ 1]) + data[5001:]


def spoil_key(data):
    return bytes(32) + data[32:]


def spoil_all(data):
    return b"PK\x03\x04 not ours"


def spoil_numbers(data):
    """Return a file with a right digest and an index that would reach outside the matrix."""
    import hashlib

    body = bytearray(data[64:])
    body[16 + 4 * 400:16 + 4 * 401] = (10**6).to_bytes(4, "little")
    return data[:32] + hashlib.sha256(bytes(body)).digest() + bytes(body)


@pytest.mark.parametrize("spoil", [spoil_end, spoil_bit, spoil_key, spoil_all, spoil_numbers])
def test_a_stale_broken_or_foreign_file_is_made_anew(cached, spoil):
    make, folder = cached
    first, file = make(), next(folder.glob("*.plan"))
    good = file.read_bytes()
    file.write_bytes(spoil(good))
    assert same(make(), first)
    assert file.read_bytes() == good


def test_a_folder_that_cannot_be_written_is_no_reason_to_stop(monkeypatch):
    monkeypatch.setenv("REACTOR_CACHE", os.devnull + "/none")
    assert same(plan.plan(GAS.tables, GAS.photolysis, GAS.wall, CL2, GAS.start), OWN)


def test_without_a_kernel_the_program_says_so_and_stops(monkeypatch, tmp_path):
    native.library.cache_clear()
    for content in (None, b"no library"):
        path = tmp_path / "absent.so"
        if content:
            path.write_bytes(content)
        monkeypatch.setenv("REACTOR_KERNEL", str(path))
        with pytest.raises(ReactorError, match=r"compiled kernel .* cannot be loaded .*Install the program again"):
            native.library()
    monkeypatch.undo()
    native.library.cache_clear()
    assert native.library().reactor_kernel_version() == native.VERSION


def test_the_flags_keep_the_digits():
    assert "-ffp-contract=off" in build.FLAGS
    assert not any("fast" in flag or "march=native" in flag for flag in build.FLAGS)


# --- random mechanisms ---


def test_random_mechanisms_and_states_break_nothing():
    fuzz(seed=1, seconds=4.0)


@pytest.mark.slow
def test_random_mechanisms_and_states_break_nothing_for_five_minutes():
    fuzz(seed=2, seconds=300.0)


@pytest.mark.slow
def test_a_hundred_thousand_cases_stream_through_in_little_memory():
    # Limit: 300 MB of resident memory for the whole process.
    code = ("import sys, resource\nsys.path.insert(0, 'tests')\nfrom wide_cases import job\n"
            "from reactor.kernel import plugflow\nsome = [job(seed, 1e-4) for seed in range(200)]\n"
            "count = sum(1 for _ in plugflow.stream(some[i % 200] for i in range(100_000)))\n"
            "print(count, resource.getrusage(resource.RUSAGE_SELF).ru_maxrss)\n")
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    count, kilobytes = map(int, done.stdout.split())
    assert count == 100_000
    assert kilobytes < 300_000


def sanitized(*words):
    """Run the kernel's tests and the fuzzer over a sanitized build; skip where the compiler makes none."""
    if reason := sanitize_kernel.cannot():
        pytest.skip(reason)
    command = [sys.executable, "tests/sanitize_kernel.py", *words]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True)
    assert done.returncode == 0, done.stdout + done.stderr
    assert "mechanisms tried" in done.stdout


def test_the_narrow_kernel_runs_clean_under_the_sanitizers():
    sanitized("short")


@pytest.mark.slow
def test_the_kernel_runs_clean_under_the_sanitizers():
    sanitized()


def test_the_sanitizers_would_stop_a_kernel_that_reads_beyond_its_arrays(tmp_path):
    if reason := sanitize_kernel.cannot():
        pytest.skip(reason)
    source = tmp_path / "wrong.c"
    source.write_text("#include <stdlib.h>\nint wrong(int n)\n{\n    int *a = malloc(8), b = 0;\n"
                      "    a[0] = 1;\n    b = a[n];\n    free(a);\n    return b;\n}\n")
    command = [*build.compiler(), *build.SANITIZE, "-fPIC", "-shared", str(source), "-o", str(tmp_path / "wrong.so")]
    subprocess.run(command, check=True, capture_output=True)
    code = f"import ctypes; ctypes.CDLL({str(tmp_path / 'wrong.so')!r}).wrong(5)"
    env = {**os.environ, "LD_PRELOAD": sanitize_kernel.runtime(), "ASAN_OPTIONS": "detect_leaks=0"}
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, env=env)
    assert done.returncode != 0
    assert "wrong.c:6" in done.stderr

"""Finds and loads the compiled kernel, and hands it flat arrays. Mirrors native/batch.h."""

import ctypes
import functools
import os
import sys
from pathlib import Path

import numpy as np

from reactor.errors import ReactorError

VERSION = 4  # FACE_VERSION of native/batch.h
REASONS = (  # by status of native/batch.h; where, steps and seconds are filled in
    "",
    "the budget of {steps} steps was used up {where}; try a looser solver.rtol",
    "the budget of {seconds:g} s was used up {where}; raise solver.seconds",
    "the steps became too small to go on {where}; try a looser solver.rtol or less light",
    "a species kept turning negative {where}; try another solver.rtol",
    "the numbers ran out of bounds {where}; check feed, cooling and light",
    "no temperature was found for the mixed gas {where}; check its composition and what is injected",
    "no memory was left for the stations {where}; solve fewer cases at once",
    "friction uses up the pressure {where}, P = {P:.3g} bar; take a wider tube or more of them in parallel",
)
RESULT_REALS, RESULT_COUNTS, TOTALS = 7, 4, 9
ROW_MORE = 5 + TOTALS  # a station: z, flow, n..., P, Tc, T, totals
_address, _i64 = ctypes.c_void_p, ctypes.c_int64


def _fields(**kinds):
    """Return the fields of a structure: space-separated names by kind."""
    return [(name, kind) for kind, names in kinds.values() for name in names.split()]


class Batch(ctypes.Structure):
    """`Batch` of native/batch.h: cases in, results out, all as addresses of flat arrays."""

    _fields_ = _fields(
        counts=(_i64, "count tank lines degree stations"),
        arrays=(_address, "cases sections pool tables links section_links results counts paths"),
    )


class RatesAt(ctypes.Structure):
    """`Rates` of native/batch.h."""

    _fields_ = _fields(
        inputs=(_address, "A low_A c"), state=(ctypes.c_double, "T J wall_loss"),
        outputs=(_address, "cp cp_slope h g forward reverse production by_c by_T by_J"),
    )


class Point(ctypes.Structure):
    """`Point` of native/batch.h; task SLOPE gives slopes, HELD the composition at rest at held temperatures."""

    _fields_ = _fields(task=(_i64, "task count"), arrays=(_address, "y f totals jacobian"))


SLOPE, HELD, NEAR = 0, 1, 2


def address(array):
    """Return the address of a contiguous array, or None."""
    return None if array is None else array.ctypes.data


def _place():
    ending = {"win32": ".dll", "darwin": ".dylib"}.get(sys.platform, ".so")
    named = os.environ.get("REACTOR_KERNEL")
    return Path(named) if named else Path(__file__).parent / f"reactor_kernel{ending}"


@functools.cache
def library():
    """
    Return the loaded kernel.

    Raises
    ------
    ReactorError
        Where no compiled kernel is found, or it belongs to another version of the program.
    """
    path = _place()
    how = ("nothing can be calculated without it. Install the program again (pip install --force-reinstall), with a C "
           "compiler on the path or network access for the one that pip fetches")
    try:
        lib = ctypes.CDLL(str(path))
        version = lib.reactor_kernel_version()
    except (OSError, AttributeError) as fault:
        raise ReactorError(f"the compiled kernel {path} cannot be loaded ({fault}); {how}") from None
    if version != VERSION:
        raise ReactorError(f"the compiled kernel {path} is of version {version}, the program needs {VERSION}; {how}")
    lib.reactor_kernel_release.argtypes = [_address]
    lib.reactor_kernel_release.restype = None
    lib.reactor_kernel_march.argtypes = [_address, _address, ctypes.POINTER(Batch), ctypes.c_int]
    lib.reactor_kernel_rates.argtypes = [_address, _address, ctypes.POINTER(RatesAt)]
    lib.reactor_kernel_point.argtypes = [_address, _address, ctypes.POINTER(Batch), ctypes.POINTER(Point)]
    return lib


def lanes():
    """Return how many cases this processor solves side by side; REACTOR_LANES asks for fewer."""
    most = library().reactor_kernel_lanes()
    wanted = os.environ.get("REACTOR_LANES", "")
    return int(wanted) if wanted in ("1", "2", "4") else most


def memory():
    """Stop: the kernel found no memory."""
    raise MemoryError("the kernel found no memory for its rows")


def march(plan, packed, stations, wide):
    """
    Solve all cases of a packed batch.

    Parameters
    ----------
    plan : Plan
        The mechanism.
    packed : Packed
        Cases as flat arrays.
    stations : int
        0 keeps the end of each case, 1 every step, more also points between.
    wide : int
        How many cases side by side. [-]

    Returns
    -------
    results, counts : array
        As in native/batch.h.
    rows : list of array
        The stations of each case.
    """
    lib, count = library(), packed.count
    results = np.zeros((count, RESULT_REALS))
    counts, paths = np.zeros((count, RESULT_COUNTS), np.int64), np.zeros(count, np.uint64)
    batch = packed.batch(stations, results, counts, paths)
    if not lib.reactor_kernel_march(address(plan.ints), address(plan.reals), batch, wide):
        memory()
    width, rows = len(plan.species) + ROW_MORE, []
    for place, kept in zip(paths.tolist(), counts[:, 3].tolist(), strict=True):
        size = kept * width
        rows.append(np.array((ctypes.c_double * size).from_address(place)).reshape(kept, width) if size
                    else np.zeros((0, width)))
        if place:
            lib.reactor_kernel_release(place)
    return results, counts, rows


def reason(status, result, budget, where="z = {z:.6g} m, T = {T:.1f} K"):
    """Return in words why a case was dropped; `result` as in native/batch.h, `where` a template of z and T."""
    z, T, P = result[:3]
    return REASONS[status].format(where="at " + where.format(z=z, T=T), steps=budget.steps, seconds=budget.seconds,
                                  P=P / 1e5)

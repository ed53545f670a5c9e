"""
Compiles the kernel: `python -m reactor.kernel.build`, and the same from the build hook of the package.

The compiler is $CC, else cc, gcc or clang on the path, else the one of the PyPI package ziglang. REACTOR_SANITIZE=1
builds with address and undefined-behaviour sanitizers, REACTOR_NARROW=1 only what runs on every processor, which then
serves the others too. Needs the standard library alone.
"""

import importlib.util
import os
import platform
import shlex
import shutil
import subprocess
import sys
import tempfile
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

HERE = Path(__file__).parent
# name, cases side by side, width of long rows, flags; the wide ones on x86-64 alone, chosen when the kernel is loaded
BUILDS = (
    ("plain1", 1, 2, ()), ("plain2", 2, 2, ()), ("wide1", 1, 4, ("-mavx2",)), ("wide4", 4, 4, ("-mavx2",)),
    ("wide8", 8, 8, ("-mavx512f", "-mavx512dq", "-mavx512vl", "-mprefer-vector-width=512")),
)
FACES = ("march", "rates", "point")
FLAGS = ("-std=c11", "-O3", "-ffp-contract=off", "-fno-math-errno", "-fvisibility=hidden", "-Wall", "-Wextra",
         "-Wno-psabi", "-D_POSIX_C_SOURCE=200809L")
SANITIZE = ("-g", "-O1", "-fsanitize=address,undefined", "-fno-sanitize-recover=all", "-fno-omit-frame-pointer")


def compiler():
    """Return the command of a C compiler, or None where there is none."""
    if os.environ.get("CC"):
        return shlex.split(os.environ["CC"])
    for name in ("cc", "gcc", "clang"):
        if shutil.which(name):
            return [name]
    if importlib.util.find_spec("ziglang"):
        return [sys.executable, "-m", "ziglang", "cc", "-mcpu=baseline"]
    return None


def ending():
    """Return how a shared library is called on this system."""
    return {"win32": ".dll", "darwin": ".dylib"}.get(sys.platform, ".so")


def build(target=None):
    """
    Compile the kernel and return where it is.

    Parameters
    ----------
    target : path, optional
        The library to write; by default beside this file, where the program looks for it.
    """
    command = compiler()
    if command is None:
        raise SystemExit("no C compiler found: install gcc or clang, or `pip install ziglang`")
    target = Path(target) if target else HERE / f"reactor_kernel{ending()}"
    flags = [*FLAGS, *(() if sys.platform == "win32" else ("-fPIC",))]
    sanitize = SANITIZE if os.environ.get("REACTOR_SANITIZE") == "1" else ()
    narrow = os.environ.get("REACTOR_NARROW") == "1"
    wide = platform.machine().lower() in ("x86_64", "amd64") and not narrow
    served = [f"-D{face}_{name}={face}_plain{min(lanes, 2)}" for name, lanes, _, more in BUILDS if narrow and more
              for face in FACES]
    with tempfile.TemporaryDirectory() as folder:
        jobs = [([*command, *flags, *sanitize, *more, f"-DBUILD={name}", f"-DLANES={lanes}", f"-DWIDE={width}", "-c",
                  str(HERE / "native" / "kernel.c"), "-o", f"{folder}/{name}.o"])
                for name, lanes, width, more in BUILDS if wide or not more]
        entry = str(HERE / "native" / "entry.c")
        jobs.append([*command, *flags, *sanitize, *served, "-c", entry, "-o", f"{folder}/entry.o"])
        with ThreadPoolExecutor(2) as pool:
            list(pool.map(_run, jobs))
        objects = [job[-1] for job in jobs]
        fresh = target.with_name(f"{target.stem}.{os.getpid()}{target.suffix}")
        _run([*command, *sanitize, "-shared", *objects, "-o", str(fresh)])
        fresh.replace(target)
    return target


def _run(command):
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    if done.returncode:
        raise SystemExit(f"the kernel could not be compiled:\n{shlex.join(command)}\n{done.stderr}")


if __name__ == "__main__":
    build(*sys.argv[1:2])

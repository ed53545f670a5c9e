"""
Builds the kernel with address and undefined-behaviour sanitizers and runs its tests and the fuzzer over it.

`python tests/sanitize_kernel.py [SECONDS]` does all; with `short` instead, some of the tests over the narrow build.
"""

import os
import subprocess
import sys
import tempfile
from pathlib import Path

from reactor.kernel import build

ROOT = Path(__file__).parent.parent
TESTS = ("test_one_case_alone", "test_one_or_several", "stuck", "test_numbers_that", "test_stations",
         "test_every_steady_state", "test_derivatives", "test_lamp_edges")
FEW = ("stuck", "test_stations", "test_derivatives", "test_every_steady_state", "test_lamp_edges")


def runtime():
    """Return the sanitizers' libraries, which have to be loaded before Python's own; empty where there are none."""
    command = build.compiler()
    if command is None or not sys.platform.startswith("linux"):
        return ""
    found = [subprocess.run([*command, f"-print-file-name={name}"], capture_output=True, text=True, check=False).stdout
             for name in ("libasan.so", "libubsan.so")]
    return ":".join(path.strip() for path in found if os.path.isabs(path))


def cannot():
    """Return why the compiler of this machine cannot sanitize a library for Python, else None."""
    preload = runtime()
    if not preload:
        return "the compiler brings no shared library of its sanitizers (libasan.so)"
    with tempfile.TemporaryDirectory() as folder:
        source = Path(folder, "one.c")
        source.write_text("int one(void) { return 1; }\n")
        command = [*build.compiler(), *build.SANITIZE, "-fPIC", "-shared", str(source), "-o", f"{folder}/one.so"]
        made = subprocess.run(command, capture_output=True, text=True, check=False)
        if made.returncode:
            return f"the compiler does not sanitize: {made.stderr.strip()}"
        code = f"import ctypes; print(ctypes.CDLL({folder + '/one.so'!r}).one())"
        ran = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False,
                             env={**os.environ, "LD_PRELOAD": preload, "ASAN_OPTIONS": "detect_leaks=0"})
        return None if ran.stdout.strip() == "1" else f"a sanitized library does not load: {ran.stderr.strip()}"


def main(words):
    """Return the exit code: 0 where nothing was found."""
    short = words[:1] == ["short"]
    seconds, tests = ("3", FEW) if short else ((words[:1] or ["15"])[0], TESTS)
    with tempfile.TemporaryDirectory() as folder:
        library = f"{folder}/reactor_kernel.so"
        built = {**os.environ, "REACTOR_SANITIZE": "1", "REACTOR_NARROW": str(int(short))}
        subprocess.run([sys.executable, "-m", "reactor.kernel.build", library], cwd=ROOT, env=built, check=True)
        checked = {**os.environ, "REACTOR_KERNEL": library, "LD_PRELOAD": runtime(), "REACTOR_CACHE": folder,
                   "ASAN_OPTIONS": "detect_leaks=0", "OPENBLAS_NUM_THREADS": "1", "PYTHONPATH": str(ROOT)}
        commands = ([sys.executable, "-m", "pytest", "-q", "-p", "no:cacheprovider", "tests/test_kernel.py",
                     "tests/test_compiled.py", "-k", " or ".join(tests)],
                    [sys.executable, "tests/fuzz_kernel.py", seconds, "3"])
        return max(subprocess.run(command, cwd=ROOT, env=checked).returncode for command in commands)


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))

"""Builds the kernel with address and undefined-behaviour sanitizers and runs its tests and the fuzzer over it."""

import os
import subprocess
import sys
import tempfile
from pathlib import Path

ROOT = Path(__file__).parent.parent
TESTS = ("test_one_case_alone", "test_one_or_several", "stuck", "test_numbers_that", "test_stations",
         "test_every_steady_state", "test_derivatives", "test_lamp_edges")


def runtime():
    """Return the sanitizer's library, which has to be loaded before Python's own."""
    found = [subprocess.run(["cc", f"-print-file-name={name}"], capture_output=True, text=True, check=True).stdout
             for name in ("libasan.so", "libubsan.so")]
    return ":".join(path.strip() for path in found if os.path.isabs(path))


def main():
    """Return the exit code: 0 where nothing was found."""
    with tempfile.TemporaryDirectory() as folder:
        library = f"{folder}/reactor_kernel.so"
        built = {**os.environ, "REACTOR_SANITIZE": "1"}
        subprocess.run([sys.executable, "-m", "reactor.kernel.build", library], cwd=ROOT, env=built, check=True)
        checked = {**os.environ, "REACTOR_KERNEL": library, "LD_PRELOAD": runtime(), "REACTOR_CACHE": folder,
                   "ASAN_OPTIONS": "detect_leaks=0", "OPENBLAS_NUM_THREADS": "1", "PYTHONPATH": str(ROOT)}
        commands = ([sys.executable, "-m", "pytest", "-q", "-p", "no:cacheprovider", "tests/test_kernel.py",
                     "tests/test_compiled.py", "-k", " or ".join(TESTS)],
                    [sys.executable, "tests/fuzz_kernel.py", *(sys.argv[1:2] or ["15"]), "3"])
        return max(subprocess.run(command, cwd=ROOT, env=checked).returncode for command in commands)


if __name__ == "__main__":
    sys.exit(main())

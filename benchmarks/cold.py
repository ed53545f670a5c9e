"""From the start of the process to the printed report, and to the help, against `import numpy` in a process of its own."""

import os
import re
import subprocess
import sys
import tempfile
from pathlib import Path

from benchmarks.interleave import interleave

ROOT = Path(__file__).parent.parent
CASE = ROOT / "cases" / "lapwing_ten.toml"
ROUNDS = 11
HEAVY = ("cantera", "scipy", "ht", "fluids", "pint", "pandas")


def run():
    """Yield the lines of this figure."""
    with tempfile.TemporaryDirectory() as folder:
        env = {key: value for key, value in os.environ.items() if key != "PYTHONDONTWRITEBYTECODE"}
        # what an installed program finds: compiled modules, and a mechanism it has met before
        env |= {"PYTHONPYCACHEPREFIX": f"{folder}/modules", "REACTOR_CACHE": f"{folder}/cache",
                "PYTHONPATH": os.pathsep.join([str(ROOT), *filter(None, [env.get("PYTHONPATH")])])}

        def start(*words):
            done = subprocess.run([sys.executable, *words], capture_output=True, text=True, check=False, cwd=ROOT, env=env)
            if done.returncode not in (0, 1):  # 1: a limit is violated, the report stands
                raise SystemExit(f"{' '.join(words)}:\n{done.stderr}")
            return done.stdout + done.stderr

        def numpy():
            return start("-c", "import numpy")

        first, again = (start("-m", "reactor", "rate", str(CASE)) for _ in range(2))
        imported = start("-X", "importtime", "-m", "reactor", "rate", str(CASE))
        heavy = [name for name in HEAVY if re.search(rf"\| +{name}\n", imported)]
        if first != again or heavy:
            yield f"# cold: {'loads ' + ', '.join(heavy) if heavy else 'two runs print two reports'}: no ratio"
            return
        for name, words in (("cold", ("rate", str(CASE))), ("cold_help", ("--help",))):
            (ours, theirs), _ = interleave(lambda words=words: start("-m", "reactor", *words), numpy, ROUNDS)
            yield f"# {name}: reactor {words[0]} {1e3 * ours:.0f} ms, import numpy {1e3 * theirs:.0f} ms"
            yield f"ratio {name} {ours / theirs:.2f}"

"""Print every figure as a line `ratio NAME VALUE`, with the accuracy found in the same run."""

import platform
import sys

from benchmarks import cold, field, kernel, single, sweep

FIGURES = {"single": kernel.single, "single_lsoda": kernel.single_lsoda, "sweep": kernel.sweep,
           "size_scaling": kernel.size_scaling, "program": single.run, "study": sweep.run, "field": field.run,
           "cold": cold.run}


def main(names):
    """Run the named figures, or all."""
    print(f"# {platform.machine()}, Python {platform.python_version()}, {platform.system()}")
    for name in names or FIGURES:
        if name not in FIGURES:
            sys.exit(f"benchmarks: no figure {name!r}; known: {', '.join(FIGURES)}")
        for line in FIGURES[name]():
            print(line, flush=True)


if __name__ == "__main__":
    main(sys.argv[1:])

"""
What the light field and the local radical pools cost: `python -m benchmarks field`.

field: time to rate a case with a lamp of 30 lines, over the same without a lamp and with a typed photolysis rate (one
mixed radical pool in both). pools: local radical pools over one mixed pool. Both sides are measured in turn in this run.
"""

import statistics
import time
from pathlib import Path

import numpy as np

import reactor

CASE = Path(__file__).parent.parent / "cases" / "lapwing_ten_mercury.toml"
ROUNDS = 15


def seconds(case):
    """Return the processor time of one rating."""
    start = time.process_time()
    reactor.rate(case)
    return time.process_time() - start


def ratio(with_it, without):
    """Return the median of the ratios of pairs measured one after the other."""
    for case in (with_it, without):
        seconds(case)
    return statistics.median(seconds(with_it) / seconds(without) for _ in range(ROUNDS))


def thirty_lines(folder):
    """Write a spectrum of 30 lines and return its path."""
    nm = np.linspace(290, 435, 30)
    path = Path(folder) / "thirty.csv"
    rows = "".join(f"{w:.1f},{share:.4f}\n" for w, share in zip(nm, 0.6 + 0.4 * np.sin(nm / 7.0), strict=True))
    path.write_text("wavelength [nm],radiant_share [%]\n" + rows)
    return path


def run():
    """Measure and return the lines."""
    import tempfile

    with tempfile.TemporaryDirectory() as folder:
        text = CASE.read_text()
        lit, dark = Path(folder) / "lit.toml", Path(folder) / "dark.toml"
        own = f'spectrum = "{thirty_lines(folder)}"\ndriver = "90 %"'
        lit.write_text(text.replace('kind = "medium-pressure mercury"', own))
        field = reactor.load(lit)
        J = float(np.median(reactor.rate(field).profile["J [1/s]"]))
        lamp, rest = text.index("[[lamp]]"), text.index("[sleeve]")
        dark.write_text(text[:lamp] + text[rest:])
        typed = reactor.load(dark, overrides=[f"chemistry.photolysis_rate={J:.4g} 1/s"])
        yield f"ratio field {ratio(field, typed):.3f}"
        local = reactor.load(lit, overrides=["chemistry.radicals=local"])
        yield f"ratio pools {ratio(local, field):.3f}"


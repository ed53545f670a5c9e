"""Points drawn over ranges, seeded: Latin hypercube and Sobol sequence (SciPy)."""

from dataclasses import dataclass

from reactor.errors import CaseError
from reactor.study.variation import point

WAYS = ("latin", "sobol")


def shares(way, number, dimensions, seed):
    """
    Return numbers of 0 to 1, one row a point.

    Parameters
    ----------
    way : str
        latin or sobol (scrambled; a power of two of points balances it).
    number, dimensions, seed : int
        Rows, columns, and what makes them repeatable.

    Examples
    --------
    >>> sorted(int(4 * x) for x in shares("latin", 4, 1, seed=1)[:, 0])
    [0, 1, 2, 3]
    """
    import warnings

    from scipy.stats import qmc

    if way == "latin":
        return qmc.LatinHypercube(dimensions, rng=seed).random(number)
    with warnings.catch_warnings():
        warnings.filterwarnings("ignore", message="The balance properties", category=UserWarning)
        return qmc.Sobol(dimensions, scramble=True, rng=seed).random(number)


@dataclass(frozen=True)
class Sample:
    """`number` points drawn over the ranges of `axes` the `way` that is named."""

    axes: tuple
    way: str
    number: int
    seed: int = 1

    def __post_init__(self):
        for each in self.axes:
            if each.low != each.low:
                raise CaseError(f'--vary {each.key}: sampling wants a range, like "{each.key}=1..5"')
        if self.way not in WAYS or self.number < 1:
            raise CaseError(f'--sample: write it like "latin 200" or "sobol 256"; known: {", ".join(WAYS)}')

    @property
    def size(self):
        """Return the number of points."""
        return self.number

    @property
    def words(self):
        """Return how the size comes about."""
        keys = ", ".join(each.key for each in self.axes)
        return f"{self.number} points, {self.way}, seed {self.seed}, over {keys}"

    def spec(self):
        """Return what defines the points, as plain data."""
        ranges = {a.key: [a.low, a.high, a.typed, "log" if a.log else "even"] for a in self.axes}
        return {"form": self.way, "ranges": ranges, "number": self.number, "seed": self.seed}

    def points(self, start=0):
        """Yield the points from number `start` on."""
        drawn = shares(self.way, self.number, len(self.axes), self.seed)
        for number in range(start, self.number):
            texts = [each.at(float(share)) for each, share in zip(self.axes, drawn[number], strict=True)]
            yield point(self.axes, number, texts)

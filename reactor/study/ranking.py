"""What moves a result most: rank correlation, Sobol indices, quantiles, each with its error."""

from typing import NamedTuple

import numpy as np

RESAMPLED = 200  # bootstrap samples behind a standard error


class Share(NamedTuple):
    """Sobol indices of one input or group: of first order and total, with standard errors."""

    name: str
    first: float
    first_error: float
    total: float
    total_error: float


def rank_correlation(x, y):
    """
    Return Spearman's rank correlation of every column of `x` with `y`; 0 where one of them does not vary.

    Parameters
    ----------
    x : array, shape (n, k)
        Inputs. [any]
    y : array, shape (n,)
        One result. [any]

    Examples
    --------
    >>> x = np.array([[1.0, 5.0], [2.0, 3.0], [3.0, 4.0], [4.0, 1.0]])
    >>> print(rank_correlation(x, np.array([1.0, 8.0, 27.0, 64.0])).round(2))
    [ 1.  -0.8]
    """
    from scipy.stats import rankdata

    ranks, target = rankdata(x, axis=0), rankdata(y)
    ranks, target = ranks - ranks.mean(axis=0), target - target.mean()
    size = np.sqrt((ranks**2).sum(axis=0) * (target**2).sum())
    return np.divide(target @ ranks, size, out=np.zeros(x.shape[1]), where=size > 0)


def quantiles(y, seed, at=(0.05, 0.5, 0.95)):
    """
    Return quantiles of `y` and their standard errors by bootstrap.

    Parameters
    ----------
    y : array, shape (n,)
        Sampled results. [any]
    seed : int
        Makes the errors repeatable.
    at : sequence of float
        Shares of the sample. [-]
    """
    rng = np.random.default_rng(seed)
    drawn = y[rng.integers(len(y), size=(RESAMPLED, len(y)))]
    return np.quantile(y, at), np.quantile(drawn, at, axis=1).std(axis=1)


def saltelli(a, b, groups):
    """
    Return the rows that Sobol indices need: A, B, and A with the columns of each group from B.

    Parameters
    ----------
    a, b : array, shape (n, k)
        Two independent samples. [-]
    groups : sequence of sequence of int
        The columns of each input or group.

    Returns
    -------
    rows : array, shape (n (2 + groups), k)
    """
    mixed = []
    for columns in groups:
        c = a.copy()
        c[:, columns] = b[:, columns]
        mixed.append(c)
    return np.concatenate([a, b, *mixed])


def sobol_indices(y, names, seed):
    """
    Return the `Share` of each group, from results at the rows of `saltelli`.

    Parameters
    ----------
    y : array, shape (n (2 + groups),)
        Results in the order of the rows; a nan takes its place in A, B and every mix out. [any]
    names : sequence of str
        Names of the groups.
    seed : int
        Makes the errors repeatable.

    References
    ----------
    .. [1] saltelli2010: first order by its estimator (b), total by Jansen's (f).
    """
    table = np.reshape(y, (2 + len(names), -1))
    table = table[:, np.isfinite(table).all(axis=0)]
    rng = np.random.default_rng(seed)
    n = table.shape[1]
    drawn = [_indices(table[:, rng.integers(n, size=n)]) for _ in range(RESAMPLED)]
    first, total = _indices(table)
    errors = np.std(drawn, axis=0)
    return [Share(*map(_plain, row)) for row in zip(names, first, errors[0], total, errors[1], strict=True)]


def _indices(table):
    """Return first-order and total indices of one table (A, B, mixes)."""
    middle = table[:2].mean()
    a, b, mixed = table[0] - middle, table[1] - middle, table[2:] - middle
    variance = max(np.concatenate([a, b]).var(), 1e-300)
    return (b * (mixed - a)).mean(axis=1) / variance, ((a - mixed) ** 2).mean(axis=1) / (2 * variance)


def _plain(value):
    return value if isinstance(value, str) else float(value)

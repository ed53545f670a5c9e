"""Open a mechanism file with Cantera; whatever is wrong with it becomes a `CaseError`."""

import warnings
from functools import cache
from typing import Any

from reactor.errors import CaseError


@cache
def phase(path, name, stamp, transport):
    """
    Return the Cantera gas of one phase, and what Cantera remarked on reading it.

    Parameters
    ----------
    path : pathlib.Path
        The YAML file.
    name : str
        The phase; empty: the first.
    stamp : int
        Time of the last change of the file, so that a changed file is read again.
    transport : bool
        Whether to prepare transport properties too.

    Returns
    -------
    cantera.Solution, tuple of str
    """
    import cantera

    settings: dict[str, Any] = {} if transport else {"transport_model": None}
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always")
        try:
            gas = cantera.Solution(str(path), name, **settings)
        except (cantera.CanteraError, ValueError, KeyError) as error:
            raise CaseError(f"{path}: Cantera cannot use this file:\n{_plain(error)}") from None
    return gas, tuple(_plain(remark.message) for remark in caught)


def _plain(error):
    """Return Cantera's own text without its frame of stars and its empty lines."""
    lines = (line.rstrip() for line in str(error).splitlines())
    return "\n".join(line for line in lines if line.strip(" *"))


def names(path):
    """Return the names of the phases of a file in their order; [""] where only Cantera can tell."""
    from ruamel.yaml import YAML, YAMLError  # comes with Cantera

    try:
        phases = YAML(typ="safe").load(path).get("phases", [])
        return [str(phase["name"]) for phase in phases] or [""]
    except (YAMLError, AttributeError, TypeError, KeyError, UnicodeDecodeError):
        return [""]

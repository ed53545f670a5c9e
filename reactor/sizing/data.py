"""
The sizing room's own numbers.

Rules of the trade and loads behind the reactor, each with source and status.
"""

from reactor import library


def practice(name):
    """
    Return one number in SI.

    Examples
    --------
    >>> print(practice("acid_strength"))
    0.32
    """
    return library.sheet("sizing/practice.csv")[name].value


def cited(*names):
    """Return the provenance of numbers as records {what, value, source, status}."""
    sheet = library.sheet("sizing/practice.csv")
    return [
        {"what": name, "value": sheet[name].value, "source": sheet[name].source, "status": sheet[name].status}
        for name in names
    ]

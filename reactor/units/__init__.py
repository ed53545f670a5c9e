"""Text with units outside, SI floats inside: the table of units and the kinds of quantity."""

from reactor.units.kinds import KINDS, Kind, Typed, help_rows
from reactor.units.table import ATMOSPHERE, GAS_CONSTANT, from_si, show, to_si, unit

__all__ = [
    "ATMOSPHERE",
    "GAS_CONSTANT",
    "KINDS",
    "Kind",
    "Typed",
    "from_si",
    "help_rows",
    "show",
    "to_si",
    "unit",
]

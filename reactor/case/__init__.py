"""The case: TOML in, frozen records of SI floats, TOML out; every fault names file, line, key and cure."""

from reactor.case.reader import changed, load, loads
from reactor.case.schema import (
    About,
    Assumed,
    Case,
    Chemistry,
    Cooling,
    Feed,
    Inject,
    Lamp,
    Limits,
    Meters,
    Recycle,
    Sleeve,
    Solver,
    Targets,
    Vessel,
    Window,
)
from reactor.case.templates import template
from reactor.case.writer import dump

__all__ = ["About", "Assumed", "Case", "Chemistry", "Cooling", "Feed", "Inject", "Lamp", "Limits", "Meters"]
__all__ += ["Recycle", "Sleeve", "Solver", "Targets", "Vessel", "Window"]
__all__ += ["changed", "dump", "load", "loads", "template"]

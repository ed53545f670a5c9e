"""One sizing run: search, rate the sized case in full, and add the tables that were asked for."""

from dataclasses import dataclass, replace

from reactor.rating import rate
from reactor.sizing import goals, loop
from reactor.sizing.quantities import quantities
from reactor.sizing.size import size

PLAIN = ("light", "tubes", "loads")  # printed with every sized result
PARTS = (*PLAIN, "trade", "stages", "kinds", "lamps", "gaps", "turndown", "ageing")


@dataclass(frozen=True)
class Options:
    """What else the tables need to know; all in SI."""

    cap: float = 0.10  # mole fraction of chlorine right after an injection
    between_stages: float | None = None  # temperature to which the gas is cooled before each stage
    life: float | None = None  # s, hours of light until end_of_life is reached
    deposit: float | None = None  # share of the light lost a week


def run(case, find=(), wanted=(), keeps=(), between=None, parts=PLAIN, options=Options()):
    """
    Size a case and return its `Result` with the block `sizing`.

    Parameters
    ----------
    case : Case
        Where the search starts. [-]
    find, wanted, keeps : sequence
        Unknown inputs, targets and constraints; when no target is given, [targets] and [limits] of the
        case. [-]
    between : tuple of str, optional
        Range of a single unknown. [-]
    parts : sequence of str
        Which tables to add, out of `PARTS`. [-]
    options : Options
        What the tables need beside the case. [-]
    """
    if not wanted:
        wanted, limits = goals.of_case(case)
        find, keeps = (
            find or case.targets.find,
            [*keeps, *(k for k in limits if k.name not in {w.name for w in wanted})] if wanted else keeps,
        )
        goals.check(wanted, limits)
    found = size(case, find, wanted, keeps, between)
    closed = found.probe.case
    result = rate(closed)
    asked = parts if found.record["solved"] else [part for part in parts if part not in PLAIN]
    block = {"found": found.record} | tables(found.case, found.probe, result, asked, options)
    if closed.recycle is not None:
        block["loop"] = loop.record(found.probe)
    return replace(result, sizing=quantities(block), identity=result.identity | {"case": found.case.hash()})


def tables(case, probe, result, parts, options):
    """Return the tables that were asked for, {name: records}."""
    return {part: _table(part)(case, probe, result, options) for part in PARTS if part in parts}


def _table(part):
    """Return the function of one table; each lives in a module of its own."""
    from importlib import import_module

    module, name = {
        "light": ("light", "lamp_curve"),
        "trade": ("light", "trade"),
        "tubes": ("tubes", "tubes"),
        "loads": ("loads", "loads"),
        "stages": ("stages", "stages"),
        "kinds": ("side_by_side", "kinds"),
        "lamps": ("choosers", "lamps"),
        "gaps": ("choosers", "gaps"),
        "turndown": ("life", "turndown"),
        "ageing": ("life", "ageing"),
    }[part]
    return getattr(import_module(f"reactor.sizing.{module}"), name)

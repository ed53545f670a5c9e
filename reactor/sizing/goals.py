"""
Targets and constraints.

Read from text or from the case, checked against one another, measured at a probe.
"""

import math

from reactor.case import targets
from reactor.case.targets import Goal
from reactor.errors import CaseError, ReactorError
from reactor.units import show

LIMITS = {  # the keys of [limits] and the result that each one bounds
    "hottest": "temperature_hottest",
    "chlorine_slip": "chlorine_slip",
    "poly_share_mol": "poly_share_mol",
    "poly_share_mass": "poly_share_mass",
    "pressure_drop": "pressure_drop",
    "sleeve_skin": "sleeve_skin_temperature",
}
SHOWN = {"K": "degC", "kg/s": "kg/h", "Pa": "mbar", "-": "%"}
DIFFERENCES = ("adiabatic_rise", "exotherm_margin", "dew_point_margin")
PLAIN = ("transfer_units", "chain_length", "quantum_yield")


class Contradiction(ReactorError):  # noqa: N818
    """Report wishes that cannot hold together, whatever is built."""


def read(texts, option):
    """Return the goals of an option of the command line; raise a CaseError with every fault."""
    found, faults = [], []
    for text in texts:
        try:
            found.append(targets.goal(text))
        except ValueError as error:
            faults.append(f'{option} "{text}": {error}')
    if faults:
        raise CaseError(faults)
    return found


def of_case(case):
    """Return the goals of [targets] and the constraints of [limits]."""
    wanted = [Goal(name, "=", value, shown(name, value)) for name, value in case.targets.wanted.items()]
    return wanted, [
        Goal(name, "<", getattr(case.limits, key), shown(name, getattr(case.limits, key)))
        for key, name in LIMITS.items()
        if getattr(case.limits, key) is not None
    ]


def shown(name, value):
    """Return a value in SI the way the trade writes it."""
    if value is None:
        return "none"
    kind, _ = targets.kind_of(name)
    unit = kind.si if name in (*DIFFERENCES, *PLAIN) else SHOWN.get(kind.si, kind.si)
    return show(value, unit)


def check(wanted, keeps):
    """Raise a `Contradiction` when two wishes exclude each other."""
    goals = [*wanted, *keeps]
    goals += [
        Goal(
            "conversion_chlorine",
            {"<": ">", ">": "<"}.get(g.relation, "="),
            1 - g.value,
            f"(chlorine_slip {g.text})",
        )
        for g in goals
        if g.name == "chlorine_slip"
    ]
    for i, one in enumerate(goals):
        for two in goals[i + 1 :]:
            if one.name == two.name and _exclude(one, two):
                raise Contradiction(f"{one} and {two} contradict each other: no equipment gives both; change one of them")


def _exclude(one, two):
    if "=" in (one.relation, two.relation):
        fixed, other = (one, two) if one.relation == "=" else (two, one)
        if other.relation == "=":
            return abs(fixed.value - other.value) > 1e-9 * max(abs(fixed.value), 1e-12)
        return not other.holds(fixed.value)
    below, above = (one, two) if one.relation == "<" else (two, one)
    return one.relation != two.relation and below.value < above.value


def gap(goal, value):
    """
    Return how far a value lies above its goal: the logarithm of their ratio, of what is left near 100 %.

    Near the goal this is the relative difference; over decades it stays straight for what goes by powers.

    Examples
    --------
    >>> print(f"{gap(targets.goal('chlorine_slip=1 %'), 0.02):.3f}")
    0.693
    """
    kind, _ = targets.kind_of(goal.name)
    if kind.si == "-" and kind.most == 1 and 0.5 < goal.value < 1 and value < 1:
        return -math.log((1 - value) / (1 - goal.value))
    if goal.value > 0 and value > 0:
        return math.log(value / goal.value)
    return (value - goal.value) / (abs(goal.value) or 1.0)

"""
What may be asked for: the results by name with the kind of quantity they are, and how a wish is written.

A wish stands in [targets] as `chlorine_slip = "1 %"`, `products = { CH3Cl = "50 kg/h" }`, and on the command
line as `chlorine_slip=1 %`, `products.CH3Cl=50 kg/h`, `temperature_hottest<120 degC`.
"""

import re
from typing import NamedTuple

from reactor.case import species
from reactor.case.schema import Targets
from reactor.case.values import nearest
from reactor.units import Typed, kinds

_RISE = kinds.TEMPERATURE_DIFFERENCE.within(-1000.0, 3000.0, "10 K")
WANTED = {
    "conversion_chlorine": kinds.FRACTION,
    "chlorine_slip": kinds.FRACTION,
    "chlorine_slip_mass": kinds.MASS_FLOW,
    "hydrogen_chloride_mass": kinds.MASS_FLOW,
    "poly_share_mol": kinds.MOLE_FRACTION,
    "poly_share_mass": kinds.MASS_FRACTION,
    "residence_time": kinds.TIME,
    "space_time": kinds.TIME,
    "pressure_drop": kinds.PRESSURE_DIFFERENCE,
    "temperature_inlet": kinds.TEMPERATURE,
    "temperature_outlet": kinds.TEMPERATURE,
    "temperature_hottest": kinds.TEMPERATURE,
    "temperature_hottest_position": kinds.POSITION,
    "adiabatic_rise": _RISE,
    "heat_reaction": kinds.POWER,
    "heat_removed": kinds.POWER.within(-1e8, 1e8),
    "heat_to_coolant": kinds.POWER.within(-1e8, 1e8),
    "heat_transfer_coefficient": kinds.COEFFICIENT,
    "transfer_units": kinds.NUMBER,
    "sleeve_skin_temperature": kinds.TEMPERATURE,
    "mtsr": kinds.TEMPERATURE,
    "light_off_temperature": kinds.TEMPERATURE,
    "exotherm_margin": _RISE,
    "dew_point_margin": _RISE,
    "light_electrical": kinds.POWER,
    "light_radiant": kinds.POWER,
    "light_into_gas": kinds.POWER,
    "light_absorbed": kinds.POWER,
    "chain_length": kinds.NUMBER,
    "quantum_yield": kinds.NUMBER,
    "thermal_start_share": kinds.FRACTION,
}
BY_SPECIES = {
    "products": kinds.MASS_FLOW,
    "conversion_alkane": kinds.FRACTION.within(-1e6, 1.0),
    "share_mol": kinds.MOLE_FRACTION,
    "share_mass": kinds.MASS_FRACTION,
}
_FORM = re.compile(r"\s*([A-Za-z_]\w*(?:\.[^\s=<>]+)?)\s*(<=|>=|=|<|>)\s*(.+?)\s*$")
WRITE = 'write it like "chlorine_slip=1 %" or "temperature_hottest<120 degC"'


class Goal(NamedTuple):
    """One wish: the name of a result, `=`, `<` or `>`, the figure in SI, and how it was typed."""

    name: str
    relation: str
    value: float
    text: str

    def __str__(self):
        """Return the wish as it is typed."""
        return f"{self.name}{self.relation}{self.text}"

    def holds(self, value):
        """Tell whether a value in SI fulfils the wish; an equality is left to the search."""
        if value is None or self.relation == "=":
            return value is not None
        return value <= self.value if self.relation == "<" else value >= self.value


def kind_of(name):
    """Return the kind of a result and its full name; raise a ValueError with the nearest spelling."""
    head, _, part = name.partition(".")
    if head in BY_SPECIES:
        if not part:
            raise ValueError(f"name the species too, like {head}.CH3Cl")
        return BY_SPECIES[head], f"{head}.{species.find(part)}"
    if head in WANTED and not part:
        return WANTED[head], head
    known = (*WANTED, *BY_SPECIES)
    within = [each for each in known if len(head) > 3 and head in each]
    if within:
        raise ValueError(f"unknown; did you mean {' or '.join(repr(each) for each in within[:3])}?")
    raise ValueError(nearest(name, known, 40))


def goal(text):
    """
    Return the `Goal` that a text of the command line spells; raise a ValueError for the user.

    Examples
    --------
    >>> goal("temperature_hottest < 120 degC").value
    393.15
    """
    match = _FORM.match(text)
    if not match:
        raise ValueError(WRITE)
    kind, name = kind_of(match[1])
    return Goal(name, match[2][0], kind.read(match[3]).si, match[3])


def read(draft, raw):
    """Return the `Targets` of a case after noting the faults."""
    if not raw or not draft.is_table(raw, "targets"):
        return Targets()
    find, wanted = raw.get("find", []), {}
    names = [find] if isinstance(find, str) else find
    if not isinstance(names, list) or not all(isinstance(name, str) for name in names):
        draft.fault(
            "targets.find", 'write one key, like "lamp.power", or several: ["lamp.power", "vessel.length"]'
        )
        names = []
    elif names:
        draft.typed["targets.find"] = Typed(", ".join(names), ", ".join(names), "")
    for name, value in raw.items():
        inner = value.items() if isinstance(value, dict) else [("", value)]
        for part, typed in inner if name != "find" else ():
            full = f"{name}.{part}" if part else name
            try:
                kind, known = kind_of(full)
            except ValueError as error:
                draft.fault(f"targets.{full}", str(error))
                continue
            found = draft.take(f"targets.{full}", kind, typed)
            if found is not None:
                wanted[known] = found
    return Targets(find=tuple(names), wanted=wanted)

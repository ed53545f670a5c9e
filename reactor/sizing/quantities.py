"""Give every number of the block `sizing` its unit, as everywhere else in a result."""

from reactor.case.targets import kind_of
from reactor.result import quantity

UNITS = {  # by the name of the entry; what is not listed is a pure number or a count
    "W": "electrical into_gas absorbed light_electrical heat sensible_heat latent_heat cooling heat_reaction "
    "electrical_same_slip",
    "W*m3": "watts_times_volume",
    "m3": "volume",
    "m": "length gap inside outside wall",
    "s": "residence_time life",
    "h": "hours relamp clean",
    "K": "temperature hottest outlet inlet skin coldest_wall between dew_margin adiabatic_rise",
    "Pa": "pressure pressure_drop",
    "m/s": "velocity",
    "W/m2/K": "overall",
    "W/K": "conductance",
    "kg/h": "acid water hydrogen_chloride soda liquor pumped mass liquid_total liquid chlorine split",
    "mol/s": "moles composition",
    "Nm3/h": "normal_volume",
    "mol/m3": "worst_chlorine",
}
BY_NAME = {name: unit for unit, names in UNITS.items() for name in names.split()}
AS_THEY_ARE = ("rules",)  # records of data, with source and status


def quantities(node, name="", unit="1"):
    """
    Return the records with every number as {value, unit}.

    Inside a mapping by species the unit is that of the mapping.

    Examples
    --------
    >>> quantities({"velocity": 2.0, "count": 4, "why": "so"})
    {'velocity': {'value': 2.0, 'unit': 'm/s'}, 'count': {'value': 4.0, 'unit': '1'}, 'why': 'so'}
    """
    unit = BY_NAME.get(name, unit)
    if isinstance(node, dict):
        return {
            key: value if key in AS_THEY_ARE else quantities(value, key, _unit(node, key, unit))
            for key, value in node.items()
        }
    if isinstance(node, list | tuple):
        return [quantities(value, name, unit) for value in node]
    return quantity(node, unit) if isinstance(node, int | float) and not isinstance(node, bool) else node


def _unit(node, key, unit):
    """Return the unit of an entry: that of the result it is named after, or of what holds it."""
    name = node["name"] if key == "value" and "wanted" in node else key
    try:
        return kind_of(name)[0].si.replace("-", "1")
    except ValueError:
        return unit

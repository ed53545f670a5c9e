"""The heat exchange of one stirred vessel with its jacket, in the same form as that of a tube."""

from dataclasses import dataclass

import numpy as np

from reactor import library
from reactor.errors import CaseError
from reactor.heat.films import stirred_nusselt
from reactor.heat.sleeve import STEFAN_BOLTZMANN, grey_exchange, network
from reactor.heat.wall import GRID, INFRARED_NOTE, Films, assemble, filled, properties

IMPELLERS = ("turbine", "paddle", "baffled turbine")
LEAST = 400.0  # Reynolds number where the correlation begins


@dataclass(frozen=True, kw_only=True)
class Tank:
    """
    One stirred vessel, jacketed on its side and (if `bottom`) on a flat bottom. SI units.

    `stirring` is in turns per second; sleeves stand upright over the whole height.
    """

    diameter: float
    height: float
    stirring: float
    impeller_diameter: float
    impeller: str = "turbine"
    bottom: bool = True
    sleeve_outside: float | None = None
    sleeves: int = 1
    thickness: float | None = None
    conductivity: float | None = None
    sleeve_emissivity: float | None = None
    shell_emissivity: float | None = None


def tank_wall(gas, tank, cooling, lamp_heat=0.0, T_reference=350.0):
    """
    Return the heat exchange of one stirred vessel with its jacket, per metre of height.

    UA of the whole vessel = conductance x height; area = perimeter x height.

    Parameters
    ----------
    gas : callable
        T -> (viscosity, conductivity, heat capacity per mass, density). [SI]
    tank : Tank
        Geometry and stirrer. [SI]
    cooling : Cooling
        Jacket side. [SI]
    lamp_heat : float
        Lamp heat arriving at all sleeves, per metre of height. [W/m]
    T_reference : float
        Where the numbers of the report are taken. [K]

    Returns
    -------
    wall : Wall
        Curves and numbers. [SI]
    """
    tank, cooling, cited = filled(tank, cooling)
    T = np.append(GRID, T_reference)
    films, notes = _films(properties(gas, T), tank)
    perimeter = jacket_area(tank) / tank.height
    core = np.pi * tank.sleeves * (tank.sleeve_outside or 0.0)
    exchange = _exchange(tank, cooling, core / perimeter)
    outward = _outward(tank, cooling, perimeter)
    sleeve = core * films.sleeve if core else None
    shell, radiant = perimeter * films.shell, core * STEFAN_BOLTZMANN * exchange
    seen = network(T, cooling.temperature, shell, sleeve, radiant, outward, lamp_heat)
    constant = library.sheet("heat/constants.csv")["stirred_" + tank.impeller.replace(" ", "_")]
    return assemble(
        films, seen, cooling, word="stirred", areas=(perimeter, core), outward=outward,
        T_reference=T_reference, hydraulic_diameter=tank.diameter, friction=0.0,
        cited=(*cited, constant.cited), notes=notes + ((INFRARED_NOTE,) if core else ()),
    )  # fmt: skip


def jacket_area(tank):
    """
    Return the jacketed area.

    Parameters
    ----------
    tank : Tank
        Geometry. [SI]

    Returns
    -------
    area : float
        Side, and bottom where it is jacketed. [m^2]

    Examples
    --------
    >>> shape = Tank(diameter=0.44, height=0.5, stirring=10.0, impeller_diameter=0.15)
    >>> print(f"{jacket_area(shape):.4f}")
    0.8432
    """
    bottom = np.pi / 4 * tank.diameter**2 if tank.bottom else 0.0
    return float(np.pi * tank.diameter * tank.height + bottom)


def _films(props, tank):
    """Return flow numbers and the film, taken to be the same on vessel and sleeves."""
    if tank.impeller not in IMPELLERS:
        raise CaseError(f"{tank.impeller!r} is not a known impeller; known: {', '.join(IMPELLERS)}")
    reynolds = props.density * tank.stirring * tank.impeller_diameter**2 / props.viscosity
    prandtl = props.viscosity * props.heat_capacity / props.conductivity
    nusselt = stirred_nusselt(np.maximum(reynolds, LEAST), prandtl, tank.impeller)
    film = nusselt * props.conductivity / tank.diameter
    speed = np.full_like(film, np.pi * tank.stirring * tank.impeller_diameter)
    notes = ["the film of stirred gas rests on constants for liquids; it is taken for the sleeves too"]
    if np.any(reynolds < LEAST):
        hottest = f"; Re is {np.min(reynolds):.3g} to {np.max(reynolds):.3g} between 250 and 1250 K"
        notes.append(f"OUT OF DATA RANGE: below Re 400 the film is kept at its value there{hottest}")
    return Films(reynolds, prandtl, speed, film, film if tank.sleeve_outside else None), tuple(notes)


def _exchange(tank, cooling, a):
    if tank.sleeve_outside is None or not cooling.radiation:
        return 0.0
    return grey_exchange(tank.sleeve_emissivity, tank.shell_emissivity, a)


def _outward(tank, cooling, perimeter):
    """Return the conductance from the vessel's face to the coolant, flat wall, per metre of height."""
    if cooling.adiabatic:
        return 0.0
    fouling = cooling.fouling_gas + cooling.fouling_coolant
    return perimeter / (fouling + tank.thickness / tank.conductivity + 1 / cooling.film)

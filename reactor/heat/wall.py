"""The heat exchange of one tube with its coolant, as curves of gas temperature (vessels: `tank`)."""

from dataclasses import dataclass, replace
from typing import Any, NamedTuple

import numpy as np

from reactor import library
from reactor.curve import Curve, tabulate
from reactor.heat.annulus import annulus_nusselt, heating_factor
from reactor.heat.coolant import material
from reactor.heat.films import band, regime, tube_nusselt
from reactor.heat.friction import annulus_friction, tube_friction
from reactor.heat.sleeve import STEFAN_BOLTZMANN, grey_exchange, network

GRID = np.arange(250.0, 1251.0, 25.0)  # gas temperatures of every curve, K
LAMINAR_NOTE = (
    "laminar gas: heat made inside the gas raises the film, up to 1.64 times in a tube; where the gas is "
    "also optically thick a single coefficient means little"
)
INFRARED_NOTE = "radiation from sleeve to shell is counted; infrared taken up by the gas itself is not"


@dataclass(frozen=True, kw_only=True)
class Tube:
    """
    One tube: the gas flows inside the shell, round a lamp sleeve or in the empty tube. SI units.

    `conductivity` and `thickness` are those of the shell's wall; None takes the listed default.
    """

    shell_inside: float
    length: float
    sleeve_outside: float | None = None
    thickness: float | None = None
    conductivity: float | None = None
    roughness: float = 0.0
    sleeve_emissivity: float | None = None
    shell_emissivity: float | None = None


@dataclass(frozen=True, kw_only=True)
class Cooling:
    """
    What takes the heat: coolant film [W/m2/K] and temperature [K], fouling resistances [m2 K/W].

    `overall` fixes U on the shell's inside (no sleeve path then); `adiabatic` lets no heat out.
    """

    film: float | None = None
    temperature: float = 300.0
    fouling_gas: float | None = None
    fouling_coolant: float | None = None
    overall: float | None = None
    adiabatic: bool = False
    radiation: bool = True


@dataclass(frozen=True)
class Wall:
    """
    Heat exchange of one tube with its coolant, at the composition of the mixed feed.

    Heat to the gas per metre = lamp_share(T) x lamp heat - conductance(T) x (T - T_coolant). For a vessel the
    metre is one of its height. The other numbers hold at `T_reference`, for the report.
    """

    conductance: Curve  # gas to coolant, W/m/K
    lamp_share: Curve  # share of the lamp heat at the sleeve that ends in the gas
    skin: Curve | None  # temperature of the sleeve's skin with the lamp on, K
    T_reference: float
    regime: str
    reynolds: float
    prandtl: float
    velocity: float  # mean of the gas; of the impeller tip in a vessel, m/s
    film_shell: float  # W/m2/K
    film_sleeve: float  # W/m2/K, nan without a sleeve
    h_radiation: float  # sleeve to shell, W/m2/K of sleeve, nan without
    overall: float  # conductance over perimeter: what the balance uses, W/m2/K
    overall_film: float  # the same by films, fouling and wall alone, W/m2/K
    band: tuple[float, float]  # multipliers of U, about 5 to 95 %
    perimeter: float  # of the shell's inside (vessel: jacketed area per height), m
    hydraulic_diameter: float
    friction: float  # Darcy; 0 in a vessel
    cited: tuple[library.Cited, ...]
    notes: tuple[str, ...]


class Gas(NamedTuple):
    """Properties of the gas at an array of temperatures, SI."""

    viscosity: np.ndarray
    conductivity: np.ndarray
    heat_capacity: np.ndarray
    density: np.ndarray


class Films(NamedTuple):
    """Flow numbers and gas films at an array of temperatures; `sleeve` is None in an empty tube."""

    reynolds: np.ndarray
    prandtl: np.ndarray
    velocity: np.ndarray
    shell: np.ndarray
    sleeve: np.ndarray | None


def wall(gas, mass_flow, tube, cooling, lamp_heat=0.0, T_reference=350.0):
    """
    Return the heat exchange of one tube with its coolant.

    Parameters
    ----------
    gas : callable
        T -> (viscosity, conductivity, heat capacity per mass, density) of the mixed feed. [SI]
    mass_flow : float
        Gas in this one tube. [kg/s]
    tube : Tube
        Geometry. [SI]
    cooling : Cooling
        Coolant side. [SI]
    lamp_heat : float
        Lamp heat arriving at the sleeve, per metre; sets the level of the radiation. [W/m]
    T_reference : float
        Where the numbers of the report are taken. [K]

    Returns
    -------
    wall : Wall
        Curves and numbers. [SI]
    """
    if mass_flow <= 0:
        raise ValueError("mass_flow must be positive; for gas at rest use gap_nusselt")
    tube, cooling, cited = filled(tube, cooling)
    T = np.append(GRID, T_reference)
    props = properties(gas, T)
    perimeter, core = np.pi * tube.shell_inside, np.pi * (tube.sleeve_outside or 0.0)
    radiant = core * STEFAN_BOLTZMANN * _exchange(tube, cooling)
    outward = _outward(tube, cooling)
    heating = 1.0
    for _ in range(3):  # the film at a hot sleeve depends a little on its temperature
        films = _films(props, mass_flow, tube, heating)
        sleeve = None if films.sleeve is None else core * films.sleeve
        seen = network(T, cooling.temperature, perimeter * films.shell, sleeve, radiant, outward, lamp_heat)
        heating = 1.0 if sleeve is None else heating_factor(T, seen.skin)
    word, notes = _judge(films.reynolds[-1], core)
    return assemble(
        films, seen, cooling, areas=(perimeter, core), outward=outward, T_reference=T_reference, word=word,
        hydraulic_diameter=tube.shell_inside - (tube.sleeve_outside or 0.0),
        friction=_friction(float(films.reynolds[-1]), tube), cited=cited, notes=notes,
    )  # fmt: skip


def assemble(films, seen, cooling, *, areas, outward, T_reference, word, cited, **rest):
    """Return a `Wall`; the last place of each array belongs to `T_reference`; `areas`: shell, sleeve [m]."""
    perimeter, core = areas
    given = cooling.overall is not None or cooling.adiabatic
    if cooling.overall is not None:
        ones = np.ones_like(seen.share)
        seen = seen._replace(conductance=cooling.overall * perimeter * ones, share=ones)
    if not given:
        cited = (*cited, library.sheet("heat/constants.csv")[f"band_{word}"].cited)
    shell = perimeter * films.shell[-1]
    flow: dict[str, Any] = {
        name: float(getattr(films, name)[-1]) for name in ("reynolds", "prandtl", "velocity")
    }
    return Wall(
        conductance=on_grid(seen.conductance),
        lamp_share=on_grid(seen.share),
        skin=on_grid(seen.skin) if core else None,
        T_reference=T_reference,
        regime=word,
        **flow,
        film_shell=float(films.shell[-1]),
        film_sleeve=float(films.sleeve[-1]) if core else float("nan"),
        h_radiation=float(seen.link[-1] / core) if core else float("nan"),
        overall=float(seen.conductance[-1] / perimeter),
        overall_film=float(shell * outward / (shell + outward) / perimeter),
        band=(1.0, 1.0) if given else band(word),
        perimeter=perimeter,
        cited=cited,
        **rest,
    )


def on_grid(values):
    """Return values at the temperatures of `GRID` (and one more, dropped) as a curve."""
    return tabulate(lambda _: values[: len(GRID)], GRID[0], GRID[-1], len(GRID))


def properties(gas, T):
    """Return the gas properties at an array of temperatures."""
    return Gas(*np.array([gas(float(each)) for each in T], float).T)


def filled(shape, cooling):
    """Return geometry and cooling with the listed defaults in place of None, and what was taken."""
    sheet = library.sheet("heat/constants.csv")
    names = {"thickness": "wall_thickness", "sleeve_emissivity": "sleeve_emissivity",
             "shell_emissivity": "shell_emissivity"}  # fmt: skip
    if shape.sleeve_outside is None:
        names = {"thickness": "wall_thickness"}
    taken = {key: sheet[name] for key, name in names.items() if getattr(shape, key) is None}
    fouling = {key: sheet[key] for key in ("fouling_gas", "fouling_coolant") if getattr(cooling, key) is None}
    if cooling.overall is not None and cooling.adiabatic:
        raise ValueError("give either a fixed overall coefficient or an adiabatic wall")
    if cooling.overall is not None or cooling.adiabatic:
        fouled = replace(cooling, film=cooling.film or np.inf, fouling_gas=0.0, fouling_coolant=0.0)
        fouling = {}
    elif cooling.film is None:
        raise ValueError("a coolant needs a film coefficient, or `overall`, or `adiabatic`")
    else:
        fouled = replace(cooling, **{key: datum.value for key, datum in fouling.items()})
    steel = material("carbon steel")
    more = {"conductivity": steel.conductivity} if shape.conductivity is None else {}
    shape = replace(shape, **more, **{key: datum.value for key, datum in taken.items()})
    cited = tuple(datum.cited for datum in (*taken.values(), *fouling.values()))
    return shape, fouled, cited + ((steel.cited,) if more else ())


def _judge(reynolds, core):
    """Return the word for the flow and the remarks that go with it."""
    word = regime(reynolds)
    return word, ((LAMINAR_NOTE,) if word == "laminar" else ()) + ((INFRARED_NOTE,) if core else ())


def _friction(reynolds, tube):
    if tube.sleeve_outside is None:
        return float(tube_friction(reynolds, tube.roughness / tube.shell_inside))
    return float(annulus_friction(reynolds, tube.sleeve_outside / tube.shell_inside))


def _exchange(tube, cooling):
    if tube.sleeve_outside is None or not cooling.radiation:
        return 0.0
    a = tube.sleeve_outside / tube.shell_inside
    return grey_exchange(tube.sleeve_emissivity, tube.shell_emissivity, a)


def _outward(tube, cooling):
    """Return the conductance per metre from the shell's inner face to the coolant."""
    if cooling.adiabatic:
        return 0.0
    inside, outside = tube.shell_inside, tube.shell_inside + 2 * tube.thickness
    resistance = (
        cooling.fouling_gas / (np.pi * inside)
        + np.log(outside / inside) / (2 * np.pi * tube.conductivity)
        + (cooling.fouling_coolant + 1 / cooling.film) / (np.pi * outside)
    )
    return 1 / resistance


def _films(props, mass_flow, tube, heating):
    """Return flow numbers and films at shell and sleeve."""
    core, gap = tube.sleeve_outside or 0.0, tube.shell_inside - (tube.sleeve_outside or 0.0)
    reynolds = 4 * mass_flow / (np.pi * (tube.shell_inside + core) * props.viscosity)
    prandtl = props.viscosity * props.heat_capacity / props.conductivity
    area = np.pi / 4 * (tube.shell_inside**2 - core**2)
    velocity = mass_flow / (area * props.density)
    if not core:
        nusselt = tube_nusselt(reynolds, prandtl, gap, tube.length)
        return Films(reynolds, prandtl, velocity, nusselt * props.conductivity / gap, None)
    size = (core, tube.shell_inside, tube.length)
    shell = annulus_nusselt(reynolds, prandtl, *size, "outer") * props.conductivity / gap
    sleeve = annulus_nusselt(reynolds, prandtl, *size, "inner", heating) * props.conductivity / gap
    return Films(reynolds, prandtl, velocity, shell, sleeve)

"""Read the rooms for a case: its chemistry, the light, the heat exchange and the wall of one tube or tank."""

from dataclasses import replace

import numpy as np

from reactor import chemistry, heat, photons
from reactor.case import Sleeve
from reactor.chemistry import network
from reactor.chemistry import wall as wall_chemistry
from reactor.models.assemble import Plant, mixed_feed

MOST = 120  # species of a mechanism that is made unasked
HOTTER = 150.0  # K; how much hotter than its feed a made mechanism is weighed where no limit is stated
TURNDOWN = 0.2  # share of full flow at which the sleeve skin is asked for again: it may be hotter
THREAD = 1e-4  # of the shell: the sleeve of a tank that has none, of no volume to speak of


def mechanism(case):
    """
    Return the `Mechanism` of a case: its own, else the small one, else one made for its feed.

    One is made where the feed holds alkanes that the small one does not attack.
    """
    if case.chemistry.mechanism:
        return chemistry.mechanism(case.path(case.chemistry.mechanism))
    moles: dict = {}
    for stream in case.feed.values():
        for species, amount in stream.moles.items():
            moles[species] = moles.get(species, 0.0) + amount
    if not moles.get("Cl2") or not network.beyond_small(moles):
        return chemistry.mechanism()
    coldest = min(stream.temperature for stream in case.feed.values())
    fed = {species: amount for species, amount in moles.items() if network.find(species)}
    vessels = ("tube",) if case.vessel.kind == "plug flow" else ("tank",)
    span = coldest, case.limits.hottest or coldest + HOTTER
    ratio = sum(fed.values()) / moles["Cl2"]
    return chemistry.mechanism(network.mechanism_file(fed, ratio, span, most=MOST, vessels=vessels))


def plant(case, gas, light, U_factor=1.0, flow=1.0):
    """
    Return the `Plant` of a case.

    Parameters
    ----------
    case : Case
        The checked case.
    gas : Mechanism
        Chemistry.
    light : Light
        Light of one tube or tank.
    U_factor : float
        Multiplies the heat exchange: the low or high end of its band. [-]
    flow : float
        Share of the full flow that the films see. [-]
    """
    feed = mixed_feed(case, gas)
    exchange, capacity = heat_exchange(case, gas, light, feed, flow)
    if U_factor != 1.0:
        exchange = scaled(exchange, U_factor)
    return Plant(gas, light, exchange, atom_loss(case, gas, feed), capacity)


def lamps(case):
    """Return the light of one tube or tank."""
    inside, outside = radii(case)
    one = photons.light(located(case), sleeve_of(case), inside, outside, case.vessel.length)
    return replace(one, area=one.area * sleeves(case))


def radii(case):
    """Return sleeve and shell radius of the gas gap [m]; a tank counts as a ring of equal volume."""
    sleeve, shell = sleeve_of(case).outside / 2, case.vessel.shell_inside / 2
    if case.vessel.kind == "plug flow":
        return sleeve, shell
    number = sleeves(case)
    return sleeve, float(np.sqrt(sleeve**2 + (shell**2 - number * sleeve**2) / number))


def sleeves(case):
    """Return how many sleeves one vessel holds."""
    if case.vessel.kind == "plug flow":
        return 1
    return sleeve_of(case).number or max(1, sum(lamp.number for lamp in case.lamp))


def located(case):
    """Return the lamps of a case with the paths of their own spectra resolved."""
    return [
        replace(
            lamp,
            spectrum=lamp.spectrum and str(case.path(lamp.spectrum)),
            lit_to=case.vessel.length if lamp.lit_to is None else lamp.lit_to,
        )
        for lamp in case.lamp
    ]


def sleeve_of(case):
    """Return the sleeve of a case, its transmission path resolved; a thread where there is none."""
    if case.sleeve is None:
        thread = THREAD * case.vessel.shell_inside
        return Sleeve(outside=thread, thickness=0.1 * thread, number=1)
    return replace(
        case.sleeve, transmission=case.sleeve.transmission and str(case.path(case.sleeve.transmission))
    )


def heat_exchange(case, gas, light, feed, flow=1.0):
    """Return the `Wall` of one tube or tank and the heat capacity flow of its coolant [W/K]."""
    cooling, medium = case.cooling, None
    if cooling.mode != "none" and cooling.medium:
        medium = heat.medium(cooling.medium)
    sides = heat.Cooling(
        film=cooling.film or (medium and medium.film),
        temperature=cooling.inlet or feed.temperature,
        fouling_gas=cooling.fouling_gas,
        fouling_coolant=cooling.fouling_coolant,
        overall=cooling.overall,
        adiabatic=cooling.mode == "none",
    )
    lamp_heat = float(np.max(light.sleeve_heat, initial=0.0))

    def properties(T):
        found = gas.transport(T, case.vessel.pressure, feed.moles)
        return found.viscosity, found.conductivity, found.heat_capacity_mass, found.density

    if case.vessel.kind == "plug flow":
        per_tube = flow * feed.mass(gas) / case.vessel.parallel
        exchange = heat.wall(
            properties, per_tube, tube_shape(case), sides, lamp_heat, feed.temperature + 50.0
        )
    else:
        exchange = heat.tank_wall(properties, tank_shape(case), sides, lamp_heat, feed.temperature + 50.0)
    return exchange, coolant_capacity(case, medium)


def tube_shape(case):
    """Return the tube as the heat room wants it."""
    return heat.Tube(
        shell_inside=case.vessel.shell_inside,
        length=case.vessel.length,
        sleeve_outside=case.sleeve.outside,
        thickness=case.vessel.shell_wall,
        conductivity=shell_conductivity(case),
        sleeve_emissivity=case.sleeve.emissivity,
    )


def tank_shape(case):
    """Return the tank as the heat room wants it."""
    return heat.Tank(
        diameter=case.vessel.shell_inside,
        height=case.vessel.length,
        stirring=case.vessel.stirring,
        impeller_diameter=case.vessel.impeller,
        sleeve_outside=case.sleeve and case.sleeve.outside,
        sleeves=sleeves(case),
        thickness=case.vessel.shell_wall,
        conductivity=shell_conductivity(case),
        sleeve_emissivity=case.sleeve and case.sleeve.emissivity,
    )


def shell_conductivity(case):
    """Return the conductivity of a stated shell material [W/m/K], else None."""
    stated = case.vessel.shell_material
    return None if stated == "not stated" else heat.material(stated).conductivity


def coolant_capacity(case, medium):
    """Return the heat capacity flow of one tube's coolant [W/K]; inf at constant temperature."""
    if case.cooling.mode not in ("co-current", "counter-current"):
        return np.inf
    specific = medium.heat_capacity if medium else np.nan
    return heat.capacity(case.cooling.flow, specific)


def scaled(exchange, factor):
    """Return a `Wall` with all its heat exchange multiplied."""
    curve = exchange.conductance
    more = curve._replace(value=curve.value * factor, slope=curve.slope * factor)
    return replace(exchange, conductance=more, overall=exchange.overall * factor)


def atom_loss(case, gas, feed):
    """Return the first-order loss of chlorine atoms at the wall [1/s], as stated or by sticking."""
    if case.chemistry.wall_loss is not None:
        return case.chemistry.wall_loss
    sticking = case.chemistry.wall_sticking
    if sticking is None:
        sticking = wall_chemistry.default_sticking().value
    if sticking == 0.0:
        return 0.0
    inside, outside = radii(case)
    found = gas.transport(feed.temperature, case.vessel.pressure, feed.moles)
    speed = wall_chemistry.mean_speed(feed.temperature, gas.molar_mass[gas.index["Cl"]])
    area_to_volume = 2 * (inside + outside) / (outside**2 - inside**2)
    return wall_chemistry.wall_loss(
        sticking,
        speed,
        found.diffusivity_chlorine_atom,
        area_to_volume,
        wall_chemistry.annulus_eigenvalue(inside, outside),
    )

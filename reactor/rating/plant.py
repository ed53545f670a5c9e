"""Read the rooms for a case: its chemistry, the light, the heat exchange and the wall of one tube or tank."""

from dataclasses import replace

import numpy as np

from reactor import chemistry, heat, photons
from reactor.case import Sleeve
from reactor.chemistry import wall as wall_chemistry
from reactor.models.assemble import Plant, mixed_feed

# what the small mechanism was made for: feeds of these alone need no look at networks
PLAIN = frozenset(("CH4", "C2H6", "C3H8", "CH3Cl", "CH2Cl2", "C2H5Cl", "Cl2", "HCl", "N2", "Ar", "CO2", "O2"))
BODY = 0.01  # m, radius of a lamp outside the gas where it is not stated: an arc or phosphor tube of 20 mm
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
    if not moles.get("Cl2") or moles.keys() <= PLAIN:
        return chemistry.mechanism()
    from reactor.chemistry import network

    if not network.beyond_small(moles):
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
    return photons.light(located(case), sleeve_of(case), shape(case), case.vessel.length)


def shape(case):
    """Return the geometry of one tube or tank as the photon room wants it."""
    vessel, sleeve = case.vessel, sleeve_of(case)
    mirror = vessel.wall_reflectance
    if vessel.kind != "plug flow":
        return photons.Immersed(sleeve.outside / 2, vessel.shell_inside / 2, sleeves(case), vessel.lamp_circle,
                                sleeve.thickness, mirror)
    if vessel.geometry == "annulus":
        return photons.Annulus(sleeve.outside / 2, vessel.shell_inside / 2, sleeve.thickness, mirror,
                               vessel.lamp_passes)
    if vessel.geometry == "channel":
        return photons.Channel(vessel.gap, vessel.width, sleeve.thickness, vessel.lit_sides, mirror)
    number = sum(lamp.number for lamp in case.lamp)
    around = vessel.geometry == "lamps around tube"
    return photons.Tubes(
        vessel.shell_inside / 2, sleeve.thickness, vessel.axis_distance,
        tubes=vessel.ring or 1 if vessel.geometry == "tubes around lamp" else 1, lamps=max(1, number) if around else 1,
        reflector=None if vessel.reflector == "none" else vessel.reflector, size=vessel.reflector_size or 0.0,
        reflectance=vessel.reflectance or 0.0, body=max((lamp.radius or BODY for lamp in case.lamp), default=BODY),
    )


def inner(case):
    """Return whether the lamps stand inside the gas, in a sleeve."""
    return case.vessel.kind != "plug flow" or case.vessel.geometry == "annulus"


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
        per_tube, alike = flow * feed.mass(gas) / case.vessel.parallel, equal_tubes(case)
        exchange = heat.wall(properties, per_tube / alike, tube_shape(case), sides, lamp_heat, feed.temperature + 50.0)
        exchange = several(exchange, alike, cooled(case))
    else:
        exchange = heat.tank_wall(properties, tank_shape(case), sides, lamp_heat, feed.temperature + 50.0)
    return exchange, coolant_capacity(case, medium)


def tube_shape(case):
    """Return the tube as the heat room wants it; a channel is a bundle of tubes of its hydraulic diameter."""
    if not inner(case):
        return heat.Tube(shell_inside=hydraulic_diameter(case), length=case.vessel.length,
                         thickness=case.vessel.shell_wall or case.sleeve.thickness, conductivity=shell_conductivity(case))
    return heat.Tube(shell_inside=case.vessel.shell_inside, length=case.vessel.length,
                     sleeve_outside=case.sleeve.outside, thickness=case.vessel.shell_wall,
                     conductivity=shell_conductivity(case), sleeve_emissivity=case.sleeve.emissivity)


def hydraulic_diameter(case):
    """Return four times gas area over wetted perimeter of a tube without sleeve or of a channel [m]."""
    if case.vessel.geometry != "channel":
        return case.vessel.shell_inside
    return 2 * case.vessel.gap * case.vessel.width / (case.vessel.gap + case.vessel.width)


def equal_tubes(case):
    """Return how many tubes of the hydraulic diameter have the area and the wetted perimeter of one gas space."""
    if case.vessel.geometry != "channel":
        return 1.0
    return case.vessel.gap * case.vessel.width / (np.pi / 4 * hydraulic_diameter(case) ** 2)


def cooled(case):
    """Return the share of the wetted perimeter that is cooled: the windows of a channel are not."""
    vessel = case.vessel
    if vessel.geometry != "channel":
        return 1.0
    return 1 - vessel.lit_sides * vessel.width / (2 * (vessel.gap + vessel.width))


def several(exchange, number, share):
    """Return the `Wall` of `number` equal tubes side by side of which a share of the perimeter is cooled."""
    if number == 1.0 and share == 1.0:
        return exchange
    more = scaled(exchange, number * share)
    note = "channel: films of a tube of its hydraulic diameter; the lit faces take no heat"
    return replace(more, overall=exchange.overall * share, perimeter=exchange.perimeter * number,
                   notes=(*exchange.notes, note))


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
    found = gas.transport(feed.temperature, case.vessel.pressure, feed.moles)
    speed = wall_chemistry.mean_speed(feed.temperature, gas.molar_mass[gas.index["Cl"]])
    return wall_chemistry.wall_loss(sticking, speed, found.diffusivity_chlorine_atom, *to_the_wall(case))


def to_the_wall(case):
    """Return wetted wall over gas volume [1/m] and the smallest eigenvalue of diffusion to the wall [1/m2]."""
    if case.vessel.geometry == "channel":
        gap, width = case.vessel.gap, case.vessel.width
        return 2 * (1 / gap + 1 / width), np.pi**2 * (1 / gap**2 + 1 / width**2)
    if not inner(case):
        radius = case.vessel.shell_inside / 2
        return 2 / radius, wall_chemistry.tube_eigenvalue(radius)
    inside, outside = radii(case)
    return 2 * (inside + outside) / (outside**2 - inside**2), wall_chemistry.annulus_eigenvalue(inside, outside)

"""The headline numbers of a rated case, each by its printed definition (see the README for the list)."""

from dataclasses import replace

import numpy as np

from reactor.models.chain import light_order
from reactor.result import by_species, quantity
from reactor.stream import temperature_of

START_SHARE = 0.1  # above it a product count per photon means nothing, and none is given
HOUR = 3600.0
ORDERS = 60  # stations at which the light order is asked for


def headline(case, plant, profile, feed):
    """Return all results that follow from the profile and the equipment."""
    gas = plant.gas
    return (
        conversion(profile, gas)
        | products(profile, gas)
        | times(profile)
        | heat(profile, gas, feed)
        | light(case, plant, profile)
        | exchange(case, plant, profile)
        | states(profile, gas)
    )


def exchange(case, plant, profile):
    """Return U, transfer units and the sleeve's skin temperature at the hottest lit station."""
    wall, inlet = plant.wall, profile.inlet
    UA = wall.overall * wall.perimeter * case.vessel.length * case.vessel.vessels
    units = UA / (inlet.moles @ plant.gas.heat_capacity(inlet.temperature))
    lit = profile.photolysis > 0
    skin = None
    if wall.skin is not None and lit.any():
        skin = float(wall.skin(profile.temperature[lit].max())[0])
    return {
        "heat_transfer_coefficient": quantity(wall.overall, "W/m2/K"),
        "transfer_units": quantity(units, "1"),
        "sleeve_skin_temperature": quantity(skin, "K"),
        "reynolds_number": quantity(wall.reynolds, "1"),
    }


def states(profile, gas):
    """Return the steady states of a tank, coldest first; nothing for a tube."""
    if not profile.states:
        return {}
    chlorine, fed = gas.index["Cl2"], profile.fed
    share = fed[chlorine] / (fed @ gas.molar_mass)
    return {
        "steady_states": [
            {
                "temperature": quantity(s.T, "K"),
                "chlorine_slip": quantity(s.n[chlorine] / share, "1"),
                "stable": s.stable,
                "growth_rate": quantity(s.growth_rate, "1/s"),
            }
            for s in profile.states
        ]
    }


def conversion(profile, gas):
    """Return conversions, slip, acid and product split (shares of the chlorinated organics formed)."""
    fed, out = profile.fed, profile.outlet.moles
    chlorine, acid = gas.index["Cl2"], gas.index["HCl"]
    organic = [i for i in np.flatnonzero(fed > 0) if _has(gas, i, "C") and _has(gas, i, "H")]
    kept = 1 - out[chlorine] / fed[chlorine]
    return {
        "conversion_chlorine": quantity(kept, "1"),
        "conversion_alkane": by_species({gas.species[i]: 1 - out[i] / fed[i] for i in organic}, "1"),
        "chlorine_slip": quantity(out[chlorine] / fed[chlorine], "1"),
        "chlorine_slip_mass": quantity(out[chlorine] * gas.molar_mass[chlorine] * HOUR, "kg/h"),
        "hydrogen_chloride_mass": quantity(out[acid] * gas.molar_mass[acid] * HOUR, "kg/h"),
    }


def _has(gas, species, element):
    return gas.atoms[species, gas.elements.index(element)] > 0


def chlorinated(gas):
    """Return the numbers of the closed-shell species with at least one C and one Cl and no O."""
    carbon, chlorine, oxygen = (gas.atoms[:, gas.elements.index(e)] > 0 for e in ("C", "Cl", "O"))
    closed = np.array([kind == "molecule" for kind in gas.kinds])
    return np.flatnonzero(closed & carbon & chlorine & ~oxygen)


def products(profile, gas):
    """Return what is formed, net of what is fed: couplings too in kg/h, shares by mol and mass."""
    formed = np.maximum(profile.outlet.moles - profile.fed, 0.0)
    chloride = chlorinated(gas)
    moles, mass = formed[chloride], (formed * gas.molar_mass)[chloride]
    many = gas.atoms[chloride, gas.elements.index("Cl")] >= 2
    names = [gas.species[i] for i in chloride]
    made = {gas.species[i]: formed[i] * gas.molar_mass[i] * HOUR for i in _formed(profile, gas)}
    share_mol, share_mass = moles / max(moles.sum(), 1e-300), mass / max(mass.sum(), 1e-300)
    found = moles.sum() > 1e-15
    return {
        "products": by_species(dict(sorted(made.items(), key=lambda item: -item[1])), "kg/h"),
        "share_mol": by_species(dict(zip(names, share_mol, strict=True)) if found else {}, "1"),
        "share_mass": by_species(dict(zip(names, share_mass, strict=True)) if found else {}, "1"),
        "poly_share_mol": quantity(share_mol[many].sum() if found else None, "1"),
        "poly_share_mass": quantity(share_mass[many].sum() if found else None, "1"),
    }


def _formed(profile, gas):
    """Return the numbers of closed-shell organics that leave in larger amount than they are fed."""
    gain = profile.outlet.moles - profile.fed
    return [
        i
        for i in range(len(gas.species))
        if gas.kinds[i] == "molecule" and _has(gas, i, "C") and gain[i] > 1e-15
    ]


def times(profile):
    """Return the residence time (integral of A dz/Q) and the space time (volume over inlet flow)."""
    inlet = profile.inlet
    return {
        "residence_time": quantity(profile.total("time"), "s"),
        "space_time": quantity(profile.volume / inlet.volume_flow(), "s"),
    }


def heat(profile, gas, feed):
    """Return temperatures, adiabatic rise, heat of reaction and what the walls take."""
    return {
        "temperature_inlet": quantity(profile.inlet.temperature, "K"),
        "temperature_outlet": quantity(profile.outlet.temperature, "K"),
        "temperature_hottest": quantity(profile.hottest[0], "K"),
        "temperature_hottest_position": quantity(profile.hottest[1], "m"),
        "adiabatic_rise": quantity(adiabatic_rise(profile, gas, feed), "K"),
        "heat_reaction": quantity(profile.total("heat_reaction"), "W"),
        "heat_removed": quantity(profile.total("to_wall"), "W"),
        "heat_lamp_to_gas": quantity(profile.total("lamp_heat"), "W"),
        "heat_to_coolant": quantity(profile.total("coolant"), "W"),
        "pressure_drop": quantity(profile.inlet.pressure - profile.outlet.pressure, "Pa"),
    }


def adiabatic_rise(profile, gas, feed):
    """
    Return the rise [K] from the mixed feed when all chlorine is used at the computed product split.

    The composition change is scaled to complete use; no light, no cooling. None where nothing has reacted.
    """
    chlorine = gas.index["Cl2"]
    change = profile.outlet.moles - profile.fed
    used = -change[chlorine] / profile.fed[chlorine]
    if used < 1e-9:
        return None
    done = np.maximum(profile.fed + change / used, 0.0)
    return temperature_of(done, feed.enthalpy(gas), gas, feed.temperature + 100.0) - feed.temperature


def light(case, plant, profile):
    """Return the light account in watts and photons, chain length, quantum yield and light order."""
    gas, vessels = plant.gas, case.vessel.vessels
    watts = {account.name: account.watts * vessels for account in plant.light.accounts}
    acid = gas.index["HCl"]
    made = profile.outlet.moles[acid] - profile.fed[acid]
    photons, thermal = profile.total("photons"), profile.total("thermal_starts")
    started = 2 * photons + thermal
    share = thermal / started if started > 0 else None
    per_photon = made / photons if photons > 0 and share is not None and share <= START_SHARE else None
    return {
        "light_electrical": quantity(watts.get("mains", 0.0), "W"),
        "light_radiant": quantity(watts.get("radiant", 0.0), "W"),
        "light_into_gas": quantity(watts.get("into gas", 0.0), "W"),
        "light_absorbed": quantity(profile.total("photon_power"), "W"),
        "photons_absorbed": quantity(photons, "mol/s"),
        "chain_length": quantity(made / started if started > 0 else None, "1"),
        "quantum_yield": quantity(per_photon, "1"),
        "light_order": quantity(mean_order(profile, gas, plant.wall_loss), "1"),
        "thermal_start_share": quantity(share, "1"),
    }


def bracket(profile, mixed, gas):
    """Return, for local radical pools, what one fully mixed pool would give: the other end of the bracket."""
    if mixed is None:
        return {}
    beside = conversion(mixed, gas)
    return {
        "mixed_pool": [{
            "conversion_chlorine": beside["conversion_chlorine"],
            "chlorine_slip": beside["chlorine_slip"],
            "temperature_hottest": quantity(mixed.hottest[0], "K"),
            "photons_absorbed": quantity(mixed.total("photons"), "mol/s"),
        }]
    }


def mean_order(profile, gas, wall_loss):
    """Return the light order averaged over the HCl formed where it is lit; None in the dark."""
    profile = spread(profile, gas)
    order = light_order(profile, gas, wall_loss)
    acid = gas.index["HCl"]
    if profile.kind == "plug flow":
        made, middle = np.diff(profile.moles[:, acid]), (order[1:] + order[:-1]) / 2
    else:
        made, middle = np.diff(profile.moles[:, acid], prepend=profile.inlet.moles[acid]), order
    lit = np.isfinite(middle) & (made > 0)
    return float(np.average(middle[lit], weights=made[lit])) if lit.any() else None


def spread(profile, gas):
    """Return the profile at stations that share the HCl formed evenly, with both sides of every lamp edge."""
    acid = np.maximum.accumulate(profile.moles[:, gas.index["HCl"]])
    even = np.searchsorted(acid, np.linspace(acid[0], acid[-1], ORDERS))
    edge = np.flatnonzero(np.diff(profile.photolysis > 0))
    last = len(acid) - 1
    keep = sorted(set(np.clip([0, last, *even, *edge, *(edge + 1)], 0, last).tolist()))
    names = ("z", "moles", "temperature", "coolant", "pressure", "photolysis")
    return replace(profile, **{name: getattr(profile, name)[keep] for name in names})

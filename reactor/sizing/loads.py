"""
What stands behind the reactor.

HCl absorber, caustic scrubber (normal and peak), condenser with its dew points.
"""

import numpy as np

from reactor.hazards import dewpoint
from reactor.sizing.data import cited, practice

SODA = 0.0399971  # kg/mol
HOUR = 3600.0


def loads(case, probe, result, options):
    """
    Return the loads of a rated reactor as plain records, flows in kg/h and heat in W.

    The absorber takes all HCl that leaves; the scrubber takes the chlorine slip and what HCl passes the
    absorber, and at its peak all chlorine that is fed: the lamps are off and the feed still runs.
    """
    gas, out, fed = probe.gas, probe.profile.outlet, probe.profile.fed
    acid, chlorine = (out.moles[gas.index[s]] for s in ("HCl", "Cl2"))
    names = (
        "acid_strength",
        "acid_heat",
        "caustic_strength",
        "caustic_chlorine_heat",
        "caustic_acid_heat",
        "absorber_slip",
        "pump_factor",
        "condenser_temperature",
    )
    return {
        "absorber": absorber(acid * gas.molar_mass[gas.index["HCl"]] * HOUR, acid),
        "scrubber_normal": scrubber(chlorine, practice("absorber_slip") * acid, gas),
        "scrubber_peak": scrubber(float(fed[gas.index["Cl2"]]), 0.0, gas),
        "condenser": condenser(probe),
        "rules": cited(*names),
        "remarks": [
            "the gas behind the absorber is wet: chlorine in it attacks steel and needs titanium, glass or plastic",
            "the scrubber does not take alkanes or chlorides: its vent is still fuel",
            "peak: full chlorine feed with the lamps off, reached at once; how long it lasts is the valve's matter",
        ],
    }


def absorber(mass, moles):
    """
    Return the acid made and the heat of absorbing it.

    Parameters
    ----------
    mass : float
        Hydrogen chloride. [kg/h]
    moles : float
        The same. [mol/s]

    Examples
    --------
    >>> found = absorber(52.3, 52.3 / 3.6 / 36.461)
    >>> print(f"{found['acid']:.1f} kg/h, {found['heat'] / 1e3:.1f} kW")
    163.4 kg/h, 24.5 kW
    """
    strength = practice("acid_strength")
    return {
        "hydrogen_chloride": float(mass),
        "acid": float(mass / strength),
        "strength": strength,
        "water": float(mass / strength - mass),
        "heat": float(-moles * practice("acid_heat")),
    }


def scrubber(chlorine, acid, gas):
    """
    Return the soda that chlorine and HCl [mol/s] need, as pure NaOH, as liquor with its excess.

    And the heat.
    """
    soda = (2 * chlorine + acid) * SODA * HOUR
    heat = -(chlorine * practice("caustic_chlorine_heat") + acid * practice("caustic_acid_heat"))
    return {
        "chlorine": float(chlorine * gas.molar_mass[gas.index["Cl2"]] * HOUR),
        "soda": float(soda),
        "liquor": float(soda / practice("caustic_strength")),
        "strength": practice("caustic_strength"),
        "pumped": float(practice("pump_factor") * soda / practice("caustic_strength")),
        "heat": float(heat),
    }


def condenser(probe):
    """
    Return the dew points of the outlet, before and after the HCl is absorbed.

    And what a condenser takes and finds.

    Duty: cooling of all gas to the condenser, without the latent heat of the little that condenses from a
    gas so dilute (said in the record); liquid: flash of the acid-free gas by Raoult's law.
    """
    gas, out = probe.gas, probe.profile.outlet
    T = practice("condenser_temperature")
    dry = out.moles.copy()
    for species in ("HCl", "Cl2"):
        dry[gas.index[species]] = 0.0
    liquid = flash(dry, T, out.pressure, gas)
    cooling = float(dry @ (gas.enthalpy(out.temperature) - gas.enthalpy(T)))
    coldest = float(np.min(np.minimum(probe.profile.temperature, probe.profile.coolant)))
    rows = [
        _dew("outlet", out.moles, out.pressure, gas),
        _dew("outlet without HCl and Cl2", dry, out.pressure, gas),
        _dew("the same at 6 bar absolute", dry, 6e5, gas),
    ]
    return {
        "temperature": T,
        "pressure": out.pressure,
        "dew_points": rows,
        "coldest_wall": coldest,
        "dew_margin": None if rows[0]["temperature"] is None else coldest - rows[0]["temperature"],
        "sensible_heat": cooling,
        "latent_heat": float(_latent(liquid, gas, T)),
        "liquid": {
            s: float(n * m * HOUR)
            for s, n, m in zip(gas.species, liquid, gas.molar_mass, strict=True)
            if n > 1e-9 * dry.sum()
        },
        "liquid_total": float(liquid @ gas.molar_mass * HOUR),
    }


def _dew(where, moles, P, gas):
    found = dewpoint.dew_point(dict(zip(gas.species, moles / moles.sum(), strict=True)), P)
    return {
        "where": where,
        "temperature": None if found is None else float(found.temperature),
        "species": None if found is None else found.species,
        "phase": None if found is None else found.phase,
    }


def flash(moles, T, P, gas):
    """Return the liquid [mol/s] that an ideal mixture leaves at T [K] and P [Pa] (Rachford and Rice)."""
    known = set(dewpoint._curves())
    z = moles / moles.sum()
    K = np.array([dewpoint.vapour_pressure(s, T) / P if s in known else np.inf for s in gas.species])
    heavy = np.isfinite(K) & (z > 0)

    def balance(vapour):
        return float((z[heavy] * (K[heavy] - 1) / (1 + vapour * (K[heavy] - 1))).sum() + z[~heavy].sum() / vapour)

    low, high = 1e-9, 1.0
    if (z[heavy] / K[heavy]).sum() <= 1.0:  # above the dew point: all vapour
        return np.zeros_like(moles)
    for _ in range(200):
        middle = (low + high) / 2
        low, high = (middle, high) if balance(middle) > 0 else (low, middle)
    x = np.where(heavy, z / (1 + low * (np.where(heavy, K, 2.0) - 1)), 0.0)
    return x * (1 - low) * moles.sum()


def _latent(liquid, gas, T):
    """Return the latent heat of a liquid [W], by Clausius and Clapeyron."""
    heat = 0.0
    for species, n in zip(gas.species, liquid, strict=True):
        if n > 0:
            up, down = (np.log(dewpoint.vapour_pressure(species, T + step)) for step in (1.0, -1.0))
            heat += n * 8.31446261815324 * T**2 * (up - down) / 2.0
    return heat

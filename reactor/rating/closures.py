"""Do the balances close? Relative gaps of atoms, enthalpy and photons."""

LIMITS = {"atoms": 1e-9, "enthalpy": 1e-6, "photons": 1e-6}


def closures(profile, gas, entering):
    """
    Return the relative gaps.

    Parameters
    ----------
    profile : Profile
        The solved reactor.
    gas : Mechanism
        For atoms and enthalpies.
    entering : float
        Photons that enter the gas, all tubes. [mol/s]

    Returns
    -------
    dict
        {"atoms": {element: gap}, "enthalpy": gap, "photons": gap}, all [-].
    """
    return {
        "atoms": atoms(profile, gas),
        "enthalpy": enthalpy(profile, gas),
        "photons": photons(profile, entering),
    }


def atoms(profile, gas):
    """Return the gap of every element fed, relative to what is fed."""
    fed, out = profile.fed @ gas.atoms, profile.outlet.atoms(gas)
    return {e: float(abs(out[i] - fed[i]) / fed[i]) for i, e in enumerate(gas.elements) if fed[i] > 0}


def enthalpy(profile, gas):
    """
    Return the gap of the heat balance, relative to the larger of heat released and heat removed.

    Where neither would change the gas by a millikelvin, that is the measure.
    """
    gained = profile.outlet.enthalpy(gas) - sum(stream.enthalpy(gas) for stream in profile.feeds)
    power, lamp, wall = (profile.total(name) for name in ("photon_power", "lamp_heat", "to_wall"))
    capacity = float(profile.fed @ gas.heat_capacity(profile.inlet.temperature))
    scale = max(abs(profile.total("heat_reaction")) + power, abs(wall), 1e-3 * capacity)
    return float(abs(gained - power - lamp + wall) / scale)


def photons(profile, entering):
    """Return the gap of absorbed + passed to the outer wall against what enters; nought in the dark."""
    if entering <= 0:
        return 0.0
    return float(abs(profile.total("photons") + profile.total("outer_wall") - entering) / entering)


def flat(gaps):
    """Return [(name, gap, limit)] of every closure."""
    rows = [(f"atoms {e}", gap, LIMITS["atoms"]) for e, gap in gaps["atoms"].items()]
    return rows + [(name, gaps[name], LIMITS[name]) for name in ("enthalpy", "photons")]

"""The accounts of a rated case: light line by line, streams, and the profile in columns."""

import numpy as np

from reactor import photons
from reactor.result import by_species, quantity

AVOGADRO = 6.02214076e23  # 1/mol, exact
KEPT = 400  # stations kept in a saved profile


def light_ledger(light, profile, case):
    """Return the light account of all tubes as rows {name, part_of, power, photons}."""
    if not len(light.wavelength):
        return ()
    absorbed, wall, ends = (each / case.vessel.tanks for each in per_line(light, profile, case.vessel.parallel))
    found = photons.ledger(light, absorbed, wall, ends, case.vessel.vessels)
    return tuple(
        {
            "name": r.name,
            "part_of": r.part_of,
            "power": quantity(r.watts, "W"),
            "photons": quantity(r.photons, "mol/s"),
        }
        for r in found.rows
    )


def per_line(light, profile, parallel):
    """
    Return photons absorbed, at the outer wall (or lost in lamps) and through the ends of one tube (or chain), by line.

    The lines are those of the lamp, not the few that the model follows; what is absorbed is shared among them by
    their own cross-sections and adds up to the model's own total.
    """
    spectrum, chlorine = light.spectrum, profile.species.index("Cl2")
    c, T = profile.concentrations[:, chlorine], profile.temperature
    t = np.clip((T - 550.0) / 350.0, -1.0, 1.0)
    sigma = np.vander(t, spectrum.sigma.shape[1], increasing=True) @ spectrum.sigma.T
    tau = np.maximum(sigma * AVOGADRO * c[:, None] * light.path, 1e-300)
    entering = np.diff(light.edges) @ spectrum.into_gas
    whole = entering * (1 if profile.kind == "plug flow" else len(profile.z))
    absorbed, ends = np.zeros((2, len(entering)))
    lots = zip(spectrum.into_gas, light.absorbed, light.ends, light.edges, light.edges[1:], strict=False)
    for flow, share, out, start, stop in lots:
        if profile.kind != "plug flow":  # one station a tank, each with its own lamps
            absorbed += flow * (stop - start) * (share(np.log(tau))[0] * tau).sum(axis=0)
            ends += flow * (stop - start) * out(np.log(tau))[0].sum(axis=0)
            continue
        inside = (profile.z >= start) & (profile.z <= stop)
        log_tau, z = np.log(tau[inside]), profile.z[inside]
        here, mean = (np.ones(len(z)), flow) if light.along is None else (light.along(z)[0], entering / light.edges[-1])
        absorbed += mean * np.trapezoid(here[:, None] * share(log_tau)[0] * tau[inside], z, axis=0)
        ends += mean * np.trapezoid(here[:, None] * out(log_tau)[0], z, axis=0)
    total = profile.total("photons") / parallel
    if absorbed.sum() > 0 and total > 0:
        absorbed = np.minimum(absorbed * total / absorbed.sum(), whole)
    ends = np.minimum(ends, whole - absorbed)
    return absorbed, whole - absorbed - ends, ends


def streams(profile, gas):
    """Return feeds, mixed inlet and outlet as records with the flow of every species."""
    found = []
    for stream in (*profile.feeds, profile.inlet, profile.outlet):
        moles = {s: n for s, n in zip(gas.species, stream.moles, strict=True) if n > 1e-12 * stream.total}
        found.append(
            {
                "name": stream.name,
                "moles": quantity(stream.total, "mol/s"),
                "mass": quantity(stream.mass(gas) * 3600, "kg/h"),
                "temperature": quantity(stream.temperature, "K"),
                "pressure": quantity(stream.pressure, "Pa"),
                "composition": by_species(moles, "mol/s"),
            }
        )
    return tuple(found)


def columns(profile, gas, classes):
    """Return the profile as {name [unit]: list}, thinned to about `KEPT` stations, ends and hottest kept."""
    keep = thinned(profile)
    found = {
        "z [m]": profile.z,
        "temperature [K]": profile.temperature,
        "coolant [K]": profile.coolant,
        "pressure [Pa]": profile.pressure,
        "time [s]": profile.totals["time"],
        "J [1/s]": profile.photolysis,
        "photons_absorbed [mol/s]": profile.totals["photons"],
        "thermal_starts [mol/s]": profile.totals["thermal_starts"],
        "heat_reaction [W]": profile.totals["heat_reaction"],
        "heat_removed [W]": profile.totals["to_wall"],
    }
    found |= {f"{species} [mol/s]": profile.moles[:, i] for i, species in enumerate(gas.species)}
    return {name: [float(x) for x in np.asarray(values)[keep]] for name, values in found.items()} | {
        "class": [str(classes[i]) for i in keep]
    }


def thinned(profile):
    """Return the numbers of the stations that are kept."""
    last = len(profile.z) - 1
    even = np.linspace(0, last, min(KEPT, last + 1)).round().astype(int)
    return np.array(sorted({*even.tolist(), int(profile.temperature.argmax())}))

"""Turn a case and its rooms (gas, light, wall) into the plain records of the kernel."""

import itertools
from dataclasses import replace
from typing import NamedTuple

import numpy as np

from reactor.errors import CaseError
from reactor.kernel.light import Beam
from reactor.kernel.plugflow import Budget, Section
from reactor.stream import Stream, mix

SIGMA_MIDDLE, SIGMA_HALF = 550.0, 350.0  # K; the variable of the cross-section polynomials, (T - middle)/half
PHOTON_365 = 0.119626565582 / 365e-9  # J/mol; the photon taken where the user insists on a fixed J


class Plant(NamedTuple):
    """
    What the rooms make of a case, for one tube or tank.

    `wall_loss` [1/s] takes chlorine atoms; `coolant` [W/K] is the heat capacity flow of the coolant (inf: its
    temperature is constant). `even`: for local radical pools one curve a section, see `assemble.beams`.
    """

    gas: object
    light: object
    wall: object
    wall_loss: float
    coolant: float
    even: list | None = None


def streams(case, gas):
    """Return the named feed streams of a case on the species of `gas`, chlorine's injected shares still in."""
    return [
        Stream(name, _on(gas, feed.moles), feed.temperature, case.vessel.pressure)
        for name, feed in case.feed.items()
    ]


def _on(gas, moles):
    flow = np.zeros(len(gas.species))
    missing = [species for species in moles if species not in gas.index]
    if missing:
        raise CaseError(
            f"{gas.path}: the mechanism holds no {', '.join(missing)}, which is fed; make one for this feed with: "
            "reactor slate CASE --write FILE"
        )
    for species, value in moles.items():
        flow[gas.index[species]] = value
    return flow


def injections(case, gas):
    """Return [(position, Stream)] of the injected shares, in order along the tube."""
    source = next((s for s in streams(case, gas) if s.moles[gas.index["Cl2"]] > 0), None)
    if source is None:
        return []
    return [
        (inject.position, Stream(f"injector {number} at {inject.position:g} m", inject.share * source.moles,
                                 inject.temperature, case.vessel.pressure))
        for number, inject in enumerate(sorted(case.inject, key=lambda i: i.position), start=1)
    ]


def at_inlet(case, gas):
    """Return the feed streams less what the injectors take from the one that brings chlorine."""
    left = 1.0 - sum(inject.share for inject in case.inject)
    taken = False
    found = []
    for stream in streams(case, gas):
        share = 1.0
        if stream.moles[gas.index["Cl2"]] > 0 and not taken and case.inject:
            share, taken = left, True
        if share > 1e-12:
            found.append(Stream(stream.name, share * stream.moles, stream.temperature, stream.pressure))
    return found


def mixed_inlet(case, gas):
    """Return the mixed, unreacted gas at the start of the tube."""
    return mix("mixed inlet", at_inlet(case, gas), gas, case.vessel.pressure)


def mixed_feed(case, gas):
    """Return all that is fed, injected portions included, mixed and unreacted."""
    everything = at_inlet(case, gas) + [stream for _, stream in injections(case, gas)]
    return mix("mixed feed", everything, gas, case.vessel.pressure)


def beams(light, fixed, even=None):
    """
    Return one beam per section of constant light; a fixed J [1/s] acts where lamps are lit, else everywhere.

    `even`: for local radical pools one curve a section, of the rate that counts over the mean rate.
    """
    lamps = bool(np.any(light.into_gas))
    if fixed is not None and lamps:  # then the light itself counts for nothing: no tails beyond the lit stretches
        light = replace(light, into_gas=light.into_gas * light.lit[:, None], along=None)
    energy = light.photon_energy if lamps else np.array([PHOTON_365])
    mean = light.entering / (light.edges[-1] - light.edges[0])
    return [
        Beam(np.asarray(entering if light.along is None else mean), energy, light.sigma, SIGMA_MIDDLE, SIGMA_HALF,
             light.path, light.area, absorbed, transmitted, fixed if np.any(entering) or not lamps else None, ratio,
             light.along)
        for entering, absorbed, transmitted, ratio in zip(light.into_gas, light.absorbed, light.transmitted,
                                                          even or [None] * len(light.absorbed), strict=True)
    ]


def sections(case, gas, light, even=None):
    """Return the kernel's sections of one tube: broken at lamp edges and injectors."""
    tubes = case.vessel.parallel
    stops = dict(injections(case, gas))
    edges = sorted({*(float(e) for e in light.edges), *stops, 0.0, case.vessel.length})
    lit = beams(light, case.chemistry.photolysis_rate, even)
    none = np.zeros(len(gas.species))
    found = []
    for start, stop in itertools.pairwise(edges):
        number = min(int(np.searchsorted(light.edges, start, side="right")) - 1, len(lit) - 1)
        added = stops.get(start)
        moles, heat = (none, 0.0) if added is None else (added.moles / tubes, added.enthalpy(gas) / tubes)
        found.append(Section(start, stop, lit[number], float(light.sleeve_heat[number]), moles, heat))
    return tuple(found)


def budget(case):
    """Return the kernel's budget from [solver]."""
    return Budget(rtol=case.solver.rtol, seconds=case.solver.seconds)

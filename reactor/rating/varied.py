"""Move what is uncertain in a case: rate constants, cross-sections, lamps, heat exchange, walls, feeds."""

from collections.abc import Mapping
from dataclasses import replace
from types import MappingProxyType
from typing import NamedTuple

import numpy as np

from reactor.chemistry.varied import varied
from reactor.rating.plant import lamps, plant


class Factors(NamedTuple):
    """
    What the uncertain data of a case are multiplied by; as it stands nothing moves.

    `rates` {number of a reaction: standard deviations}; `cross_section` of chlorine; `lamp_output`;
    `exchange` (U); `wall_loss` of atoms; `streams` {feed: factor on its flow}; `species` {impurity: factor
    on its flow in every feed}.
    """

    rates: Mapping = MappingProxyType({})
    cross_section: float = 1.0
    lamp_output: float = 1.0
    exchange: float = 1.0
    wall_loss: float = 1.0
    streams: Mapping = MappingProxyType({})
    species: Mapping = MappingProxyType({})


NOMINAL = Factors()


def equipped(case, gas, factors=NOMINAL):
    """
    Return the case and the `Plant` to solve, moved by `factors`.

    Parameters
    ----------
    case : Case
        The checked case.
    gas : Mechanism
        Its chemistry.
    factors : Factors
        What moves.
    """
    if factors == NOMINAL:
        return case, plant(case, gas, lamps(case))
    if factors.rates:
        deviations = np.zeros(len(gas.equations))
        deviations[list(factors.rates)] = list(factors.rates.values())
        gas = varied(gas, deviations)
    case = replace(
        case,
        lamp=tuple(replace(lamp, end_of_life=lamp.end_of_life * factors.lamp_output) for lamp in case.lamp),
        feed={name: _moved(feed, factors) for name, feed in case.feed.items()},
    )
    light = lamps(case)
    bins = light.spectrum._replace(sigma=light.spectrum.sigma * factors.cross_section)
    light = replace(light, sigma=light.sigma * factors.cross_section, spectrum=bins)
    found = plant(case, gas, light, U_factor=factors.exchange)
    return case, found._replace(wall_loss=found.wall_loss * factors.wall_loss)


def _moved(feed, factors):
    """Return a feed with its flow, and the impurities in it, multiplied."""
    whole = factors.streams.get(feed.name, 1.0)
    return replace(feed, moles={s: n * whole * factors.species.get(s, 1.0) for s, n in feed.moles.items()})

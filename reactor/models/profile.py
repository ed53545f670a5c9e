"""What a model found: stations along the tube (or the one state of a tank) and the running totals."""

from dataclasses import dataclass, field

import numpy as np

from reactor.stream import Stream


@dataclass(frozen=True)
class Profile:
    """
    The solved reactor, all parallel tubes together.

    Parameters
    ----------
    kind : str
        "plug flow", "stirred tank" or "tanks in series"; a tank has one station.
    species : tuple of str
        Names of the columns of `moles`.
    z : array (M,)
        Stations along the tube. [m]
    moles : array (M, K)
        Flow of every species. [mol/s]
    temperature, coolant, pressure : array (M,)
        Gas and coolant temperature [K], pressure [Pa].
    photolysis : array (M,)
        Mean photolysis rate J. [1/s]
    totals : dict of str to array (M,)
        Running totals: photons, outer_wall, thermal_starts [mol/s]; photon_power, heat_reaction, to_wall,
        lamp_heat, coolant [W]; time [s].
    hottest : tuple of float
        Hottest gas temperature [K] and its place [m].
    feeds : tuple of Stream
        Everything fed, injections included; `inlet` is what is mixed at the start, `outlet` what leaves.
    volume : float
        Gas volume, lit and unlit, all tubes. [m^3]
    states : tuple
        Steady states of a tank, coldest first; empty for a tube.
    remarks : tuple of str
        What the reader must know about how this answer was found.
    cost : dict
        Steps, evaluations, tolerance.
    """

    kind: str
    species: tuple
    z: np.ndarray
    moles: np.ndarray
    temperature: np.ndarray
    coolant: np.ndarray
    pressure: np.ndarray
    photolysis: np.ndarray
    totals: dict
    hottest: tuple
    feeds: tuple
    inlet: Stream
    outlet: Stream
    volume: float
    states: tuple = ()
    remarks: tuple = ()
    cost: dict = field(default_factory=dict)

    def total(self, name):
        """Return a running total at the outlet."""
        return float(self.totals[name][-1])

    @property
    def fed(self):
        """Return all that is fed, injections included [mol/s] by species."""
        return np.sum([stream.moles for stream in self.feeds], axis=0)

    @property
    def concentrations(self):
        """Return the concentrations (M, K) [mol/m^3] at the stations."""
        share = self.moles / self.moles.sum(axis=1, keepdims=True)
        return share * (self.pressure / (8.31446261815324 * self.temperature))[:, None]

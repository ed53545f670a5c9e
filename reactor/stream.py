"""A flow of named species: what it carries in moles, mass, atoms and heat."""

from dataclasses import dataclass

import numpy as np

GAS_CONSTANT = 8.31446261815324  # J/mol/K, exact


@dataclass(frozen=True)
class Stream:
    """
    A gas stream on the species of one mechanism.

    Parameters
    ----------
    name : str
        What the stream is called on paper.
    moles : array (K,)
        Flow of every species. [mol/s]
    temperature, pressure : float
        State of the stream. [K], [Pa]
    """

    name: str
    moles: np.ndarray
    temperature: float
    pressure: float

    @property
    def total(self):
        """Return the total flow [mol/s]."""
        return float(self.moles.sum())

    @property
    def fractions(self):
        """Return the mole fractions [-]."""
        return self.moles / self.moles.sum()

    def mass(self, gas):
        """Return the mass flow [kg/s]."""
        return float(self.moles @ gas.molar_mass)

    def atoms(self, gas):
        """Return the flow of every element [mol/s]."""
        return self.moles @ gas.atoms

    def enthalpy(self, gas):
        """Return the enthalpy flow [W], from the elements at 298.15 K."""
        return float(self.moles @ gas.enthalpy(self.temperature))

    def volume_flow(self):
        """Return the volume flow at the stream's own temperature and pressure [m^3/s]."""
        return self.total * GAS_CONSTANT * self.temperature / self.pressure


def mix(name, streams, gas, pressure):
    """
    Return several streams mixed at constant enthalpy, unreacted.

    Parameters
    ----------
    name : str
        Name of the mixture.
    streams : sequence of Stream
        What is mixed.
    gas : Mechanism
        For the enthalpies.
    pressure : float
        Pressure of the mixture. [Pa]
    """
    moles = np.sum([stream.moles for stream in streams], axis=0)
    heat = sum(stream.enthalpy(gas) for stream in streams)
    guess = float(np.average([s.temperature for s in streams], weights=[s.total for s in streams]))
    return Stream(name, moles, temperature_of(moles, heat, gas, guess), pressure)


def temperature_of(moles, heat, gas, guess):
    """
    Return the temperature [K] at which `moles` [mol/s] carry the enthalpy flow `heat` [W].

    Raises
    ------
    ValueError
        When Newton's rule does not settle within 100 steps.
    """
    T = guess
    for _ in range(100):
        step = (heat - moles @ gas.enthalpy(T)) / (moles @ gas.heat_capacity(T))
        T = float(np.clip(T + step, 0.5 * T, 2.0 * T))
        if abs(step) < 1e-11 * T:
            return T
    raise ValueError(f"no temperature found for this enthalpy near {guess:.1f} K")

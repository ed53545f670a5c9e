"""A mechanism as one frozen record: species, arrays, provenance, and the properties of a gas made of them."""

from dataclasses import dataclass, field
from pathlib import Path

import numpy as np

from reactor.chemistry.phase import phase
from reactor.chemistry.tables import Tables
from reactor.chemistry.transport import Fits, conductivity, diffusivity, fits, viscosity
from reactor.units import GAS_CONSTANT


@dataclass(frozen=True)
class Transport:
    """
    Properties of a gas mixture at one state, mixture-averaged.

    Parameters
    ----------
    viscosity : float
        Dynamic viscosity. [Pa*s]
    conductivity : float
        Thermal conductivity, frozen composition. [W/m/K]
    heat_capacity_mass : float
        Heat capacity at constant pressure. [J/kg/K]
    density : float
        Mass density. [kg/m^3]
    diffusivity_chlorine_atom : float
        Diffusivity of Cl atoms in the mixture. [m^2/s]
    """

    viscosity: float
    conductivity: float
    heat_capacity_mass: float
    density: float
    diffusivity_chlorine_atom: float


@dataclass(frozen=True, eq=False)
class Mechanism:
    """
    A reaction mechanism; R reactions, K species, E elements.

    Parameters
    ----------
    name : str
        Name of the file without its ending.
    path : pathlib.Path
        The file.
    phase : str
        The phase of the file that is used.
    stamp : int
        Time of the last change of the file.
    species : tuple of str (K)
        Names, keys of `data/species.csv`.
    index : dict
        Number of every species.
    molar_mass : array (K,)
        Molar masses. [kg/mol]
    elements : tuple of str (E)
        Names of the elements.
    atoms : array (K, E)
        Atoms of each element in each species. [-]
    kinds : tuple of str (K)
        molecule, radical or peroxy. A species that `data/species.csv` does not know is what its own key `kind`
        in the file says, else a radical when its number of electrons is odd, else a molecule.
    radical : bool array (K,)
        Where the kind is radical.
    tables : Tables
        Rates and thermo as arrays.
    photolysis, wall : int
        Numbers of the two reactions that a case multiplies.
    start : int array
        Numbers of the reactions whose reverse is the thermal start, 2 Cl (+ M) <=> Cl2 (+ M).
    valid : array (R, 2)
        Lowest and highest temperature of the source of each rate; nan where not stated. [K]
    f298 : array (R,)
        Uncertainty factor at 298 K; nan where not stated. [-]
    g : array (R,)
        How the factor grows away from 298 K; nan where not stated. [K]
    status : tuple of str (R)
        How far to trust each rate.
    equations : tuple of str (R)
        The reactions in words.
    cited : tuple of library.Cited
        One entry for each distinct kind, source and status of rates, thermo and transport numbers.
    condensing : dict
        {species: (boiling point [K], critical temperature [K], critical pressure [Pa])} where the file states them.
    remarks : tuple of str
        What Cantera remarked when it read the file; empty for the mechanism that comes with the program.
    fits : Fits or None
        Transport properties of the pure gases, where the file holds their data.
    """

    name: str
    path: Path
    phase: str
    stamp: int
    species: tuple
    index: dict
    molar_mass: np.ndarray
    elements: tuple
    atoms: np.ndarray
    kinds: tuple
    radical: np.ndarray
    tables: Tables
    photolysis: int
    wall: int
    start: np.ndarray
    valid: np.ndarray
    f298: np.ndarray
    g: np.ndarray
    status: tuple
    equations: tuple
    cited: tuple
    remarks: tuple
    condensing: dict = field(default_factory=dict)
    fits: Fits | None = None

    def heat_capacity(self, T):
        """
        Return the heat capacity of every species at constant pressure [J/mol/K].

        Parameters
        ----------
        T : float or array (...)
            Temperature. [K]

        Returns
        -------
        array (..., K)
        """
        T, a = self._polynomials(T)
        series = a[..., 1] + T * (a[..., 2] + T * (a[..., 3] + T * a[..., 4]))
        found = a[..., 0] + T * series
        if self.tables.inverse_powers:
            found = found + (a[..., 8] + a[..., 7] / T) / T
        return GAS_CONSTANT * found

    def enthalpy(self, T):
        """
        Return the enthalpy of every species, from the elements at 298.15 K [J/mol].

        Parameters
        ----------
        T : float or array (...)
            Temperature. [K]

        Returns
        -------
        array (..., K)
        """
        T, a = self._polynomials(T)
        series = a[..., 1] / 2 + T * (a[..., 2] / 3 + T * (a[..., 3] / 4 + T * a[..., 4] / 5))
        found = T * (a[..., 0] + T * series) + a[..., 5]
        if self.tables.inverse_powers:
            found = found + a[..., 8] * np.log(T) - a[..., 7] / T
        return GAS_CONSTANT * found

    def entropy(self, T):
        """
        Return the entropy of every species at the standard pressure of the tables [J/mol/K].

        Parameters
        ----------
        T : float or array (...)
            Temperature. [K]

        Returns
        -------
        array (..., K)
        """
        T, a = self._polynomials(T)
        series = a[..., 1] + T * (a[..., 2] / 2 + T * (a[..., 3] / 3 + T * a[..., 4] / 4))
        found = a[..., 0] * np.log(T) + T * series + a[..., 6]
        if self.tables.inverse_powers:
            found = found - (a[..., 8] + a[..., 7] / (2 * T)) / T
        return GAS_CONSTANT * found

    def _polynomials(self, T):
        T = np.asarray(T, dtype=float)[..., None]
        low = (self.tables.t_mid >= T)[..., None]
        return T, np.where(low, self.tables.nasa_low, self.tables.nasa_high)

    def uncertainty(self, T):
        """
        Return the uncertainty factor of every rate, f298 exp|g (1/T - 1/298)|; a g not stated counts as zero.

        Parameters
        ----------
        T : float
            Temperature. [K]

        Returns
        -------
        array (R,)
        """
        return self.f298 * np.exp(np.abs(np.nan_to_num(self.g) * (1.0 / T - 1.0 / 298.0)))

    def transport(self, T, P, moles):
        """
        Return viscosity, conductivity and the like of a mixture.

        Parameters
        ----------
        T : float
            Temperature. [K]
        P : float
            Pressure. [Pa]
        moles : array (K,)
            Amounts or flows; only their proportions count. [mol]

        Returns
        -------
        Transport

        Raises
        ------
        CaseError
            When the mechanism file holds no transport data.
        """
        pure = self.fits
        if pure is None:
            pure = fits(phase(self.path, self.phase, self.stamp, transport=True)[0], self.index["Cl"])
        x = np.maximum(moles, 0.0)
        x = x / x.sum()
        mass = float(x @ self.molar_mass)
        return Transport(
            viscosity(pure, self.molar_mass, T, x), conductivity(pure, T, x),
            float(x @ self.heat_capacity(T)) / mass, P * mass / (GAS_CONSTANT * T),
            diffusivity(pure, self.molar_mass, self.index["Cl"], (T, P), x),
        )  # fmt: skip

"""
A mechanism as plain arrays in mol, m3, s and K: all that a rate needs.

Forward rate of reaction r, with [M] = efficiencies[r] @ concentrations:

    k   = A T^b exp(-E/T)
    q   = k [M] prod c^reactants                              third_body
    q   = k Pr/(1 + Pr) F prod c^reactants,  Pr = k_low [M]/k  falloff
    q   = k prod c^reactants                                  else
    F_c = (1 - a) exp(-T/T3) + a exp(-T/T1) + exp(-T2/T)

F follows from F_c and Pr by Troe's formula. The reverse rate constant is k over K_c, K_c from the polynomials
and the standard pressure `reference_pressure`.
"""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from reactor.errors import CaseError

LINDEMANN = (1.0, 1e-30, 1e30, 1e30)  # a, T3, T1, T2 that make F_c = 1, hence F = 1, at any temperature
COLDEST, HOTTEST = 200.0, 3000.0  # K; ranges of NASA9 outside these are left out
NEVER = 1e30  # K; as T2 it drops the last term of F_c


@dataclass(frozen=True, eq=False)
class Tables:
    """
    The arrays of one mechanism; R reactions, K species.

    Parameters
    ----------
    reactants, products : array (R, K)
        Stoichiometric coefficients, also the exponents of the rate laws; a third body is not among them. [-]
    A : array (R,)
        Factor of the rate constant, of the high-pressure one in fall-off, mol-m3-s. [-]
    b : array (R,)
        Its exponent of temperature. [-]
    E : array (R,)
        Its activation temperature. [K]
    reversible, third_body, falloff : bool array (R,)
        Whether the reverse runs; whether [M] multiplies the rate; whether the rate blends two limits.
    efficiencies : array (R, K)
        Third-body efficiencies; zeros where neither `third_body` nor `falloff`. [-]
    low_A : array (R,)
        As `A`, of the low-pressure rate constant; zero where there is no fall-off. [-]
    low_b : array (R,)
        As `b`. [-]
    low_E : array (R,)
        As `E`. [K]
    troe : array (R, 4)
        a [-] and T3, T1, T2 of F_c; rows without Troe numbers hold `LINDEMANN`, a T2 left out is `NEVER`. [K]
    nasa_low, nasa_high : array (K, 9)
        Polynomials of cp/R, h/RT and s/R below and above `t_mid`; one range: twice the same. The seven numbers of
        NASA7, then those of 1/T^2 and 1/T, which only NASA9 has. [-]
    t_mid : array (K,)
        Temperature up to which `nasa_low` holds. [K]
    t_low, t_high : array (K,)
        Range of the polynomials. [K]
    reference_pressure : float
        Standard pressure of the entropies. [Pa]
    """

    reactants: np.ndarray
    products: np.ndarray
    A: np.ndarray
    b: np.ndarray
    E: np.ndarray
    reversible: np.ndarray
    third_body: np.ndarray
    falloff: np.ndarray
    efficiencies: np.ndarray
    low_A: np.ndarray
    low_b: np.ndarray
    low_E: np.ndarray
    troe: np.ndarray
    nasa_low: np.ndarray
    nasa_high: np.ndarray
    t_mid: np.ndarray
    t_low: np.ndarray
    t_high: np.ndarray
    reference_pressure: float

    @cached_property
    def inverse_powers(self):
        """Tell whether any species has terms in 1/T^2 and 1/T."""
        return bool(self.nasa_low[:, 7:].any() or self.nasa_high[:, 7:].any())


def tables(solution, file):
    """
    Return the `Tables` of a gas that Cantera has read.

    Parameters
    ----------
    solution : cantera.Solution
        The gas.
    file : str
        Name of its file, for messages.

    Raises
    ------
    CaseError
        For rate laws, orders and thermo polynomials that the tables cannot hold; names all of them.
    """
    reactions = solution.reactions()
    faults = [fault for fault in map(_fault, reactions) if fault]
    faults += [fault for fault in map(_thermo_fault, solution.species()) if fault]
    if faults:
        raise CaseError([f"{file}: {fault}" for fault in faults])
    shape = (len(reactions), solution.n_species)
    reactants, products, efficiencies = np.zeros(shape), np.zeros(shape), np.zeros(shape)
    for number, reaction in enumerate(reactions):
        for sides, row in ((reaction.reactants, reactants), (reaction.products, products)):
            for species, count in sides.items():
                row[number, solution.species_index(species)] = count
        efficiencies[number] = _efficiencies(reaction, solution)
    falloff = np.array([_is_falloff(reaction) for reaction in reactions])
    third_body = np.array([r.third_body is not None for r in reactions]) & ~falloff
    order = reactants.sum(axis=1) + third_body
    high = [r.rate.high_rate if f else r.rate for r, f in zip(reactions, falloff, strict=True)]
    low = [r.rate.low_rate if f else None for r, f in zip(reactions, falloff, strict=True)]
    return Tables(
        reactants=reactants,
        products=products,
        **dict(zip(("A", "b", "E"), _arrhenius(high, order), strict=True)),
        reversible=np.array([reaction.reversible for reaction in reactions]),
        third_body=third_body,
        falloff=falloff,
        efficiencies=efficiencies,
        **dict(zip(("low_A", "low_b", "low_E"), _arrhenius(low, order + 1), strict=True)),
        troe=np.array([_troe(reaction) for reaction in reactions]),
        **_polynomials(solution),
        reference_pressure=float(solution.reference_pressure),
    )


def _is_falloff(reaction):
    return reaction.reaction_type in ("falloff-Troe", "falloff-Lindemann")


def _fault(reaction):
    """Return why the tables cannot hold a reaction, or None."""
    if not _is_falloff(reaction) and reaction.reaction_type not in ("Arrhenius", "three-body-Arrhenius"):
        return (
            f"{reaction.equation}: rates of type {reaction.reaction_type} are not supported; write it as an "
            "elementary, three-body or falloff (Lindemann, Troe) reaction with Arrhenius numbers"
        )
    orders = {**reaction.reactants, **reaction.orders}
    if orders != reaction.reactants:
        return f"{reaction.equation}: `orders` differ from the stoichiometry; leave them out"
    for side in (reaction.reactants, reaction.products)[: 1 + reaction.reversible]:
        if sum(side.values()) > 3 or any(count != round(count) for count in side.values()):
            return f"{reaction.equation}: whole numbers and at most three molecules on a reacting side"
    return None


def _thermo_fault(species):
    import cantera

    if isinstance(species.thermo, cantera.NasaPoly2):
        return None
    if not isinstance(species.thermo, cantera.Nasa9PolyMultiTempRegion):
        return f"{species.name}: its thermo is no NASA polynomial; write it with `model: NASA7` or `model: NASA9`"
    if 1 <= len(_nasa9(species.thermo)) <= 2:
        return None
    return (
        f"{species.name}: the tables hold two ranges of its NASA9 polynomial between {COLDEST:.0f} and {HOTTEST:.0f} K, "
        f"it has {len(_nasa9(species.thermo))} there"
    )


def _efficiencies(reaction, solution):
    row = np.zeros(solution.n_species)
    if reaction.third_body is not None:
        row[:] = reaction.third_body.default_efficiency
        for species, value in reaction.third_body.efficiencies.items():
            row[solution.species_index(species)] = value
    return row


def _arrhenius(rates, order):
    """Return A (mol-m3-s), b and E [K]; Cantera counts in kmol and J/kmol. A missing rate gives zeros."""
    from cantera import gas_constant

    A = [0.0 if rate is None else rate.pre_exponential_factor for rate in rates]
    b = [0.0 if rate is None else rate.temperature_exponent for rate in rates]
    E = [0.0 if rate is None else rate.activation_energy / gas_constant for rate in rates]
    return np.array(A) * 1e3 ** (1.0 - order), np.array(b), np.array(E)


def _troe(reaction):
    if reaction.reaction_type != "falloff-Troe":
        return LINDEMANN
    numbers = list(reaction.rate.falloff_coeffs)
    return tuple(numbers) if len(numbers) == 4 and numbers[3] != 0.0 else (*numbers[:3], NEVER)


def _polynomials(solution):
    """Return the polynomials of every species and their temperatures, by the names of `Tables`."""
    rows = [_ranges(species.thermo) for species in solution.species()]
    low, high, limits = (np.array(column) for column in zip(*rows, strict=True))
    return {"nasa_low": low, "nasa_high": high, "t_mid": limits[:, 1], "t_low": limits[:, 0], "t_high": limits[:, 2]}


def _ranges(thermo):
    """Return nine numbers below and above the middle temperature, and lowest, middle and highest temperature."""
    import cantera

    if isinstance(thermo, cantera.NasaPoly2):
        numbers = thermo.coeffs
        limits = thermo.min_temp, numbers[0], thermo.max_temp
        return [*numbers[8:], 0.0, 0.0], [*numbers[1:8], 0.0, 0.0], limits
    found = _nasa9(thermo)
    low, high = found[0], found[-1]
    return [*low[4:], *low[2:4]], [*high[4:], *high[2:4]], (low[0], low[1], high[1])


def _nasa9(thermo):
    """Return the ranges of a NASA9 polynomial that are of use, as rows (from, to, nine numbers)."""
    ranges = thermo.coeffs[1:].reshape(-1, 11)
    return [row for row in ranges.tolist() if row[0] < HOTTEST and row[1] > COLDEST]


def left_out(solution):
    """Return a remark on the ranges of NASA9 polynomials that the tables leave out, in a tuple; else nothing."""
    import cantera

    thermo = [s.thermo for s in solution.species() if isinstance(s.thermo, cantera.Nasa9PolyMultiTempRegion)]
    count = sum(len(_nasa9(each)) < each.coeffs[0] for each in thermo)
    if not count:
        return ()
    return (f"NASA9 polynomials of {count} species: ranges outside {COLDEST:.0f} to {HOTTEST:.0f} K are left out",)

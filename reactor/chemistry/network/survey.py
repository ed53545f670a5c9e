"""The product map of a feed before any reactor: split against conversion, what a ratio gives, and the traces."""

from reactor.chemistry.network import names
from reactor.chemistry.network.build import enough, structures
from reactor.chemistry.network.enumerate import network
from reactor.chemistry.network.slate import LOSS_COUNTS, Slate
from reactor.chemistry.network.traces import traces
from reactor.chemistry.network.tree import molecule
from reactor.chemistry.network.volatility import volatility
from reactor.errors import RangeError
from reactor.library import Cited

CONVERSIONS = (0.05, 0.2, 0.5, 0.8, 0.95)
WEIGHTS = {"C": 12.011, "H": 1.008, "Cl": 35.45}  # g/mol
METHANE = (
    "CH3 + HCl goes back to methane, which the split leaves out: it shows up to a tenth too much CH3Cl at small ratios; "
    "rate the case for the full chemistry"
)
VESSELS = {"tube": "plug_flow", "tank": "stirred_tank"}


def survey(feed, ratio, T, pressure=1.2e5, photolysis=1e-3, chlorines=None, conversions=CONVERSIONS):
    """
    Return the product map of a feed as plain records.

    Parameters
    ----------
    feed : dict of float
        Amounts by key or name; any scale; gases without hydrogen on carbon take no part. [-]
    ratio : float or None
        Alkane per chlorine; None: no block for a ratio. [-]
    T : float
        Temperature. [K]
    pressure : float
        [Pa]
    photolysis : float
        Mean J of the lit gas, for the couplings only. [1/s]
    chlorines : int or None
        Largest number of chlorine atoms; None: 3, for one carbon 4, and one more than what is fed. [-]
    conversions : sequence of float
        Shares of the feed converted. [-]

    Returns
    -------
    dict
        species, plug_flow and stirred_tank (mol by species a mole fed, at each conversion), at_ratio, traces,
        cautions, cited.
    """
    codes = structures(feed)
    chlorines = chlorines or enough(codes)
    total = sum(codes.values())
    whole = network(tuple(codes), chlorines)
    slate = Slate(whole, codes, T)
    found = {
        "temperature": T, "ratio": ratio, "pressure": pressure, "photolysis": photolysis, "chlorines": chlorines,
        "feed": {names.key(code): amount / total for code, amount in codes.items()},
        "species": {names.key(code): about(code) for code in whole.molecules},
        "conversions": list(conversions), "at_ratio": {}, "traces": {},
    }  # fmt: skip
    for kind, title in VESSELS.items():
        found[title] = [_row(slate, lambda k=kind, c=c: slate.at_conversion(c, k)) for c in conversions]
        if ratio:
            found["at_ratio"][title] = _row(slate, lambda k=kind: slate.at_uptake(1.0 / ratio, k))
    if ratio and found["at_ratio"]["plug_flow"]:
        found["traces"] = _traces(slate, ratio, pressure, photolysis)
        found["species"] |= {key: about(code) for code, key in _keys(found["traces"]).items()}
        found["traces"] = {block: {names.key(c): n for c, n in amounts.items()}
                           for block, amounts in found["traces"].items()}  # fmt: skip
    more = [METHANE] if "C" in codes else []
    return found | {"cautions": [*cautions(T), *more], "cited": cited(whole)}


def about(code):
    """Return what a reader wants to know of a species: name, formula, molar mass [kg/mol], boiling point [K]."""
    mol, point = molecule(code), volatility(code)
    mass = sum(number * WEIGHTS[element] for element, number in mol.atoms.items()) / 1e3
    return {"name": names.name(code), "formula": mol.formula, "molar_mass": mass, "boiling_point": point.boiling,
            "chlorine": sum(mol.chlorine), "status": point.status}  # fmt: skip


def _row(slate, solve):
    """Return amounts by key, or None where these products cannot reach so far."""
    try:
        amounts, _ = solve()
    except RangeError:
        return None
    return {key: float(amount) for key, amount in zip(slate.keys, amounts, strict=True)}


def _traces(slate, ratio, pressure, photolysis):
    made = traces(slate, ratio, pressure, photolysis)
    couplings = {code: made.couplings.get(code, 0.0) + made.chlorides.get(code, 0.0)
                 for code in (*made.couplings, *made.chlorides)}  # fmt: skip
    own = set(slate.codes)
    return {"couplings": {c: n for c, n in couplings.items() if c not in own}, "alkenes": made.alkenes}


def _keys(blocks):
    return {code: names.key(code) for amounts in blocks.values() for code in amounts}


def cautions(T):
    """Return what limits a slate at a temperature."""
    found = ["rates by kind of place are good to 10 % for alkanes, to a factor 1.5 to 3 for chlorides"]
    if T > LOSS_COUNTS:
        found.append(
            f"above {LOSS_COUNTS:.0f} K chlorine leaves beside a free carbon: less vicinal dichloride, more alkene than "
            "the split shows; rate the case with a made mechanism"
        )
    if T > 550.0 or T < 195.0:
        found.append("outside 195 to 550 K the rates are extrapolated")
    return found


def cited(whole):
    """Return the sources of the rates of a network, one entry for each pair of source and status."""
    pairs = dict.fromkeys((step.rate.source, step.rate.status) for step in whole.steps)
    return tuple(Cited("rate constants", source, status) for source, status in pairs)

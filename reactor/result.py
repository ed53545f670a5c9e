"""What a run found, as plain records that survive a file: numbers with units, verdicts, profile."""

import json
from dataclasses import asdict, dataclass, field, fields
from math import isfinite
from typing import Any, NamedTuple

from reactor.errors import CaseError

FORMAT = 1  # raised when a saved result of an older program can no longer be read


class Verdict(NamedTuple):
    """One judgement in words: PASS, CAUTION, FAIL, NOT ASSESSED or OUT OF DATA RANGE."""

    name: str
    word: str
    figure: str
    limit: str
    why: str


WORDS = PASS, NOT_ASSESSED, CAUTION, OUT, FAIL = (
    "PASS",
    "NOT ASSESSED",
    "CAUTION",
    "OUT OF DATA RANGE",
    "FAIL",
)

NAMES = {  # every entry of `results`: its unit (or what it is), and its definition
    "conversion_chlorine": ("1", "of all chlorine fed, injected portions included"),
    "conversion_alkane": ("1", "of every organic species fed; negative where more leaves than is fed"),
    "chlorine_slip": ("1", "chlorine that leaves over all chlorine fed"),
    "chlorine_slip_mass": ("kg/h", "chlorine that leaves"),
    "hydrogen_chloride_mass": ("kg/h", "hydrogen chloride that leaves"),
    "products": ("kg/h", "every closed-shell species with carbon, as far as more leaves than is fed"),
    "share_mol": ("1", "of the chlorinated organics formed, by mol"),
    "share_mass": ("1", "of the chlorinated organics formed, by mass"),
    "poly_share_mol": ("1", "share with two or more chlorine, by mol"),
    "poly_share_mass": ("1", "share with two or more chlorine, by mass"),
    "residence_time": ("s", "integral of A dz over the local volume flow"),
    "space_time": ("s", "all gas volume, lit and unlit, over the inlet flow at inlet conditions"),
    "pressure_drop": ("Pa", "inlet less outlet"),
    "temperature_inlet": ("K", "mixed gas at the inlet, unreacted"),
    "temperature_outlet": ("K", "gas at the outlet"),
    "temperature_hottest": ("K", "hottest gas, mean of the cross-section"),
    "temperature_hottest_position": ("m", "where the gas is hottest"),
    "adiabatic_rise": (
        "K",
        "mixed feed, all chlorine used at the computed product split, no light or cooling",
    ),
    "heat_reaction": ("W", "minus the integral of h omega at local temperature; photon power is apart"),
    "heat_removed": ("W", "from the gas to the walls"),
    "heat_lamp_to_gas": ("W", "from the sleeve to the gas, absorbed light apart"),
    "heat_to_coolant": ("W", "through the shell to the coolant"),
    "heat_transfer_coefficient": ("W/m2/K", "gas to coolant, on the inner face of the shell"),
    "transfer_units": ("1", "U times shell area over the heat capacity flow at the inlet"),
    "reynolds_number": ("1", "of the gas at the inlet of one vessel; of the stirrer in a tank"),
    "sleeve_skin_temperature": ("K", "gas side of the sleeve where the lit gas is hottest"),
    "mtsr": ("K", "what the synthesis can reach: the leftover chlorine reacts where that is hottest"),
    "light_off_temperature": ("K", "unreacted feed of this temperature runs away in the dark within 10 s"),
    "exotherm_margin": ("K", "limits.hottest less the hottest gas"),
    "dew_point_margin": ("K", "coldest surface less the dew point of the gas there, the smallest one"),
    "light_electrical": ("W", "drawn from the mains by all lamps"),
    "light_radiant": ("W", "light of all listed lines at the end of life of the lamps"),
    "light_into_gas": ("W", "light that passes the sleeves"),
    "light_absorbed": ("W", "light that chlorine absorbs"),
    "photons_absorbed": ("mol/s", "photons that chlorine absorbs, from the mean rate of photolysis"),
    "chain_length": ("1", "HCl formed per Cl atom started, by light and by heat, gross"),
    "quantum_yield": ("1", "HCl formed per photon absorbed; none where thermal starts exceed one tenth"),
    "light_order": ("1", "d ln(HCl rate)/d ln J with molecules fixed, mean over the HCl formed in light"),
    "mixed_pool": ("list", "with local radical pools: what one mixed pool would give, see POOL"),
    "thermal_start_share": ("1", "Cl atoms started by heat over all Cl atoms started, gross"),
    "class_inlet": ("word", "class of the mixed inlet: OUTSIDE (estimate), MARGIN, UNKNOWN or INSIDE"),
    "class_worst": ("word", "worst class of feeds, inlet, injectors and stations; UNKNOWN counts as INSIDE"),
    "mixtures": ("list", "one entry a feed, inlet, injector and worst station, see MIXTURE"),
    "steady_states": ("list", "of a stirred tank, coldest first, see STATE"),
}
MIXTURE = {  # every entry of `mixtures`
    "where": ("word", "feed, mixed inlet, injector or worst station"),
    "fuel": ("1", "mole fraction of fuel"),
    "chlorine": ("1", "mole fraction of chlorine"),
    "inert": ("1", "mole fraction of the rest"),
    "ratio": ("1", "fuel to chlorine, mol/mol"),
    "temperature": ("K", "of the mixture"),
    "class": ("word", "OUTSIDE (estimate), MARGIN, UNKNOWN or INSIDE"),
    "class_worst_corner": ("word", "worst class within the errors of the meters; null without [meters]"),
    "corner": ("word", "which corner that is"),
    "meter_error_at_change": ("1", "error of both meters at which the class changes"),
    "margin": ("1", "distance to the estimated range, in mole fraction of chlorine"),
    "adiabatic_temperature": ("K", "when chlorine replaces hydrogen until one of them is used up"),
    "calculated_only": ("yes or no", "whether the range of a fuel is calculated, not measured"),
    "why": ("word", "what decides the class"),
}
POOL = {  # every entry of `mixed_pool`
    "conversion_chlorine": ("1", "of all chlorine fed"),
    "chlorine_slip": ("1", "chlorine that leaves over all chlorine fed"),
    "temperature_hottest": ("K", "hottest gas"),
    "photons_absorbed": ("mol/s", "photons that chlorine absorbs"),
}
STATE = {  # every entry of `steady_states`
    "temperature": ("K", "of the tank"),
    "chlorine_slip": ("1", "chlorine that leaves over all chlorine fed"),
    "stable": ("yes or no", "whether the tank returns to it"),
    "growth_rate": ("1/s", "of the fastest disturbance; below nought it dies out"),
}


def quantity(value, unit, band=None):
    """
    Return one number as the record that every output uses; what is no finite number becomes null.

    Examples
    --------
    >>> quantity(350.0, "K")
    {'value': 350.0, 'unit': 'K'}
    """
    number = None if value is None or not isfinite(value) else float(value)
    record = {"value": number, "unit": unit}
    return record if band is None else record | {"band": dict(zip(("low", "mid", "high"), band, strict=True))}


def by_species(flows, unit):
    """Return {species: quantity} of a mapping of numbers."""
    return {species: quantity(value, unit) for species, value in flows.items()}


@dataclass(frozen=True)
class Result:
    """
    A rated case: `results[name]` by the names in `NAMES`, and all that stands beside them.

    Parameters
    ----------
    title, revision, date : str
        From [case].
    results : dict
        Every headline number as {"value", "unit"}, some by species, some as lists of records.
    closures : dict
        Relative gaps of the balances: atoms (by element), enthalpy, photons.
    verdicts : tuple of Verdict
        Judgements.
    inputs, assumed, deviations : tuple of dict
        What was typed beside SI, which defaults were taken and why, what was overridden.
    cautions : tuple of str
        The fixed block first, then those of this case.
    remarks : tuple of str
        How the answer was found.
    sources : tuple of dict
        What was relied on: what, source, status.
    ledger : tuple of dict
        The light account, line by line.
    streams : tuple of dict
        Feeds, mixed feed and outlet.
    numerics : dict
        Solver, tolerance, steps.
    identity : dict
        Hash of case, data and program; versions.
    profile : dict of str to list
        Columns along the tube, the unit in the name.
    sizing : dict
        What a sizing run found: the inputs, the targets, what binds, and its tables (see `reactor.sizing`).
    """

    title: str
    revision: str
    date: str
    results: dict
    closures: dict
    verdicts: tuple
    inputs: tuple = ()
    assumed: tuple = ()
    deviations: tuple = ()
    cautions: tuple = ()
    remarks: tuple = ()
    sources: tuple = ()
    ledger: tuple = ()
    streams: tuple = ()
    numerics: dict = field(default_factory=dict)
    identity: dict = field(default_factory=dict)
    profile: dict = field(default_factory=dict)
    sizing: dict = field(default_factory=dict)

    def __getitem__(self, name):
        """Return the plain value of a result: a float, or a dict of floats by species."""
        found = self.results[name]
        if isinstance(found, dict) and "unit" not in found:
            return {key: record["value"] for key, record in found.items()}
        return found["value"] if isinstance(found, dict) and "value" in found else found

    @property
    def worst(self):
        """Return the worst word among the verdicts."""
        return max((v.word for v in self.verdicts), key=WORDS.index, default="NOT ASSESSED")

    def profile_frame(self):
        """Return the profile as a pandas DataFrame, units in `attrs["units"]`."""
        import pandas

        frame = pandas.DataFrame(self.profile)
        frame.attrs["units"] = {name: name.partition(" [")[2].rstrip("]") for name in frame.columns}
        return frame

    def to_json(self):
        """Return the whole result as one JSON object."""
        record = asdict(self) | {"format": FORMAT, "verdicts": [v._asdict() for v in self.verdicts]}
        return json.dumps(record, indent=1, allow_nan=False)


def from_json(text, where="the saved result"):
    """
    Read back what `Result.to_json` wrote.

    Raises
    ------
    CaseError
        When the text is no result of this program or of a newer one.
    """
    try:
        record = json.loads(text)
        if record.pop("format") != FORMAT:
            raise CaseError(f"{where}: was saved by another version of the program; rate the case again")
        record["verdicts"] = [Verdict(**verdict) for verdict in record["verdicts"]]
        listed = {item.name for item in fields(Result) if item.type is tuple}
        found: dict[str, Any] = {k: tuple(v) if k in listed else v for k, v in record.items()}
        return Result(**found)
    except (ValueError, KeyError, TypeError, AttributeError) as error:
        what = f"no {error} in it" if isinstance(error, KeyError) else error
        raise CaseError(
            f"{where}: is not a saved result ({what}); save one with: reactor rate CASE --save FILE"
        ) from None

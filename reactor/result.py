"""What a run found, as plain records that survive a file: numbers with units, verdicts, sources, a profile."""

import json
from dataclasses import asdict, dataclass, field
from typing import NamedTuple

from reactor.errors import CaseError

FORMAT = 1  # raised when a saved result of an older program can no longer be read


class Verdict(NamedTuple):
    """One judgement in words: PASS, CAUTION, FAIL, NOT ASSESSED or OUT OF DATA RANGE."""

    name: str
    word: str
    figure: str
    limit: str
    why: str


WORDS = ("PASS", "NOT ASSESSED", "CAUTION", "OUT OF DATA RANGE", "FAIL")


def quantity(value, unit, band=None):
    """
    Return one number as the record that every output uses; nan and None become null.

    Examples
    --------
    >>> quantity(350.0, "K")
    {'value': 350.0, 'unit': 'K'}
    """
    number = None if value is None or value != value else float(value)
    record = {"value": number, "unit": unit}
    return record if band is None else record | {"band": dict(zip(("low", "mid", "high"), band, strict=True))}


def by_species(flows, unit):
    """Return {species: quantity} of a mapping of numbers."""
    return {species: quantity(value, unit) for species, value in flows.items()}


@dataclass(frozen=True)
class Result:
    """
    A rated case: `results[name]` by the names that the README lists, and all that stands beside them.

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
        return json.dumps(record, indent=1, ensure_ascii=False, allow_nan=False)


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
        record["verdicts"] = tuple(Verdict(**verdict) for verdict in record["verdicts"])
        return Result(**record)
    except (ValueError, KeyError, TypeError, AttributeError) as error:
        raise CaseError(f"{where}: is not a saved result ({error}); save one with: reactor rate CASE --save FILE") from None

"""The evaluator of studies of a case: each point is the case with overrides, rated in full."""

from reactor import case as cases
from reactor.result import NAMES

BY_SPECIES = ("conversion_alkane", "products", "share_mol", "share_mass")
LISTS = ("mixtures", "steady_states")
FAINT = 1e-6  # of the largest entry of its kind: what is less is not kept in the file


def columns():
    """Return {name: (unit, definition)} of the results that become columns."""
    kept = {name: entry for name, entry in NAMES.items() if name not in BY_SPECIES + LISTS}
    return kept | {"worst": ("word", "worst word among the verdicts")}


def prepare(job):
    """Return the function of one point: the case of the job with the point's overrides, rated."""
    from reactor.rating import rate

    def one(point):
        return plain(rate(cases.changed(job.content, point.overrides)))

    return one


def plain(result):
    """Return a result as (values by name, what is kept beside them)."""
    values = {}
    for name in columns():
        record = result.results.get(name)
        if record is not None:
            values[name] = record["value"] if isinstance(record, dict) else record
    values["worst"] = result.worst
    more = {name: _kept(result.results[name]) for name in BY_SPECIES if name in result.results}
    more["verdicts"] = {verdict.name: verdict.word for verdict in result.verdicts}
    return values, more


def _kept(records):
    found = {species: record["value"] for species, record in records.items() if record["value"] is not None}
    most = max(map(abs, found.values()), default=0.0)
    return {species: value for species, value in found.items() if abs(value) > FAINT * most}

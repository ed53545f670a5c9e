"""What was put in, what was taken for granted, what was relied on, and the hashes that name a run."""

import hashlib
import os
from functools import cache
from pathlib import Path

import numpy as np

from reactor import library, store


def inputs(case):
    """Return the typed entries as records {key, typed, si}."""
    return tuple(
        {"key": key, "typed": typed, "si": "" if si == typed else si}
        for key, typed, si, origin, _ in case.listing()
        if origin == "typed"
    )


def assumed(case):
    """Return the defaults taken as records {key, value, why}."""
    return tuple({"key": a.key, "value": a.value, "why": a.why} for a in case.assumed)


def deviations(case):
    """Return what the command line changed as records {key, old, new}."""
    return tuple({"key": key, "old": old, "new": new} for key, old, new in case.deviations)


def relied_on(plant, more):
    """Return every distinct number that chemistry, light, walls and hazards rely on."""
    return tuple(dict.fromkeys((*plant.gas.cited, *plant.light.cited, *plant.wall.cited, *more)))


def sources(plant, more):
    """Return `relied_on` as records {what, source, status}."""
    return tuple(cited._asdict() for cited in relied_on(plant, more))


def rates(gas):
    """Return every rate constant as a record, the most uncertain first."""
    from reactor.chemistry.phase import phase

    reactions = phase(gas.path, gas.phase, gas.stamp, False)[0].reactions()
    found = [
        {
            "what": gas.equations[i],
            "factor": float(gas.f298[i]),
            "valid": tuple(map(float, gas.valid[i])),
            "source": reaction.input_data.get("source", gas.path.name),
            "status": gas.status[i],
        }
        for i, reaction in enumerate(reactions)
    ]
    return sorted(found, key=lambda rate: -rate["factor"] if rate["factor"] > 0 else 0.0)


def identity(case, gas):
    """Return the hashes of case, data and program, and the versions."""
    return {
        "case": case.hash(),
        "data": digest("data"),
        "mechanism": hashlib.sha256(gas.path.read_bytes()).hexdigest(),
        "program": store.version("photochlorination-reactor"),
        "code": digest("code"),
        "numpy": np.__version__,
        "cantera": store.version("cantera"),
        "scipy": store.version("scipy"),
    }


@cache
def digest(which):
    """Return the SHA-256 of all data files, or of all modules of the program, in order of their names."""
    folder = library.folder() if which == "data" else Path(__file__).parent.parent
    endings = (".csv", ".toml", ".yaml") if which == "data" else (".py", ".c", ".h")
    found, files = hashlib.sha256(), []
    for place, folders, names in os.walk(folder):  # pathlib's own walk takes three times as long
        inside = Path(place).relative_to(folder).parts
        if which == "code" and not inside:
            folders[:] = [name for name in folders if name not in ("data", "cases")]
        files += [(*inside, name) for name in names if name.endswith(endings)]
    for parts in sorted(files):
        with open(os.path.join(folder, *parts), "rb") as file:
            found.update("/".join(parts).encode() + b"\0" + file.read())
    return found.hexdigest()

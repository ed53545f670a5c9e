"""A mechanism in the cache folder: found again as long as its file, the program and Cantera are the same."""

import hashlib
import json
import re
from dataclasses import fields
from functools import cache
from pathlib import Path
from typing import Any

import numpy as np

from reactor import library, store
from reactor.chemistry.record import Mechanism
from reactor.chemistry.tables import Tables
from reactor.chemistry.transport import Fits

ELSEWHERE = re.compile(rb"\.ya?ml\s*[/\"']")  # species or reactions from another file, whose changes nobody sees
LOOSE = ("molar_mass", "atoms", "radical", "start", "valid", "f298", "g")
SHAPES = {  # by the sizes R, K, E; the rest of `Tables` is (R,)
    **dict.fromkeys(("reactants", "products", "efficiencies"), "RK"), "troe": "R4",
    **dict.fromkeys(("nasa_low", "nasa_high"), "K9"), **dict.fromkeys(("t_mid", "t_low", "t_high"), "K"),
    "molar_mass": "K", "atoms": "KE", "radical": "K", "valid": "R2", "f298": "R", "g": "R",
    **dict.fromkeys(Fits._fields, "K5"),
}  # fmt: skip
KINDS = {"radical": bool, "reversible": bool, "third_body": bool, "falloff": bool, "start": int}
WORDS = ("phase", "species", "elements", "kinds", "photolysis", "wall", "status", "equations", "remarks")


def key(content, name, shipped):
    """Return what a mechanism is kept under, None where its file leans on other files."""
    if ELSEWHERE.search(content):
        return None
    return hashlib.sha256(content + f"\0{name}\0{shipped}\0{_program()}".encode()).hexdigest()


@cache
def _program():
    """Return a digest of all but the file that the arrays depend on."""
    here = sorted(Path(__file__).parent.glob("*.py"))
    data = [library.folder() / "species.csv"]
    parts = [hashlib.sha256(path.read_bytes()).hexdigest() for path in [*here, *data]]
    return " ".join([*parts, store.version("cantera"), np.__version__])


def keep(key, gas):
    """Keep a mechanism."""
    arrays = {f.name: getattr(gas.tables, f.name) for f in fields(Tables) if f.name != "reference_pressure"}
    arrays |= {name: getattr(gas, name) for name in LOOSE}
    arrays |= {} if gas.fits is None else gas.fits._asdict()
    words = {name: getattr(gas, name) for name in WORDS}
    words |= {"cited": gas.cited, "condensing": gas.condensing, "pressure": gas.tables.reference_pressure}
    words["arrays"] = [[name, list(np.shape(array))] for name, array in arrays.items()]
    head = json.dumps(words).encode()
    body = b"".join(np.asarray(array).astype("<f8").tobytes() for array in arrays.values())
    store.keep("mechanism", key, len(head).to_bytes(8, "little") + head + body)


def find(key, file, stamp):
    """Return the mechanism kept under `key`, as that of `file`; None where there is none that is sound."""
    body = store.find("mechanism", key)
    try:
        return None if body is None else _opened(body, file, stamp)
    except (ValueError, KeyError, TypeError, IndexError, AttributeError):
        return None


def _opened(body, file, stamp):
    start = 8 + int.from_bytes(body[:8], "little")
    words = json.loads(body[8:start])
    sizes = {"R": len(words["equations"]), "K": len(words["species"]), "E": len(words["elements"])}
    arrays: dict[str, Any] = {}
    for name, shape in words["arrays"]:
        count = int(np.prod(shape, dtype=int))
        found = np.frombuffer(body, "<f8", count, start).reshape(shape)
        wanted = [sizes.get(size) or int(size) for size in SHAPES.get(name, "R")]
        if name != "start" and list(shape) != wanted:
            raise ValueError(name)
        arrays[name], start = found.astype(KINDS.get(name, float)), start + 8 * count
    named = [f.name for f in fields(Tables) if f.name != "reference_pressure"]
    tables = Tables(**{name: arrays.pop(name) for name in named}, reference_pressure=float(words["pressure"]))
    steps = [words["photolysis"], words["wall"], *arrays["start"].tolist()]
    whole = all(len(words[name]) == sizes[size] for name, size in (("kinds", "K"), ("status", "R")))
    if start != len(body) or not whole or not all(0 <= step < sizes["R"] for step in steps):
        raise ValueError("sizes")
    fits = Fits(*(arrays.pop(name) for name in Fits._fields)) if "viscosity" in arrays else None
    plain: dict[str, Any] = {name: tuple(value) if isinstance(value, list) else value
             for name, value in words.items() if name in WORDS}  # fmt: skip
    return Mechanism(
        name=file.stem, path=file, stamp=stamp, index={s: k for k, s in enumerate(words["species"])},
        cited=tuple(library.Cited(*entry) for entry in words["cited"]),
        condensing={species: tuple(numbers) for species, numbers in words["condensing"].items()},
        tables=tables, fits=fits, **plain, **arrays,
    )  # fmt: skip

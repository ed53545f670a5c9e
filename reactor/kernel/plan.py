"""
The mechanism as the flat arrays the compiled kernel reads: order of reactions, lists of sums, sparse elimination.

Made once per mechanism and kept in the user's cache folder under a hash of everything it depends on. A file
found there is read only if its digest, sizes and every number in its lists are right; else the plan is made anew.
"""

import hashlib
from typing import NamedTuple

import numpy as np

from reactor import store
from reactor.errors import ReactorError
from reactor.kernel.elimination import eliminate, order_species

MARK = 0x52504B32  # as in native/plan.h; changes with the order of the arrays
BORDER = 4  # total moles, pressure, coolant temperature, temperature
TABLES = ("reactants", "products", "reversible", "third_body", "falloff", "efficiencies", "b", "E", "low_b", "low_E",
          "troe", "nasa_low", "nasa_high", "t_mid")
SIZES = ("species", "reactions", "fixed", "first_back", "back", "photolysis", "wall", "chlorine", "bodies", "specials",
         "colliders", "falloffs", "starts", "items", "entries", "filled", "lowers", "updates")


class Plan(NamedTuple):
    """Arrays for the kernel, and the original numbers of its species, reactions and fall-off reactions."""

    ints: np.ndarray
    reals: np.ndarray
    species: np.ndarray
    reactions: np.ndarray
    falloffs: np.ndarray


def plan(tables, photolysis, wall, chlorine, starts):
    """
    Return the `Plan` of a mechanism, from the cache where a sound one is found there.

    Parameters
    ----------
    tables : record of arrays
        Stoichiometry, rate constants, third bodies, fall-off and thermo polynomials.
    photolysis, wall : int
        The two first-order steps whose rate constants come from the case.
    chlorine : int
        The species that absorbs light.
    starts : sequence of int
        Reactions whose reverse frees two chlorine atoms.
    """
    numbers = (int(photolysis), int(wall), float(tables.reference_pressure), int(chlorine), tuple(map(int, starts)))
    key = _key(tables, numbers)
    kept = store.find("plan", key)
    found = None if kept is None else _read(kept)
    if found is None:
        found = _make(tables, *numbers)
        store.keep("plan", key, _bytes(found))
    return found


def _key(tables, numbers):
    digest = hashlib.sha256(f"{MARK} {numbers!r}".encode())
    for name in TABLES:
        array = np.ascontiguousarray(getattr(tables, name), dtype=float)
        digest.update(f"{name} {array.shape}".encode() + array.tobytes())
    return digest.hexdigest()


def _bytes(found):
    return b"".join([np.array([len(found.ints), len(found.reals)], "<i8").tobytes(),
                     found.ints.astype("<i4").tobytes(), found.reals.astype("<f8").tobytes()])


def _read(body):
    """Return the plan in these bytes, or None where they hold none."""
    if len(body) < 16:
        return None
    counts = np.frombuffer(body[:16], "<i8")
    if counts.min() < 0 or len(body) != 16 + 4 * counts[0] + 8 * counts[1]:
        return None
    ints = np.frombuffer(body, "<i4", int(counts[0]), 16).astype(np.int32)
    reals = np.frombuffer(body, "<f8", int(counts[1]), 16 + 4 * int(counts[0])).astype(float)
    return _open(ints, reals)


def _sum_sizes(at, name):
    return [(f"{name}_{kind}_{end}", at[f"{name}_{kind}"]) for kind in ("plus", "minus", "other")
            for end in ("to", "from")]


def _layout(ints):
    """
    Yield (name, size, one more than the largest entry allowed) of every list of `ints`, in order.

    The numbers that give sizes are read on the way, so `ints` may come from anywhere.
    """
    at = dict(zip(SIZES, (int(v) for v in ints[1:19]), strict=True))
    K, R, N = at["species"], at["reactions"], at["species"] + BORDER
    yield from ((f"slot_{i}", R, K + 1) for i in range(3))
    yield from ((f"back_slot_{i}", at["back"], K + 1) for i in range(3))
    yield "special_first", at["bodies"] + 1, at["specials"] + 1
    yield "special_species", at["specials"], K
    yield "collider_reaction", at["colliders"], R
    yield "fall_reaction", at["falloffs"], R
    yield "start_back", at["starts"], at["back"]
    yield "start_body", at["starts"], at["bodies"]
    limits = {"equilibrium": (at["back"], K), "production": (K, R),
              "jacobian": (at["entries"], at["items"] + 1 + at["bodies"])}
    for name, (to, source) in limits.items():
        sizes = yield f"{name}_sizes", 3, len(ints)
        for kind, size in zip(("plus", "minus", "other"), sizes, strict=True):
            yield f"{name}_{kind}_to", size, to
            yield f"{name}_{kind}_from", size, source
    yield "item_k", at["items"], R + at["back"]
    yield "item_1", at["items"], K + 1
    yield "item_2", at["items"], K + 1
    yield "entry_at", at["entries"], at["filled"]
    for name in ("species_S", "species_P", "species_T", "S_species", "T_species"):
        yield name, K, at["filled"]
    yield "corner", BORDER * BORDER, at["filled"]
    yield "diagonal", N, at["filled"]
    yield "row", N + 1, at["filled"] + 1
    yield "column", at["filled"], N
    yield "lower_at", at["lowers"], at["filled"]
    yield "lower_row", N + 1, at["lowers"] + 1
    yield "update_first", at["lowers"] + 1, at["updates"] + 1
    yield "update_to", at["updates"], at["filled"]
    yield "species_order", K, K
    yield "reaction_order", R, R
    yield "fall_order", at["falloffs"], R


def _lists(ints):
    """Return the lists of `ints` by name, or None where a size or a number cannot be right."""
    if len(ints) < 19 or ints[0] != MARK or ints[1:19].min() < 0:
        return None
    found, place = {"sizes": ints[1:19]}, 19
    walk = _layout(ints)
    item = next(walk)
    while item is not None:
        name, size, limit = item
        part = ints[place:place + size]
        if len(part) != size or (size and (part.min() < (-1 if name == "start_body" else 0) or part.max() >= limit)):
            return None
        found[name] = part
        place += size
        try:
            item = walk.send([int(v) for v in part]) if name.endswith("_sizes") else next(walk)
        except StopIteration:
            item = None
    return found if place == len(ints) else None


def _open(ints, reals):
    """Return the `Plan` in two flat arrays, or None where they do not fit together."""
    found = _lists(ints)
    if found is None:
        return None
    at = dict(zip(SIZES, (int(v) for v in found["sizes"]), strict=True))
    K, R, moving = at["species"], at["reactions"], at["reactions"] - at["fixed"]
    others = sum(int(found[f"{name}_sizes"][2]) for name in ("equilibrium", "production", "jacobian"))
    size = (others + 2 * moving + 2 * at["back"] + R + at["bodies"] + at["specials"] + 7 * at["falloffs"] + at["items"]
            + 45 * K + 2)
    sound = (
        len(reals) == size and at["first_back"] + at["back"] == R and at["fixed"] <= at["first_back"]
        and at["bodies"] == at["colliders"] + at["falloffs"] and max(at["photolysis"], at["wall"]) < at["fixed"]
        and at["chlorine"] < K and _rising(found["row"], at["filled"]) and _rising(found["lower_row"], at["lowers"])
        and _rising(found["special_first"], at["specials"]) and _rising(found["update_first"], at["updates"])
        and all(np.array_equal(np.sort(found[name]), np.arange(n))
                for name, n in (("species_order", K), ("reaction_order", R)))
        and _eliminates(found) and (at["falloffs"] == 0 or found["fall_reaction"].min() >= at["fixed"])
    )
    if not sound:
        return None
    return Plan(ints, reals, found["species_order"], found["reaction_order"], found["fall_order"])


def _rising(first, last):
    return first[0] == 0 and first[-1] == last and bool(np.all(np.diff(first) >= 0))


def _eliminates(found):
    """Tell whether the elimination touches no more targets than it lists."""
    lower, row, diagonal = found["lower_at"], found["row"], found["diagonal"]
    inside = np.all((diagonal >= row[:-1]) & (diagonal < row[1:]))
    k = found["column"][lower]
    return bool(inside and np.array_equal(row[k + 1] - diagonal[k] - 1, np.diff(found["update_first"])))


def _make(tables, photolysis, wall, p_ref, chlorine, starts):
    from reactor.kernel.arrange import arrange

    parts = arrange(tables, photolysis, wall, p_ref, chlorine, starts)
    order = order_species(parts.pattern, parts.species)
    ints, reals = parts.written(order, eliminate)
    found = _open(ints, reals)
    if found is None:
        raise ReactorError("the mechanism could not be arranged for the kernel: its tables contradict themselves")
    return found

"""Writes a mechanism down as the flat lists of the compiled kernel."""

from typing import NamedTuple

import numpy as np

from reactor.errors import ReactorError
from reactor.kernel.thermo import R

BORDER, MARK = 4, 0x52504B32


class Item(NamedTuple):
    """One derivative dq/dc of a step: `by` * k * product of the other species; it moves `rows` of `column`."""

    k: int
    others: tuple
    by: float
    column: int
    reaction: int


class Parts(NamedTuple):
    """A mechanism in the kernel's order of reactions, its species still in their own order."""

    species: int
    reactions: np.ndarray
    fixed: int
    first_back: int
    slots: list
    back_slots: list
    net: np.ndarray
    bodies: list
    colliders: list
    falloffs: list
    starts: list
    items: list
    pattern: set
    tables: object
    photolysis: int
    wall: int
    p_ref: float
    chlorine: int

    def written(self, order, eliminate):
        """Return the two flat arrays, with the species in elimination `order`."""
        from reactor.kernel.write import write

        return write(self, np.asarray(order), eliminate)


def arrange(tables, photolysis, wall, p_ref, chlorine, starts):
    """Return the `Parts` of a mechanism; the arguments are those of `plan`."""
    count, species = tables.reactants.shape
    reversible, fall = np.asarray(tables.reversible, bool), np.asarray(tables.falloff, bool)
    own = np.zeros(count, bool)
    own[[photolysis, wall]] = True
    if np.any(reversible & own):
        raise ReactorError("photolysis and wall loss have no reverse; write their arrows one way in the mechanism")
    fixed = own | (~reversible & ~fall & (np.asarray(tables.b) == 0) & (np.asarray(tables.E) == 0))
    reactions = np.argsort(np.where(fixed, 0, np.where(reversible, 2, 1)), kind="stable")
    first_back = count - int(reversible.sum())
    new = np.empty(count, int)
    new[reactions] = np.arange(count)
    slots = [_taken(tables.reactants[r], "reactants", r) for r in reactions]
    back_slots = [_taken(tables.products[r], "products", r) for r in reactions[first_back:]]
    net = (np.asarray(tables.products) - np.asarray(tables.reactants))[reactions]
    colliders = [i for i, r in enumerate(reactions) if tables.third_body[r] and not fall[r]]
    falloffs = [i for i, r in enumerate(reactions) if fall[r]]
    bodies = [_body(np.asarray(tables.efficiencies)[reactions[i]]) for i in colliders + falloffs]
    items = _items(slots, back_slots, first_back, count)
    pattern = {(i, item.column) for item in items for i in np.flatnonzero(net[item.reaction])}
    pattern |= {(i, chlorine) for i in np.flatnonzero(net[new[photolysis]])}
    for reaction, (_, special) in zip(colliders + falloffs, bodies, strict=True):
        pattern |= {(i, s) for i in np.flatnonzero(net[reaction]) for s in special}
    found = [int(new[r]) for r in starts if reversible[r]]
    return Parts(species, reactions, int(fixed.sum()), first_back, slots, back_slots, net, bodies, colliders, falloffs,
                 found, items, pattern, tables, int(new[photolysis]), int(new[wall]), p_ref, chlorine)


def _taken(coefficients, side, number):
    """Return the species, repeated, whose product makes the rate of one side of a reaction."""
    whole = np.rint(coefficients).astype(int)
    taken = np.repeat(np.arange(len(whole)), whole)
    if np.any(whole != coefficients) or len(taken) > 3:
        raise ReactorError(f"reaction {number + 1} has more than three {side}, or broken numbers of them, and a rate "
                           "that hangs on them; the kernel takes elementary steps: write it as several")
    return [int(s) for s in taken]


def _body(efficiencies):
    """Return the usual efficiency and {species: what is on top of it}."""
    values, counts = np.unique(efficiencies, return_counts=True)
    usual = float(values[counts.argmax()])
    return usual, {int(s): float(efficiencies[s] - usual) for s in np.flatnonzero(efficiencies != usual)}


def _items(slots, back_slots, first_back, count):
    forward = [(r, r, taken, 1.0) for r, taken in enumerate(slots)]
    back = [(first_back + j, count + j, taken, -1.0) for j, taken in enumerate(back_slots)]
    found = []
    for reaction, k, taken, sign in forward + back:
        for species in sorted(set(taken)):
            others = list(taken)
            others.remove(species)
            found.append(Item(k, tuple(others), sign * taken.count(species), species, reaction))
    return found


def thermo_rows(coefficients):
    """Return the 22 rows of numbers per species that the kernel reads for one temperature range, from 7 or 9 columns."""
    a = np.zeros((9, len(coefficients)))
    a[:np.shape(coefficients)[1]] = np.asarray(coefficients, float).T
    heat = R * a[:5]
    enthalpy = R * a[:5] / np.arange(1, 6)[:, None]
    free = -a[1:5] / np.array([2.0, 6.0, 12.0, 20.0])[:, None]
    return np.concatenate((heat, enthalpy, R * a[5:6], a[:1], free, a[5:7], R * a[7:], -a[7:8] / 2, a[8:]))

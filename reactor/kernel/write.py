"""Writes the lists of a mechanism one behind the other, in the order in which native/plan.h reads them."""

import numpy as np

from reactor.kernel.arrange import BORDER, MARK, thermo_rows


def write(parts, order, eliminate):
    """Return (ints, reals) of `Parts` with the species in elimination `order`."""
    K, count = parts.species, len(parts.reactions)
    new = np.empty(K + 1, int)
    new[order], new[K] = np.arange(K), K
    entries, jacobian = _jacobian(parts, new)
    pattern = set(entries) | {(i, k) for i in range(K + BORDER) for k in range(K + BORDER) if max(i, k) >= K}
    pattern -= {(i, k) for i in (K + 1, K + 2) for k in range(K)} | {(i, K + 2) for i in range(K)}
    plan = eliminate(pattern, K + BORDER)
    back = count - parts.first_back
    net = parts.net[:, order]
    reversible = net[parts.first_back:]
    sums = (
        _sum((j, s, reversible[j, s]) for j in range(back) for s in np.flatnonzero(reversible[j])),
        _sum((s, r, net[r, s]) for r in range(count) for s in np.flatnonzero(net[r])),
        _sum(jacobian),
    )
    specials = [sorted((int(new[s]), by) for s, by in special.items()) for _, special in parts.bodies]
    sizes = [K, count, parts.fixed, parts.first_back, back, parts.photolysis, parts.wall, new[parts.chlorine],
             len(parts.bodies), sum(len(s) for s in specials), len(parts.colliders), len(parts.falloffs),
             len(parts.starts), len(parts.items), len(entries), plan.row[-1], len(plan.lower_at), len(plan.update_to)]
    ints = [[MARK], sizes, *_slots(parts.slots, new, K), *_slots(parts.back_slots, new, K),
            np.concatenate(([0], np.cumsum([len(s) for s in specials]))), [s for one in specials for s, _ in one],
            parts.colliders, parts.falloffs, *_starts(parts)]
    ints += [part for one in sums for part in one[0]]
    others = [[*item.others, K, K][:2] for item in parts.items]
    ints += [[item.k for item in parts.items], [new[a] for a, _ in others], [new[b] for _, b in others]]
    ints += [[plan.place(i, k) for i, k in entries], *_border(plan, K)]
    ints += [plan.diagonal, plan.row, plan.column, plan.lower_at, plan.lower_row, plan.update_first, plan.update_to]
    ints += [order, parts.reactions, parts.reactions[parts.falloffs]]
    reals = [one[1] for one in sums] + _reals(parts, order, specials)
    return (np.concatenate([np.asarray(part, np.int32).ravel() for part in ints]),
            np.concatenate([np.asarray(part, float).ravel() for part in reals]))


def _reals(parts, order, specials):
    t, r, f = parts.tables, parts.reactions, parts.reactions[parts.falloffs]
    troe = np.asarray(t.troe, float)[f].reshape(-1, 4)
    a, T3, T1, T2 = troe.T
    moving = r[parts.fixed:]
    return [
        np.asarray(t.b)[moving], np.asarray(t.E)[moving], parts.net[parts.first_back:].sum(axis=1),
        [len(s) for s in parts.slots], [len(s) for s in parts.back_slots], [usual for usual, _ in parts.bodies],
        [by for one in specials for _, by in one], np.asarray(t.low_b)[f], np.asarray(t.low_E)[f],
        np.column_stack((a, 1 / T3, 1 / T1, T2, np.where(a >= 1.0, 0.0, 1.0))), [item.by for item in parts.items],
        thermo_rows(np.asarray(t.nasa_low)[order]), thermo_rows(np.asarray(t.nasa_high)[order]),
        np.asarray(t.t_mid)[order], [parts.p_ref, np.min(t.t_mid)],
    ]


def _jacobian(parts, new):
    """Return the entries (row, column) of the species block and the sum (entry, item, factor) that fills them."""
    last = len(parts.items)
    terms = [(i, item.column, number, parts.net[item.reaction, i])
             for number, item in enumerate(parts.items) for i in np.flatnonzero(parts.net[item.reaction])]
    terms += [(i, parts.chlorine, last, parts.net[parts.photolysis, i])
              for i in np.flatnonzero(parts.net[parts.photolysis])]
    for number, (reaction, (_, special)) in enumerate(
            zip(parts.colliders + parts.falloffs, parts.bodies, strict=True), start=last + 1):
        terms += [(i, s, number, parts.net[reaction, i] * by)
                  for i in np.flatnonzero(parts.net[reaction]) for s, by in special.items()]
    entries = sorted({(int(new[i]), int(new[k])) for i, k, _, _ in terms})
    place = {entry: n for n, entry in enumerate(entries)}
    return entries, [(place[int(new[i]), int(new[k])], item, by) for i, k, item, by in terms]


def _sum(terms):
    """Return the lists of a sum: added, subtracted, added with a factor; equal targets far apart."""
    seen: dict = {}
    spread = []
    for to, source, by in terms:
        seen[to] = seen.get(to, 0) + 1
        spread.append((seen[to], int(to), int(source), float(by)))
    spread.sort(key=lambda term: term[:2])
    kinds = ([t for t in spread if t[3] == 1.0], [t for t in spread if t[3] == -1.0],
             [t for t in spread if abs(t[3]) != 1.0])
    lists = [[t[column] for t in kind] for kind in kinds for column in (1, 2)]
    return [[len(kind) for kind in kinds], *lists], [t[3] for t in kinds[2]]


def _slots(taken, new, K):
    """Return three lists of species numbers, K where there is none."""
    return [[new[[*one, K, K, K][slot]] for one in taken] for slot in range(3)]


def _starts(parts):
    body = {reaction: number for number, reaction in enumerate(parts.colliders + parts.falloffs)}
    return [s - parts.first_back for s in parts.starts], [body.get(s, -1) for s in parts.starts]


def _border(plan, K):
    """Return the places of the bordering columns and rows, and of the corner."""
    columns = [[plan.place(i, K + c) for i in range(K)] for c in (0, 1, 3)]
    rows = [[plan.place(K + r, k) for k in range(K)] for r in (0, 3)]
    corner = [plan.place(K + i, K + k) for i in range(BORDER) for k in range(BORDER)]
    return [*columns, *rows, corner]

"""The photon ledger: where the mains watts and the photons of a reactor go, and how well each line closes."""

from itertools import pairwise
from typing import NamedTuple

import numpy as np

from reactor.photons.energy import photon_energy

BANDS = (260, 300, 330, 350, 380, 400, 420, 450, 550)  # nm

PARTS = {
    "mains": ("driver loss", "lamp heat", "lost to ageing", "radiant"),
    "radiant": ("no data", "out of band", "lost in sleeve and deposit", "never enters", "into gas"),
    "into gas": ("absorbed", "outer wall", "ends"),
}


class Row(NamedTuple):
    """One line of the ledger; `part_of` names its whole; `photons` is None where it is not light."""

    name: str
    part_of: str
    watts: float
    photons: float | None


class Ledger(NamedTuple):
    """The rows from mains to absorbed, and how far the parts of each whole miss it, relative to the whole."""

    rows: list[Row]
    closure: dict[str, float]


def ledger(light, absorbed, outer_wall, ends=0.0, parallel=1):
    """
    Return the photon ledger of all tubes.

    mains = driver loss + lamp heat + lost to ageing + radiant. Driver efficiency makes the driver loss; what
    a fresh, hot lamp does not radiate is lamp heat; the end-of-life factor makes "lost to ageing": each
    factor counts once. radiant = no data + out of band (and lines too faint to follow) + lost in sleeve and
    deposit + never enters + into gas. into gas = absorbed + outer wall + ends.

    Parameters
    ----------
    light : Light
        The light of one tube. [-]
    absorbed : array, shape (m,)
        Photons absorbed by chlorine in one tube, by line of the lamps' spectrum, from the model. [mol/s]
    outer_wall : array, shape (m,)
        Photons that reach the outer wall of one tube, by line, from the model. [mol/s]
    ends : array, shape (m,), or 0
        Photons that leave through the ends of one tube, by line. [mol/s]
    parallel : int
        Number of equal tubes. [-]

    Returns
    -------
    ledger : Ledger
        `rows` of all tubes together [W, mol/s] and `closure` {whole: relative miss} [-].
    """
    found = {account.name: (account.watts, account.photons) for account in light.accounts}
    for name, flow in (("absorbed", absorbed), ("outer wall", outer_wall), ("ends", ends)):
        flow = np.broadcast_to(np.asarray(flow, float), light.spectrum.wavelength.shape)
        found[name] = (float(flow @ photon_energy(light.spectrum.wavelength)), float(flow.sum()))
    whole_of = {part: whole for whole, parts in PARTS.items() for part in parts}
    order = ["mains", *PARTS["mains"], *PARTS["radiant"], *PARTS["into gas"]]
    rows = [Row(name, whole_of.get(name, ""), *(_times(x, parallel) for x in found[name])) for name in order]
    return Ledger(rows, {whole: _miss(found, whole) for whole in PARTS})


def _times(amount, parallel):
    """Return an amount of all tubes; None stays None."""
    return None if amount is None else amount * parallel


def _miss(found, whole):
    """Return how far the parts of a line miss it, in watts or photons, whichever is worse."""
    misses = []
    for place in (0, 1):
        total = found[whole][place]
        if total:
            misses.append(abs(total - sum(found[part][place] for part in PARTS[whole])) / total)
    return max(misses, default=0.0)


def by_band(light, absorbed, outer_wall, ends, parallel=1):
    """
    Return the photons of each spectral band on their way, all tubes together.

    Parameters
    ----------
    light : Light
        The light of one tube. [-]
    absorbed, outer_wall, ends : array, shape (m,)
        Photons by line of one tube, as for `ledger`. [mol/s]
    parallel : int
        Number of equal tubes. [-]

    Returns
    -------
    rows : list of dict
        band (first and last nm), at window, passed, into gas, absorbed, outer wall, ends [mol/s]; bands without light
        are left out. [-]
    """
    s, nm = light.spectrum, light.spectrum.wavelength * 1e9
    flows = {
        "at window": s.at_window, "passed": s.at_window * s.passed, "into gas": np.diff(light.edges) @ s.into_gas,
        "absorbed": absorbed, "outer wall": outer_wall, "ends": ends,
    }  # fmt: skip
    rows = []
    for low, high in pairwise(BANDS):
        here = (nm >= low * (1 - 1e-9)) & ((nm < high) | (high == BANDS[-1]))
        if here.any() and s.at_window[here].sum() > 0:
            rows.append({"band": (low, high)} | {n: float(f[here].sum()) * parallel for n, f in flows.items()})
    return rows

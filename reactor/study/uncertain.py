"""What is uncertain in a case: one input each with its spread, from the data, the case and its meters."""

from typing import NamedTuple

from reactor import library
from reactor.chemistry import mechanism, wall
from reactor.rating.plant import lamps, plant
from reactor.rating.varied import Factors

SHEET = "study/uncertainty.csv"
QUANTILE = 1.6448536269514722  # standard deviations from the middle to 5 or 95 %


class Uncertain(NamedTuple):
    """
    One uncertain input, log-normal: `up` and `down` are its factors at one standard deviation to either side.

    `kind` is rate, cross_section, lamp_output, exchange, wall_loss, stream or species; `which` the reaction,
    stream or species. `source` and `status` say where the spread comes from.
    """

    name: str
    kind: str
    which: str
    up: float
    down: float
    source: str
    status: str


def inputs(case):
    """
    Return all `Uncertain` inputs of a case.

    Rates by their f298 (and g), cross-sections, lamp output, heat exchange by the band of its films, wall
    loss (the band of the sticking probability; a typed one by the sheet), impurities of the feeds, meters: a
    stated meter error is taken as the half width from 5 to 95 %.
    """
    gas = mechanism(case.chemistry.mechanism and case.path(case.chemistry.mechanism))
    sheet, stated = library.sheet(SHEET), case.uncertainty
    found = [] if stated.rates == 0 else _rates(gas)
    if case.lamp:
        found += [
            _single(kind, getattr(stated, kind), sheet[kind]) for kind in ("cross_section", "lamp_output")
        ]
    found += _exchange(case, gas, stated.exchange) + _wall(case, stated.wall_loss, sheet["wall_loss"])
    traces = sorted(
        {
            s
            for feed in case.feed.values()
            for s, n in feed.moles.items()
            if 0 < n < sheet["trace"].value * sum(feed.moles.values())
        }
    )
    found += [_single("species", stated.impurity, sheet["impurity"], s) for s in traces]
    found += [_meter(case, name) for name in case.feed]
    return [each for each in found if each is not None and (each.up > 1 or each.down < 1)]


def _rates(gas):
    """Return the rate constants with an uncertainty factor."""
    found: list = []
    seen: dict = {}
    for number, (equation, f) in enumerate(zip(gas.equations, gas.f298, strict=True)):
        if f > 1.0:
            seen[equation] = seen.get(equation, 0) + 1
            name = f"k {equation}" + (f" #{seen[equation]}" if seen[equation] > 1 else "")
            found.append(
                Uncertain(name, "rate", str(number), float(f), 1 / float(f), "mechanism", gas.status[number])
            )
    return found


def _single(kind, stated, datum, which=""):
    """Return an input with one factor, stated in the case or from the sheet."""
    factor = stated or datum.value
    source, status = ("the case", "stated") if stated else (datum.source, datum.status)
    name = f"{which} in the feeds" if which else kind.replace("_", " ")
    return Uncertain(name, kind, which, factor, 1 / factor, source, status)


def _exchange(case, gas, stated):
    """Return the heat transfer coefficient, unless nothing is cooled or U is typed."""
    if case.cooling.mode == "none" or (case.cooling.overall and not stated):
        return []
    if stated:
        return [
            Uncertain("heat transfer coefficient", "exchange", "", stated, 1 / stated, "the case", "stated")
        ]
    low, high = plant(case, gas, lamps(case)).wall.band
    return [
        Uncertain(
            "heat transfer coefficient",
            "exchange",
            "",
            high ** (1 / QUANTILE),
            low ** (1 / QUANTILE),
            "own",
            "estimate",
        )
    ]


def _wall(case, stated, datum):
    """Return the loss of atoms at the wall."""
    chemistry = case.chemistry
    if chemistry.wall_loss == 0 or chemistry.wall_sticking == 0:
        return []
    if stated or chemistry.wall_loss is not None or chemistry.wall_sticking is not None:
        return [_single("wall_loss", stated, datum)]
    known = wall.default_sticking()
    up, down = ((end / known.value) ** (1 / QUANTILE) for end in (known.high, known.low))
    return [Uncertain("wall loss", "wall_loss", "", up, down, known.source, known.status)]


def _meter(case, name):
    """Return the meter of a stream, where its error is stated and the stream has a flow of its own."""
    carrier = case.feed[name].moles.get("Cl2", 0.0) > 0
    error = case.meters.chlorine if carrier else case.meters.alkane
    if not error:
        return None
    up = (1 + error) ** (1 / QUANTILE)
    return Uncertain(f"meter of {name}", "stream", name, up, 1 / up, "the case", "stated")


def factors(found, deviations, rate_scale=1.0):
    """
    Return the `Factors` at given standard deviations of the inputs.

    Parameters
    ----------
    found : sequence of Uncertain
        The inputs.
    deviations : sequence of float
        One an input, in standard deviations. [-]
    rate_scale : float
        Multiplies the deviations of all rate constants. [-]
    """
    rates, streams, species, single = {}, {}, {}, {}
    for each, x in zip(found, deviations, strict=True):
        factor = each.up**x if x > 0 else each.down ** (-x)
        if each.kind == "rate":
            rates[int(each.which)] = float(x) * rate_scale
        elif each.kind == "stream":
            streams[each.which] = factor
        elif each.kind == "species":
            species[each.which] = factor
        else:
            single[each.kind] = factor
    return Factors(rates=rates, streams=streams, species=species, **single)

"""
Chlorine in stages.

A train of tubes with cooling between them, or injections along one tube, under a cap on chlorine.

Every stage is the vessel of the case, rated on what the stage before it left, molecules and radicals, plus
its share of the chlorine. The chain keeps the number of moles, so n stages at a mole fraction x after each
injection bring the total from N to N/(1 - x)^n: that is the count.
"""

import math
from dataclasses import replace

from reactor.case.feeds import carriers
from reactor.case.schema import Feed
from reactor.case.species import is_alkane, is_organic
from reactor.errors import ReactorError
from reactor.rating import hazard
from reactor.rating.figures import chlorinated
from reactor.sizing.probe import Probe, with_gas

MOST = 60


def count(before, chlorine, cap):
    """
    Return the number of stages and the mole fraction after each injection when all are equal.

    Parameters
    ----------
    before : float
        All gas but the chlorine. [mol/s]
    chlorine : float
        All chlorine. [mol/s]
    cap : float
        Highest mole fraction of chlorine after an injection. [-]

    Examples
    --------
    >>> print([count(1 + diluent, 3.3, 0.10)[0] for diluent in (0, 2, 5, 10)])
    [14, 8, 5, 3]
    """
    exact = math.log((before + chlorine) / before) / -math.log(1 - cap)
    number = max(1, math.ceil(exact - 1e-9))
    return number, 1 - (before / (before + chlorine)) ** (1 / number)


def stages(case, probe, result, options):
    """
    Return the stage table of the train, its product split beside that of all chlorine at once.

    And the price.
    """
    case = with_gas(probe.case, probe.gas)  # with its recycle closed
    split = split_feed(case)
    if split is None or case.vessel.kind != "plug flow":
        return {
            "count": 0,
            "cap": options.cap,
            "diluent_per_alkane": 0.0,
            "chlorine_per_alkane": 0.0,
            "stages": [],
            "split": {},
            "remarks": ["stages need plug flow and one stream of chlorine without alkane"],
        }
    gas_feed, chlorine = split
    before, total = sum(gas_feed.moles.values()), sum(chlorine.moles.values())
    alkane = sum(n for s, n in gas_feed.moles.items() if _is(is_alkane, s))
    number, share = count(before, total, options.cap)
    if number > MOST:
        raise ReactorError(f"--cap: {number} stages; raise the cap or add diluent")
    between = options.between_stages or gas_feed.temperature
    rows, last = train(case, gas_feed, chlorine, number, share, between)
    found = {
        "count": number,
        "cap": options.cap,
        "share": share,
        "diluent_per_alkane": (before - alkane) / alkane,
        "chlorine_per_alkane": total / alkane,
        "between": between,
        "stages": rows,
    }
    found["split"] = {"in stages": product(last, fed(probe)), "all at the inlet": product(probe, fed(probe))}
    found["poly"] = {"in stages": poly(last, fed(probe)), "all at the inlet": probe["poly_share_mol"]}
    found["remarks"] = remarks(found, rows, options)
    return found


def split_feed(case):
    """
    Return (all gas but the chlorine stream as one feed, the chlorine stream).

    None where that cannot be told.
    """
    bring = carriers(case.feed)
    if len(bring) != 1:
        return None
    others = [feed for name, feed in case.feed.items() if name != bring[0]]
    moles: dict[str, float] = {}
    for feed in others:
        for species, n in feed.moles.items():
            moles[species] = moles.get(species, 0.0) + n
    if not moles:
        return None
    heat = sum(sum(f.moles.values()) * f.temperature for f in others) / sum(moles.values())
    return Feed(name="gas", moles=moles, temperature=heat), case.feed[bring[0]]


def train(case, gas_feed, chlorine, number, share, between):
    """Return the rows of the stages and the probe of the last; each stage enters at `between` [K]."""
    rows, found = [], None
    flow, growth = sum(gas_feed.moles.values()), 1 / (1 - share)
    fraction = {s: n / sum(chlorine.moles.values()) for s, n in chlorine.moles.items()}
    for stage in range(1, number + 1):
        added = flow * (growth - 1)
        flow *= growth
        injected = Feed(
            name="chlorine",
            moles={s: added * x for s, x in fraction.items()},
            temperature=chlorine.temperature,
        )
        inlet = replace(gas_feed, temperature=between)
        cooling = 0.0
        if found is not None:
            out, gas = found.profile.outlet, found.gas
            cooling = float(out.moles @ (gas.enthalpy(out.temperature) - gas.enthalpy(between)))
            inlet = Feed(
                name="gas",
                temperature=between,
                moles={s: float(n) for s, n in zip(gas.species, out.moles, strict=True) if n > 0},
            )
        found = Probe(replace(case, feed={"gas": inlet, "chlorine": injected}, inject=(), recycle=None))
        rows.append(_row(stage, found, injected, cooling))
    return rows, found


def _row(stage, found, injected, cooling):
    case, gas, profile = found.case, found.gas, found.profile
    mixed = hazard.mixtures(case, gas, hazard.rulebook(case, gas))
    inlet = next(m for m in mixed if m["where"] == "inlet, mixed")
    chlorine = gas.index["Cl2"]
    return {
        "stage": stage,
        "chlorine": float(injected.moles["Cl2"] * gas.molar_mass[chlorine] * 3600),
        "chlorine_share": float(profile.inlet.moles[chlorine] / profile.inlet.total),
        "inlet": profile.inlet.temperature,
        "hottest": float(profile.hottest[0]),
        "outlet": float(profile.outlet.temperature),
        "slip": float(profile.outlet.moles[chlorine] / profile.fed[chlorine]),
        "cooling": cooling,
        "class": inlet["class"],
        "class_worst_corner": inlet["class_worst_corner"],
        "margin": inlet["margin"]["value"],
        "adiabatic_rise": found["adiabatic_rise"],
        "heat_reaction": found["heat_reaction"],
        "dew_margin": found["dew_point_margin"],
        "light_electrical": found["light_electrical"],
    }


def _is(test, species):
    try:
        return test(species)
    except (ValueError, KeyError):
        return False


def fed(probe):
    """Return what is fed to the whole train [mol/s] by species: the same as to the case itself."""
    return probe.profile.fed


def product(probe, given):
    """Return the organics formed over the whole train, net of what is fed, {species: kg/h}, largest first."""
    gas = probe.gas
    made = (probe.profile.outlet.moles - given) * gas.molar_mass * 3600
    found = {s: float(m) for s, m in zip(gas.species, made, strict=True) if (m > 1e-3 and _is(is_organic, s)) or s == "CCl4"}
    return dict(sorted(found.items(), key=lambda item: -item[1]))


def poly(probe, given):
    """Return the share by mol of two and more chlorine among the chlorinated organics formed."""
    gas = probe.gas
    made = probe.profile.outlet.moles - given
    chloride = [i for i in chlorinated(gas) if made[i] > 0]
    many = [i for i in chloride if gas.atoms[i, gas.elements.index("Cl")] >= 2]
    return float(made[many].sum() / made[chloride].sum())


def remarks(found, rows, options):
    """Say what staging buys and what it costs."""
    staged, once = found["poly"]["in stages"], found["poly"]["all at the inlet"]
    said = []
    if once and len(rows) > 1:
        word = "more" if staged > once else "less"
        said.append(
            f"poly share {100 * staged:.3g} % by mol in stages, {100 * once:.3g} % with all chlorine at "
            f"the inlet: "
            f"{word} of it in cold stages"
            + ("; k(CH3Cl)/k(CH4) falls as the gas gets hot. " if word == "more" else ". ")
            + "Staging buys distance from the explosive range and temperature, not selectivity"
        )
    over = [row["stage"] for row in rows if row["chlorine_share"] > options.cap * 1.0001]
    if over:
        said.append(f"chlorine left over from the stage before lifts stage {', '.join(map(str, over[:6]))} above the cap")
    wet = [row["stage"] for row in rows if row["dew_margin"] is not None and row["dew_margin"] < 10]
    if wet:
        said.append(f"stage {', '.join(map(str, wet[:6]))}: coldest wall less than 10 K above the dew point")
    near = [row["stage"] for row in rows if row["class"] != "OUTSIDE (estimate)"]
    if near:
        said.append(f"stage {', '.join(map(str, near[:8]))} is not OUTSIDE the estimated explosive range")
    return said

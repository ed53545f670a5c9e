"""The whole calculation, read from the top."""

from reactor import chemistry
from reactor.case.loops import NAME as RECYCLE
from reactor.models import SOLVERS, pools
from reactor.models.assemble import mixed_feed
from reactor.rating import account, figures, hazard, identity, judge, surroundings
from reactor.rating.bands import bands
from reactor.rating.closures import closures
from reactor.rating.plant import lamps, mechanism, plant
from reactor.rating.varied import NOMINAL, equipped
from reactor.result import Result


def rate(case, factors=NOMINAL):
    """
    Take a checked case through the whole calculation.

    Parameters
    ----------
    case : Case
        From `reactor.load`.
    factors : Factors
        Moves uncertain data; the band of U, a part of the uncertainty itself, is then left out.

    Returns
    -------
    Result

    Raises
    ------
    ConvergenceError
        When a solver's budget is used up; says where it stopped and what to try.
    """
    gas = mechanism(case)
    case, equipment = equipped(case, gas, factors)
    # chemistry, light and heat together; with local radical pools also the profile of one mixed pool
    equipment, profile, mixed = pools.settle(case, equipment, SOLVERS[case.vessel.kind])
    gas, light = equipment.gas, equipment.light
    feed = mixed_feed(case, gas)
    dangers = hazard.assess(case, equipment, profile, feed)
    results = figures.headline(case, equipment, profile, feed) | dangers.results
    results = bands(case, equipment, results) if factors == NOMINAL else results
    results |= figures.bracket(profile, mixed, gas)
    typed = case.chemistry.photolysis_rate is not None  # then the lamps' light is not what acts
    gaps = closures(profile, gas, 0.0 if typed else light.entering.sum() * case.vessel.vessels)
    around = surroundings.assess(case, gas, profile)
    verdicts = (*judge.verdicts(case, equipment, profile, results, gaps, dangers), *around)
    return Result(
        title=case.title,
        revision=case.about.revision,
        date=str(case.about.date or ""),
        results=results,
        closures=gaps,
        verdicts=verdicts,
        inputs=identity.inputs(case),
        assumed=identity.assumed(case),
        deviations=identity.deviations(case),
        cautions=dangers.cautions,
        remarks=(*open_loop(case), *profile.remarks, *light.notes, *equipment.wall.notes, *gas.remarks,
                 *hazard.phosgene(profile, gas)),
        sources=identity.sources(equipment, dangers.cited),
        ledger=() if typed else account.light_ledger(light, profile, case),
        streams=account.streams(profile, gas),
        numerics=profile.cost,
        identity=identity.identity(case, gas),
        profile=account.columns(profile, gas, dangers.classes),
    )


def open_loop(case):
    """Say that a recycle is not closed, where the case has one and its stream is not among the feeds."""
    if case.recycle is None or RECYCLE in case.feed:
        return ()
    return (
        "the recycle is NOT closed here: the feeds are taken as typed, without the inerts and products that "
        "come back",
    )


def cited(case):
    """Return what a case relies on, without solving it, and its rate constants, the most uncertain first."""
    gas = mechanism(case)
    equipment = plant(case, gas, lamps(case))
    return identity.relied_on(equipment, hazard.citations(case, gas)), identity.rates(gas)


def shipped():
    """Return what the mechanism that comes with the program relies on, and its rate constants likewise."""
    gas = chemistry.mechanism(None)
    return gas.cited, identity.rates(gas)

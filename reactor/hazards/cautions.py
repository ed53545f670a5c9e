"""The words that stand on every report, and those that a case adds. None of them can be switched off."""

FIXED = (
    "This is a scoping calculation. It is no hazard study, no design of a relief or an interlock, no "
    "operating instruction and no permit to build or run anything. It is not for live control or "
    "protection.",
    "The explosion class rests on a few old figures for fuels in chlorine at 25 degC and 1 atm, most "
    "of them quoted from memory, and on a calculated adiabatic temperature. OUTSIDE (estimate) means "
    "outside the estimated range: it does not prove that a mixture cannot burn or detonate. UNKNOWN "
    "is to be treated as INSIDE.",
    "The class speaks of flames only. A lit reactor gives off its full heat of reaction at any "
    "composition, and strong light is itself a source of ignition.",
    "Heat, rate, light and temperature depend on the kinetic and thermochemical data named with the "
    "result. Where a band is printed it covers what it names and nothing else; where none is printed "
    "the uncertainty is not known.",
    "Switching the lamp off stops the reaction only while the gas is colder than its thermal "
    "light-off temperature. Above it only shutting off chlorine, sweeping and cooling do.",
    "Chlorine, hydrogen chloride and the chlorinated alkanes are toxic; with oxygen or carbon "
    "monoxide, phosgene forms. Dichloromethane, chloroform, carbon tetrachloride, dichloroethanes and "
    "dichloropropanes are known or suspected carcinogens. Ultraviolet light and ozone injure. Printed "
    "exposure figures are for orientation and age.",
    "Local law, codes and site rules come first. The design has to be checked by licensed or "
    "otherwise competent engineers for process safety, pressure equipment, electrical areas and toxic "
    "gas. SAFETY.md says what is not covered.",
)

_CASE = {
    "unknown_class": (
        "At least one mixture is UNKNOWN: no usable explosion data at its conditions. Treat it as INSIDE."
    ),
    "inside": "At least one mixture lies INSIDE the estimated explosive range.",
    "calculated_only": (
        "The explosion range of at least one fuel is calculated only; no measurement stands behind it."
    ),
    "thermal_start": (
        "A noticeable share of the chains starts by heat. The reaction then goes on without light, and "
        "the lamp no longer controls it."
    ),
    "oxygen": (
        "Oxygen is present. It breaks chains, so that chlorine may collect unreacted and react in a burst "
        "when the oxygen is used up; it makes phosgene from chloroform and carbon tetrachloride, and "
        "peroxides."
    ),
    "higher_alkanes": (
        "The feed holds C2 or C3 alkanes. They react far faster than methane: the heat comes out near the "
        "injector, and some of their chlorides have no explosion range in chlorine."
    ),
    "hydrogen": (
        "Hydrogen is present. Mixtures with chlorine are ignited by daylight over most of their range; "
        "hydrogen in a dry system is a sign of corroding steel."
    ),
    "wet": (
        "Water may be present. Wet chlorine and wet hydrogen chloride attack steel and form hydrogen; "
        "titanium, which stands wet chlorine, burns in dry chlorine."
    ),
    "hot_envelope": (
        "A medium-pressure arc has an envelope of 600 to 900 degC, above every ignition temperature on "
        "record for these fuels. If its sleeve breaks, the lamp ignites the gas."
    ),
    "glass": (
        "A glass or silica part holds chlorine and fuel. Breakage is a credible event, by thermal stress, "
        "pressure, lamp failure or handling; what leaks out and what leaks in have to be thought through."
    ),
    "mercury": "The lamp holds mercury: a broken lamp contaminates the process and the room.",
    "restrike": (
        "After a lamp outage the reactor is full of unreacted mixture. Relighting starts at a multiple of "
        "the normal heat release."
    ),
    "condensing": (
        "Liquid can form at the coldest wall. Liquid chlorinated hydrocarbon dissolves chlorine and "
        "stores reaction heat in a small volume; a reaction started there may detonate."
    ),
    "solid": "C2Cl6 can form crystals at the coldest wall and block lines or darken the sleeve.",
    "steel": "Steel in dry chlorine is planned no hotter than 120 degC; hot steel burns in chlorine.",
    "opaque": (
        "The gas is optically thick and poorly stirred. Close to the lamp it gets hotter than the mean "
        "along the tube that is printed."
    ),
    "soot": "Locally above 600 K soot and tar are possible; they darken the sleeve and warm it.",
    "adiabatic": "The wall removes little of the heat: the tube is close to adiabatic.",
}


def case_cautions(flags=()):
    """
    Return the cautions that apply to a case, in the order of this module.

    Parameters
    ----------
    flags : iterable of str
        Names of what was found, such as `oxygen` or `unknown_class`; an unknown name is refused. [-]

    Returns
    -------
    cautions : tuple of str
        One paragraph each. [-]

    Examples
    --------
    >>> for text in case_cautions(["inside"]):
    ...     print(text)
    At least one mixture lies INSIDE the estimated explosive range.
    """
    unknown = set(flags) - set(_CASE)
    if unknown:
        raise ValueError(f"unknown cautions {sorted(unknown)}; known: {', '.join(_CASE)}")
    return tuple(text for name, text in _CASE.items() if name in flags)


def block(flags=()):
    """Return all cautions of a report: the fixed ones, then those of the case."""
    return FIXED + case_cautions(flags)

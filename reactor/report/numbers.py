"""Numbers as an engineer reads them: few digits, trade units, 'not available' in words."""

from math import floor, log10

from reactor import units

DIGITS = 3
NOTHING = "not available"


def figure(value, digits=DIGITS):
    """
    Return a number with few significant digits, in plain form wherever that is short.

    Examples
    --------
    >>> figure(0.000123456), figure(52.3149), figure(14812.0), figure(1234567.0), figure(0.4)
    ('1.23e-04', '52.3', '14800', '1.23e+06', '0.400')
    """
    if value is None:
        return NOTHING
    if value == 0:
        return "0"
    rounded = float(f"{value:.{digits - 1}e}")
    if not 1e-3 <= abs(rounded) < 1e6:
        return f"{value:.{digits - 1}e}"
    decimals = digits - 1 - floor(log10(abs(rounded)))
    return f"{rounded:.{max(decimals, 0)}f}"


def percent(record):
    """
    Return a share in per cent; as many digits as show what is missing to 100 %.

    Examples
    --------
    >>> for share in (0.0279, 0.972, 0.99998, 1e-12):
    ...     print(percent({"value": share}))
    2.79 %
    97.2 %
    99.998 %
    below 0.001 %
    """
    value = record["value"]
    if value is None:
        return NOTHING
    if 0.99 < value < 1:
        missing = 100 * (1 - value)
        return f"{100 * value:.{min(max(1, -floor(log10(missing))), 9)}f} %"
    return f"{figure(100 * value)} %" if value == 0 or abs(value) >= 1e-5 else "below 0.001 %"


def in_unit(record, unit, digits=DIGITS):
    """Return a result in a trade unit, with the unit."""
    value = record["value"]
    if value is None:
        return NOTHING
    if unit == "1":
        return figure(value, digits)
    if unit == "degC":
        return f"{value - 273.15:.1f} degC"
    if record["unit"] != unit:
        value = value * units.to_si(1.0, record["unit"]) / units.to_si(1.0, unit)
    return f"{figure(value, digits)} {unit}"


def power(record):
    """Return a power in W, from one kilowatt on in kW."""
    value = record["value"]
    return in_unit(record, "W" if value is None or abs(value) < 1000.0 else "kW")

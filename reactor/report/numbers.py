"""Numbers as an engineer reads them: few digits, trade units, 'none' in words."""

from reactor import units

DIGITS = 4
NOTHING = "not available"


def figure(value, digits=DIGITS):
    """
    Return a number with few significant digits.

    Examples
    --------
    >>> figure(0.000123456), figure(52.3149), figure(1234567.0)
    ('1.235e-04', '52.31', '1.235e+06')
    """
    if value is None:
        return NOTHING
    if value != 0 and not 1e-3 <= abs(value) < 1e5:
        return f"{value:.{digits - 1}e}"
    return f"{value:.{digits}g}"


def percent(record):
    """Return a share in per cent; shares below one in ten thousand in scientific form."""
    value = record["value"]
    if value is None:
        return NOTHING
    return f"{figure(100 * value, 3)} %"


def in_unit(record, unit):
    """Return a result in a trade unit, with the unit."""
    value = record["value"]
    if value is None:
        return NOTHING
    if unit == "1":
        return figure(value)
    if unit == "degC":
        return f"{value - 273.15:.1f} degC"
    if record["unit"] != unit:
        value = value * units.to_si(1.0, record["unit"]) / units.to_si(1.0, unit)
    return f"{figure(value)} {unit}"

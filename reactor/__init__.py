"""
Design calculator for continuous photochlorination reactors.

    import reactor
    case = reactor.load("cases/kestrel_ten_led.toml")
    result = reactor.rate(case)
    result["chlorine_slip"], result.profile_frame()
"""

__all__ = ["load", "rate"]


def load(path, overrides=(), strict=False):
    """Read and check a case file; see `reactor.case.load`."""
    from reactor.case import load as read

    return read(path, overrides, strict)


def rate(case):
    """Rate a checked case; see `reactor.rating.rate`."""
    from reactor.rating import rate as run

    return run(case)

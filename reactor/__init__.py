"""
Design calculator for continuous photochlorination reactors.

    import reactor
    case = reactor.load("cases/kestrel_ten_led.toml")
    result = reactor.rate(case)
    result["chlorine_slip"], result.profile_frame()
"""

__all__ = ["load", "rate", "sweep"]


def load(path, overrides=(), strict=False):
    """Read and check a case file; see `reactor.case.load`."""
    from reactor.case import load as read

    return read(path, overrides, strict)


def rate(case):
    """Rate a checked case, its recycle closed first where it has one; see `reactor.rating.rate`."""
    from reactor.rating import rate as run

    if case.recycle is None:
        return run(case)
    from reactor.sizing.loop import closed

    return run(closed(case))


def sweep(case, vary, **options):
    """Rate a case at many points; return a DataFrame with units; see `reactor.study.sweep`."""
    from reactor.study import sweep as run

    return run(case, vary, **options)

"""The recycle of a case: which shares of what leaves the reactor go back to its inlet."""

from reactor.case import species
from reactor.case.schema import Recycle, RecycleForm
from reactor.units import kinds

NAME = "recycle"  # of the stream that the closed loop adds to the feeds


def read(draft, raw, feed):
    """Return the `Recycle` of a case, or None after noting the faults."""
    if raw is None or not draft.is_table(raw, "recycle"):
        return None
    values = draft.table(RecycleForm, raw, "recycle", beside=("shares", "stream"))
    shares = _shares(draft, raw.get("shares"))
    stream = _stream(draft, raw.get("stream"), feed)
    if shares is None or stream is None or not {"purge", "temperature", "share"} <= set(values):
        return None
    if values["temperature"] is None:
        same = feed[stream].temperature
        values["temperature"] = draft.assume("recycle.temperature", same, f"as feed.{stream}", "K")
    return Recycle(stream=stream, shares=shares, **values)


def _shares(draft, raw):
    """Return {species: share sent back}, or None after noting the faults."""
    if not isinstance(raw, dict) or not raw:
        draft.fault("recycle.shares", 'missing; write what goes back, like { CH4 = "99 %", N2 = "99 %" }')
        return None
    found = {}
    for name, value in raw.items():
        try:
            known = species.find(name)
        except ValueError as error:
            draft.fault(f"recycle.shares.{name}", str(error))
            continue
        share = draft.take(f"recycle.shares.{name}", kinds.FRACTION, value)
        if share is not None:
            found[known] = share
    return found if len(found) == len(raw) else None


def _stream(draft, typed, feed):
    """Return the name of the stream that the recycle joins: the one that brings the alkane."""
    bringing = [
        name
        for name, one in feed.items()
        if any(species.is_alkane(s) and n > 0 for s, n in one.moles.items())
    ]
    if typed is not None and typed not in bringing:
        draft.fault(
            "recycle.stream",
            f"write the stream that brings the alkane: {', '.join(bringing) or 'there is none'}",
        )
        return None
    if typed is None and len(bringing) != 1:
        if feed:
            draft.fault(
                "recycle.stream", f"several streams bring alkane: {', '.join(bringing)}; name one of them"
            )
        return None
    return typed or bringing[0]

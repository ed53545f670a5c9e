"""How fast the plant acts on an upset, as the case says or as assumed."""

from typing import NamedTuple

from reactor import library
from reactor.library import Cited

TIMES = ("temperature_detection", "direct_detection", "logic", "valve")


class Response(NamedTuple):
    """
    Times of the trip chain [s] and what else an upset needs; `assumed` lists what the case did not state.

    `direct` sees flows, lamp current, coolant flow and pressure; `temperature` sees a thermocouple. Both end
    with the valve closed; what is still in the line and the reactor has to be swept after that.
    """

    temperature_detection: float
    direct_detection: float
    logic: float
    valve: float
    dead_leg: float
    purge_gas: str
    filling: str
    chlorine_wide_open: float | None
    chlorine_line: float | None
    assumed: tuple
    cited: tuple

    @property
    def direct(self):
        """Return the time from the upset to a closed valve when a direct signal trips [s]."""
        return self.direct_detection + self.logic + self.valve

    @property
    def temperature(self):
        """Return the same when a thermocouple trips [s]."""
        return self.temperature_detection + self.logic + self.valve


def response(case):
    """Return the `Response` of a case, its gaps filled from data/hazards/responses.csv."""
    typed, data = case.upsets, library.sheet("hazards/responses.csv")
    assumed: list = []
    cited: list = []

    def taken(name):
        value = getattr(typed, name)
        if value is not None:
            return value
        datum = data[name]
        unit = "m" if name == "dead_leg" else "s"
        assumed.append({"key": f"upsets.{name}", "value": f"{datum.value:g} {unit}", "why": datum.note})
        cited.append(Cited(f"upset response: {name}", datum.source, datum.status))
        return datum.value

    def chosen(name, value, why):
        if getattr(typed, name) is not None:
            return getattr(typed, name)
        assumed.append({"key": f"upsets.{name}", "value": value, "why": why})
        return value

    return Response(
        **{name: taken(name) for name in (*TIMES, "dead_leg")},
        purge_gas=chosen("purge_gas", "N2", "common practice"),
        filling=chosen("filling", "alkane first", "common practice: chlorine last on, first off"),
        chlorine_wide_open=typed.chlorine_wide_open,
        chlorine_line=typed.chlorine_line,
        assumed=tuple(assumed),
        cited=tuple(cited),
    )

"""Chemistry: the mechanism as arrays, its provenance, gas transport, loss of chlorine atoms at walls."""

from reactor.chemistry.load import mechanism
from reactor.chemistry.record import Mechanism, Transport
from reactor.chemistry.tables import Tables

__all__ = ["Mechanism", "Tables", "Transport", "mechanism"]

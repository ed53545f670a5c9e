"""Assemble a case into plain arrays, run the kernel, and name the answer."""

from reactor.models.plug_flow import solve as plug_flow
from reactor.models.profile import Profile
from reactor.models.stirred_tank import solve as stirred_tank
from reactor.models.tanks_in_series import solve as tanks_in_series

SOLVERS = {"plug flow": plug_flow, "stirred tank": stirred_tank, "tanks in series": tanks_in_series}

__all__ = ["SOLVERS", "Profile", "plug_flow", "stirred_tank", "tanks_in_series"]

"""Substitution networks: what chlorine makes of any light alkane, as a slate and as a mechanism."""

from reactor.chemistry.network.build import beyond_small, mechanism_file, structures
from reactor.chemistry.network.enumerate import Network, network
from reactor.chemistry.network.names import find, key, name
from reactor.chemistry.network.slate import Slate
from reactor.chemistry.network.survey import survey
from reactor.chemistry.network.tree import Molecule, molecule

__all__ = [
           "Molecule",
           "Network",
           "Slate",
           "beyond_small",
           "find",
           "key",
           "mechanism_file",
           "molecule",
           "name",
           "network",
           "structures",
           "survey",
]  # fmt: skip

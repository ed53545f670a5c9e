"""Light: lamp spectrum, sleeve, chlorine absorption, radiation field of each geometry, photon ledger."""

from reactor.photons import chlorine
from reactor.photons.account import ledger
from reactor.photons.chlorine import cross_section, cross_section_grade
from reactor.photons.lamps import lamp, spectrum_from_csv
from reactor.photons.shapes import Annulus, Channel, Immersed, Tubes
from reactor.photons.supply import Light, light
from reactor.photons.windows import transmission

__all__ = [
    "Annulus",
    "Channel",
    "Immersed",
    "Light",
    "Tubes",
    "chlorine",
    "cross_section",
    "cross_section_grade",
    "lamp",
    "ledger",
    "light",
    "spectrum_from_csv",
    "transmission",
]

"""Heat: gas films, walls and coolants, lamp heat at the sleeve, friction."""

from reactor.heat.coolant import Material, Medium, capacity, material, medium, tank_uptake, transfer_units
from reactor.heat.friction import friction_gradient
from reactor.heat.sleeve import sleeve_skin
from reactor.heat.tank import Tank, jacket_area, tank_wall
from reactor.heat.wall import Cooling, Tube, Wall, wall

__all__ = [
    "Cooling", "Material", "Medium", "Tank", "Tube", "Wall", "capacity", "friction_gradient", "jacket_area",
    "material", "medium", "sleeve_skin", "tank_uptake", "tank_wall", "transfer_units", "wall",
]  # fmt: skip

"""Parts that every board has: resistors, capacitors, mounting holes."""

from __future__ import annotations

from typing import TYPE_CHECKING

from . import symbols
from .circuit import Part

if TYPE_CHECKING:
    from .footprints import Point

Place = tuple[float, float, float]
"""x and y in mm, angle in degrees."""

_RESISTOR_PACKAGES = {"0.1W": "R_0603", "0.25W": "R_0805", "0.5W": "R_1206"}


def resistor(ref: str, value: str, place: Place, nets: tuple[str, str], power: str = "0.1W") -> Part:
    """A chip resistor; its power rating decides the size."""
    *at, angle = place
    fields = (("Rating", power), ("Tolerance", "1%"))
    package = _RESISTOR_PACKAGES[power]
    return Part(ref, symbols.RESISTOR, value, package, nets, (at[0], at[1]), angle, fields)


def capacitor(ref: str, value: str, package: str, place: Place, nets: tuple[str, str]) -> Part:
    """A ceramic capacitor whose value text reads `1uF 50V X7R`."""
    *at, angle = place
    fields = (("Rating", value.split()[1]),)
    return Part(ref, symbols.CAPACITOR, value, package, nets, (at[0], at[1]), angle, fields)


def mounting_holes(*places: Point) -> tuple[Part, ...]:
    """Holes H1, H2, ... for M3 screws, with neither copper nor net."""
    return tuple(
        Part(f"H{i}", symbols.MOUNTING_HOLE, "M3", "MountingHole_3.2mm_M3", (), at)
        for i, at in enumerate(places, start=1)
    )

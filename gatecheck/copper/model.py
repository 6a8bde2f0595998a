"""Pieces of copper of one net in board axes, metres, y down; and the layers they lie on."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Mapping

    from gatecheck.copper.geometry import Points
    from gatecheck.design.model import Pad


@dataclass(frozen=True, slots=True)
class Track:
    """A line of copper with round ends; an arc is one with several points."""

    points: Points
    width_m: float
    layer: str


@dataclass(frozen=True, slots=True)
class Via:
    """A plated hole; `layers` are the copper layers it joins."""

    x_m: float
    y_m: float
    diameter_m: float
    layers: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Fill:
    """One connected piece of a filled zone. `spread_m` is how far real copper reaches beyond the outline."""

    outline: Points
    layer: str
    spread_m: float


@dataclass(frozen=True, slots=True)
class NetCopper:
    """All copper of one net but its pads. `unfilled` tells of a zone of this net without a fill in the file."""

    tracks: tuple[Track, ...]
    vias: tuple[Via, ...]
    fills: tuple[Fill, ...]
    unfilled: bool


@dataclass(frozen=True, slots=True)
class Stack:
    """The copper layers from top to bottom with their depth below the top one.

    `assumed` says that the file has no stack-up and the layers were spread evenly over the board's thickness.
    """

    depths_m: Mapping[str, float]
    assumed: bool

    @property
    def layers(self) -> tuple[str, ...]:
        """Names from top to bottom."""
        return tuple(self.depths_m)

    def between(self, one: str, two: str) -> tuple[str, ...]:
        """All layers from one to the other, both included; all of them if a name is unknown."""
        names = self.layers
        if one not in names or two not in names:
            return names
        first, last = sorted((names.index(one), names.index(two)))
        return names[first : last + 1]

    def neighbours(self, layer: str) -> tuple[str, ...]:
        """The copper layers next above and below."""
        names = self.layers
        if layer not in names:
            return ()
        at = names.index(layer)
        return tuple(names[i] for i in (at - 1, at + 1) if 0 <= i < len(names))

    def height_m(self, one: str, two: str) -> float:
        """Dielectric between two layers."""
        return abs(self.depths_m[one] - self.depths_m[two])


def pad_layers(pad: Pad, stack: Stack) -> tuple[str, ...]:
    """The copper layers a pad is on."""
    names = stack.layers
    if "*.Cu" in pad.layers or pad.kind == "thru_hole":
        return names
    found = [layer for layer in pad.layers if layer in names]
    if "F&B.Cu" in pad.layers:
        found += [names[0], names[-1]]
    return tuple(dict.fromkeys(found))


def pad_outline(pad: Pad) -> Points:
    """The four corners of the rectangle a pad fits in, in its own frame turned to board axes.

    Rounded and chamfered corners are counted in: tracks leave a pad along its axes, where the difference is none.
    """
    half_x, half_y = pad.width_m / 2, pad.height_m / 2
    corners = np.array([[-half_x, -half_y], [half_x, -half_y], [half_x, half_y], [-half_x, half_y]])
    return to_board(corners, pad)


def to_board(points: Points, pad: Pad) -> Points:
    """From a pad's own frame to board axes (y down, positive angles counter-clockwise on screen)."""
    turn = np.radians(pad.angle_deg)
    cos, sin = np.cos(turn), np.sin(turn)
    x, y = points[:, 0], points[:, 1]
    return np.stack([pad.x_m + x * cos + y * sin, pad.y_m - x * sin + y * cos], axis=1)


def to_pad(points: Points, pad: Pad) -> Points:
    """From board axes to a pad's own frame."""
    turn = np.radians(pad.angle_deg)
    cos, sin = np.cos(turn), np.sin(turn)
    x, y = points[:, 0] - pad.x_m, points[:, 1] - pad.y_m
    return np.stack([x * cos - y * sin, x * sin + y * cos], axis=1)

"""The copper of a board in SI units, read net by net when somebody asks."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gatecheck.copper.geometry import arc_points
from gatecheck.copper.model import Fill, NetCopper, Stack, Track, Via
from gatecheck.parse.copper import read_copper

if TYPE_CHECKING:
    from collections.abc import Iterable

    from gatecheck.copper.geometry import Points
    from gatecheck.errors import InputError
    from gatecheck.parse.board import BoardFile, StackForm
    from gatecheck.parse.copper import NetForms, TrackForm

_MM = 1e-3
# Of a board without a stack-up in the file: the usual thickness (common practice), spread evenly.
_USUAL_THICKNESS_MM = 1.6
_ARC_POINTS = 3


class CopperSource:
    """The copper of one board. Nets wanted soon can be named ahead, so that the file is searched once."""

    def __init__(self, board: BoardFile) -> None:
        self._board = board
        self._nets: dict[str, NetCopper] = {}
        self._boxes: dict[str, tuple[Points, Points]] = {}
        self.troubles: list[InputError] = []
        self.stack = _stack(board)

    def expect(self, nets: Iterable[str]) -> None:
        """Read these nets now, in one search of the file."""
        missing = frozenset(nets) - self._nets.keys() - {""}
        if not missing:
            return
        forms = read_copper(self._board, missing)
        self.troubles += forms.troubles
        for net in missing:
            found = forms.nets.get(net)
            self._nets[net] = _net_copper(found, self.stack) if found is not None else _BARE

    def net(self, name: str) -> NetCopper:
        """All copper of a net but its pads."""
        if name not in self._nets:
            self.expect([name])
        return self._nets.get(name, _BARE)

    def fill_boxes(self, name: str) -> tuple[Points, Points]:
        """Least and greatest corner of each fill of a net, shape (n, 2) each."""
        if name not in self._boxes:
            outlines = [fill.outline for fill in self.net(name).fills]
            least = np.array([outline.min(axis=0) for outline in outlines]).reshape(-1, 2)
            self._boxes[name] = least, np.array([outline.max(axis=0) for outline in outlines]).reshape(-1, 2)
        return self._boxes[name]


_BARE = NetCopper((), (), (), unfilled=False)


def _net_copper(forms: NetForms, stack: Stack) -> NetCopper:
    vias = tuple(
        Via(form.x_mm * _MM, form.y_mm * _MM, form.size_mm * _MM, stack.between(*form.ends)) for form in forms.vias
    )
    fills = tuple(Fill(form.points_mm * _MM, form.layer, form.spread_mm * _MM) for form in forms.fills)
    return NetCopper(tuple(map(_track, forms.tracks)), vias, fills, forms.unfilled)


def _track(form: TrackForm) -> Track:
    points = np.array(form.points_mm) * _MM
    return Track(arc_points(*points) if len(points) == _ARC_POINTS else points, form.width_mm * _MM, form.layer)


def _stack(board: BoardFile) -> Stack:
    """Depths from the file's stack-up; without one, copper spread evenly over the board's thickness."""
    names = _in_order(set(board.layers.values()))
    depths, unset = _from_stackup(board.stack)
    if set(names) <= set(depths) and not unset:
        return Stack({name: depths[name] for name in names}, assumed=False)
    thickness_mm = board.stack.thickness_mm or _USUAL_THICKNESS_MM
    step_m = thickness_mm * _MM / max(len(names) - 1, 1)
    return Stack({name: i * step_m for i, name in enumerate(names)}, assumed=True)


def _from_stackup(stack: StackForm) -> tuple[dict[str, float], bool]:
    """Depth of each copper layer's upper face; whether a dielectric has no thickness."""
    depths: dict[str, float] = {}
    depth_mm, unset = 0.0, False
    for name, copper, thickness_mm in stack.layers:
        if copper:
            depths[name] = depth_mm * _MM
        elif depths:
            # Only what lies between copper counts; mask and silk below the last one change nothing.
            unset |= thickness_mm <= 0 and "Mask" not in name and "Silk" not in name and "Paste" not in name
            depth_mm += thickness_mm
    return depths, unset


def _in_order(names: set[str]) -> list[str]:
    """Top, inner layers by number, bottom."""
    inner = sorted(
        (name for name in names if name.startswith("In") and name[2:-3].isdecimal()), key=lambda name: int(name[2:-3])
    )
    ends = [name for name in ("F.Cu", "B.Cu") if name in names]
    return [*ends[:1], *inner, *ends[1:]]

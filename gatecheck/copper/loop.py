"""The area that a gate current encloses on its way to the gate and back to the driver.

Over copper of the return net on the next layer, the current comes back right under the trace: such a stretch
counts its length times the dielectric between. Elsewhere the loop is the polygon between the way there and the
way back. Without any return copper in the file the area is an interval: from nothing, since copper may yet
be drawn right under the trace, to a straight wire between the two pins.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.copper.geometry import enclosed_area, inside, nearest_gap
from gatecheck.copper.model import pad_layers
from gatecheck.copper.path import NoWay

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from gatecheck.copper.chain import Chain, Chains
    from gatecheck.copper.geometry import Points
    from gatecheck.copper.source import CopperSource
    from gatecheck.design.model import Pad
    from gatecheck.networks.model import Drive, GateNetwork

# Our choice: finer than any gap in copper that matters to a gate loop.
_STEP_M = 0.25e-3
_MAX_SAMPLES = 2000


# A return beside the trace is looked for so far away, on any layer. Our choice.
_BESIDE_M = 5e-3


@dataclass(frozen=True, slots=True)
class GateLoop:
    """One edge's loop.

    `area_m2` is (low, nominal, high); nominal counts return copper on the next layer only, low also copper
    beside the trace and on further layers. `coverage` is the share of the way over copper on the next layer.
    """

    area_m2: tuple[float, float, float]
    coverage: float
    forward: Chain


@dataclass(frozen=True, slots=True)
class _Gaps:
    """For each piece of the way there, the gap to its return (nan where there is none) and the fill it is in.

    `fills` holds indices into `names`, pairs of net and fill; -1 where there is none.
    """

    metres: NDArray[np.float64]
    fills: NDArray[np.int64]

    @classmethod
    def none(cls, count: int) -> _Gaps:
        """No return anywhere."""
        return cls(np.full(count, np.nan), np.full(count, -1, dtype=np.int64))

    def take(self, at: NDArray[np.int64], metres: NDArray[np.float64] | float, fill: int) -> None:
        """Keep the nearer return."""
        nearer = np.isnan(self.metres[at]) | (metres < np.nan_to_num(self.metres[at], nan=np.inf))
        self.metres[at] = np.where(nearer, metres, self.metres[at])
        self.fills[at] = np.where(nearer, fill, self.fills[at])


@dataclass(frozen=True, slots=True)
class _Sampled:
    """The way there cut into short pieces.

    `next_layer` are the gaps to return copper on the next layer, `any_near` to any return copper near by.
    """

    corners: Points
    lengths_m: NDArray[np.float64]
    next_layer: _Gaps
    any_near: _Gaps
    names: tuple[tuple[str, int], ...]


@dataclass(frozen=True, slots=True)
class _Ends:
    """The pads at which the loop closes: the source's and the driver's reference, each with its net."""

    source: tuple[str, tuple[Pad, ...]]
    home: tuple[str, tuple[Pad, ...]]


def gate_loop(chains: Chains, network: GateNetwork, edge: str) -> GateLoop | NoWay:
    """The loop of one edge of a gate network, or why it cannot be had."""
    forward = chains.forward(network, edge)
    if isinstance(forward, NoWay):
        return forward
    drive = next(d for d in network.drives if d.edge in (edge, "both"))
    home = chains.reference(network, drive)
    if home is None:
        return NoWay("no pin of the driver is on the source's net")
    transistor = network.transistor
    own = transistor.kelvin_net or transistor.source_net
    pads = tuple(pad for pin in transistor.kelvin or transistor.source if pin.net == own for pad in pin.pads)
    ends = _Ends((own, pads), home)
    sampled = _sample(chains, forward, dict.fromkeys((own, home[0])))
    covered = ~np.isnan(sampled.next_layer.metres)
    coverage = float(sampled.lengths_m[covered].sum() / max(sampled.lengths_m.sum(), _STEP_M))
    if coverage > 0:
        low = nominal = high = _over_return(chains, sampled, sampled.next_layer, ends)
    else:
        low, nominal, high = _closed(chains, network, drive, sampled, ends)
    least = _over_return(chains, sampled, sampled.any_near, ends)
    return GateLoop((min(least, low), nominal, high), coverage, forward)


def _nearest(pads: Iterable[Pad], point: Points) -> Points:
    """The centre of the pad nearest to a point."""
    centres = np.array([(pad.x_m, pad.y_m) for pad in pads])
    nearest: Points = centres[np.argmin(np.hypot(*(centres - point).T))]
    return nearest


def _closed(
    chains: Chains, network: GateNetwork, drive: Drive, sampled: _Sampled, ends: _Ends
) -> tuple[float, float, float]:
    """Least, nominal and highest area of a way without return copper on the next layer.

    Closed by the way back over copper. Where there is none in the file it may yet be drawn right under the
    trace, so the least is nothing; the highest closes by a straight wire.
    """
    back = chains.back(network, drive)
    if isinstance(back, NoWay):
        source, home = _nearest(ends.source[1], sampled.corners[-1]), _nearest(ends.home[1], sampled.corners[0])
        area = enclosed_area(np.vstack([sampled.corners, source, home]))
        return 0.0, area / 2, area
    way = np.array([point[:2] for point in back.points()])
    area = enclosed_area(np.vstack([sampled.corners, way]))
    return area, area, area


def _sample(chains: Chains, forward: Chain, nets: Iterable[str]) -> _Sampled:
    """Cut the way there into pieces and look for return copper under and beside each."""
    corners, layers = _corners(chains, forward)
    lengths = np.hypot(*np.diff(corners, axis=0).T)
    middles = (corners[1:] + corners[:-1]) / 2
    sampled = _Sampled(
        corners,
        lengths,
        _Gaps.none(len(middles)),
        _Gaps.none(len(middles)),
        _fills_near(chains.copper.source, nets, middles),
    )
    stack = chains.copper.source.stack
    on_layer = {layer: np.flatnonzero(np.array(layers) == layer) for layer in sorted(set(layers))}
    fills = [chains.copper.source.net(net).fills[i] for net, i in sampled.names]
    for key, fill in enumerate(fills):
        for layer, mine in on_layer.items():
            height_m = stack.height_m(layer, fill.layer)
            under = mine[inside(middles[mine], fill.outline)] if height_m > 0 else mine[:0]
            if len(under):
                sampled.any_near.take(under, height_m, key)
                if fill.layer in stack.neighbours(layer):
                    sampled.next_layer.take(under, height_m, key)
    for key, fill in enumerate(fills):
        _look_beside(middles, sampled.any_near, fill.outline, key)
    return sampled


def _fills_near(source: CopperSource, nets: Iterable[str], points: Points) -> tuple[tuple[str, int], ...]:
    """The fills of some nets that the way could see: a ground net has one on every corner of a large board."""
    low, high = points.min(axis=0) - _BESIDE_M, points.max(axis=0) + _BESIDE_M
    found: list[tuple[str, int]] = []
    for net in nets:
        least, most = source.fill_boxes(net)
        near = ((most >= low) & (least <= high)).all(axis=1)
        found += [(net, i) for i in np.flatnonzero(near).tolist()]
    return tuple(found)


def _look_beside(middles: Points, gaps: _Gaps, outline: Points, key: int) -> None:
    """Where nothing is under the way, take the gap to the edge of a fill beside it, seen from above."""
    bare = np.flatnonzero(np.isnan(gaps.metres))
    if not len(bare):
        return
    starts, ends = outline, np.roll(outline, -1, axis=0)
    low, high = middles[bare].min(axis=0) - _BESIDE_M, middles[bare].max(axis=0) + _BESIDE_M
    near = ((np.maximum(starts, ends) >= low) & (np.minimum(starts, ends) <= high)).all(axis=1)
    if near.any():
        gap_m = nearest_gap(middles[bare], starts[near], ends[near])
        beside = gap_m <= _BESIDE_M
        gaps.take(bare[beside], gap_m[beside], key)


def _corners(chains: Chains, forward: Chain) -> tuple[Points, list[str]]:
    """Points at most a step apart, and the layer of each piece between them; bodies lie on their part's side."""
    corners: list[Points] = []
    layers: list[str] = []
    for leg in forward.legs:
        side = ""
        if leg.body:
            side = "B.Cu" if chains.circuit.design.parts[leg.what].side == "bottom" else "F.Cu"
        places = np.array([point[:2] for point in leg.points])
        steps = np.hypot(*np.diff(places, axis=0).T) / _STEP_M
        counts = np.clip(np.ceil(steps), 1, _MAX_SAMPLES).astype(int).tolist()
        if not corners:
            corners.append(places[:1])
        for i, count in enumerate(counts):
            share = np.arange(1, count + 1)[:, None] / count
            corners.append(places[i] + (places[i + 1] - places[i]) * share)
            layers += [side or leg.points[i][2] or leg.points[i + 1][2] or "F.Cu"] * count
    return np.concatenate(corners), layers


def _over_return(chains: Chains, sampled: _Sampled, gaps: _Gaps, ends: _Ends) -> float:
    """Strips along return copper, and polygons where there is none.

    A polygon between two strips on one fill closes straight, through that fill; on two fills it closes along
    the copper that joins them. At both ends of the way the current runs along real copper between the pin and
    the fill that carries it.
    """
    covered = ~np.isnan(gaps.metres)
    area = float((sampled.lengths_m[covered] * gaps.metres[covered]).sum())
    home = _to_fill(chains, sampled, gaps, ends.home, first=True)
    source = _to_fill(chains, sampled, gaps, ends.source, first=False)
    where = np.flatnonzero(covered)
    if not len(where):
        return enclosed_area(np.vstack([home, sampled.corners, source]))
    first, last = int(where[0]), int(where[-1])
    area += enclosed_area(np.vstack([home, sampled.corners[: max(first, 1) + 1]]))
    area += enclosed_area(np.vstack([sampled.corners[min(last + 1, len(covered) - 1) :], source]))
    for before, after in pairwise(where.tolist()):
        between = _between_fills(chains, sampled, int(gaps.fills[before]), int(gaps.fills[after]))
        if after > before + 1 or len(between):
            area += enclosed_area(np.vstack([sampled.corners[before + 1 : after + 1], between]))
    return area


def _between_fills(chains: Chains, sampled: _Sampled, before: int, after: int) -> Points:
    """The way back from one fill to the one before; no points where both are one, or nothing joins them."""
    nothing = np.zeros((0, 2))
    (net, start), (other, goal) = sampled.names[after], sampled.names[before]
    if before == after or net != other:
        return nothing
    way = chains.copper.way_between_fills(net, start, goal)
    return np.array([point[:2] for point in way.points]) if way is not None else nothing


def _to_fill(
    chains: Chains, sampled: _Sampled, gaps: _Gaps, end: tuple[str, tuple[Pad, ...]], *, first: bool
) -> Points:
    """The way between a pin and the fill at its end of the strips, in the order of the polygon it closes."""
    net, pads = end
    pin = _nearest(pads, sampled.corners[0 if first else -1])
    used = gaps.fills[gaps.fills >= 0]
    if not len(used):
        return pin[None]
    owner, index = sampled.names[int(used[0 if first else -1])]
    fill = chains.copper.source.net(owner).fills[index]
    if owner != net or any(
        fill.layer in pad_layers(pad, chains.copper.source.stack) and inside(_centre(pad)[None], fill.outline)[0]
        for pad in pads
    ):
        return pin[None]
    way = chains.copper.way_into_fill(net, pads, index)
    if way is None:
        return pin[None]
    points = np.array([point[:2] for point in way.points])
    return points[::-1] if first else points


def _centre(pad: Pad) -> Points:
    return np.array([pad.x_m, pad.y_m])

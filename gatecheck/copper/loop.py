"""The area that a gate current encloses on its way to the gate and back to the driver.

Over copper of the return net on the next layer, the current comes back right under the trace: such a stretch
counts its length times the dielectric between. Elsewhere the loop is the polygon between the way there and the
way back. Without any return copper in the file the area is an interval: from a plane right under the trace to
a straight wire between the two pins.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np

from gatecheck.copper.geometry import enclosed_area, inside, project
from gatecheck.copper.path import NoWay

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from gatecheck.copper.chain import Chain, Chains
    from gatecheck.copper.geometry import Points
    from gatecheck.copper.model import NetCopper
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
class _Sampled:
    """The way there cut into short pieces: corner points, and for each piece the gap to its return.

    `next_m` is the height over return copper on the next layer, `any_m` the gap to any return copper near by;
    nan where there is none.
    """

    corners: Points
    lengths_m: NDArray[np.float64]
    next_m: NDArray[np.float64]
    any_m: NDArray[np.float64]


def gate_loop(chains: Chains, network: GateNetwork, edge: str) -> GateLoop | NoWay:
    """The loop of one edge of a gate network, or why it cannot be had."""
    forward = chains.forward(network, edge)
    if isinstance(forward, NoWay):
        return forward
    drive = next(d for d in network.drives if d.edge in (edge, "both"))
    reference = chains.reference(network, drive)
    if reference is None:
        return NoWay("no pin of the driver is on the source's net")
    transistor = network.transistor
    nets = {transistor.kelvin_net or transistor.source_net, reference[0]} - {""}
    sampled = _sample(chains, forward, nets)
    coverage = float(sampled.lengths_m[~np.isnan(sampled.next_m)].sum() / max(sampled.lengths_m.sum(), _STEP_M))
    source = _nearest((pad for pin in transistor.kelvin or transistor.source for pad in pin.pads), sampled.corners[-1])
    home = _nearest(reference[1], sampled.corners[0])
    least = _over_return(sampled, sampled.any_m, source, home)
    if coverage > 0:
        nominal = high = _over_return(sampled, sampled.next_m, source, home)
    else:
        nominal, high = _closed(chains, network, drive, np.vstack([sampled.corners, source, home]), least)
    return GateLoop((min(least, nominal), nominal, high), coverage, forward)


def _nearest(pads: Iterable[Pad], point: Points) -> Points:
    """The centre of the pad nearest to a point."""
    centres = np.array([(pad.x_m, pad.y_m) for pad in pads])
    nearest: Points = centres[np.argmin(np.hypot(*(centres - point).T))]
    return nearest


def _closed(chains: Chains, network: GateNetwork, drive: Drive, straight: Points, least: float) -> tuple[float, float]:
    """Nominal and highest area of a way without return copper on the next layer.

    Closed by the way back over copper; where there is none in the file, by a straight wire at most.
    """
    back = chains.back(network, drive)
    if isinstance(back, NoWay):
        area = enclosed_area(straight)
        return (least + area) / 2, area
    way = np.array([point[:2] for point in back.points()])
    area = enclosed_area(np.vstack([straight[:-2], way]))
    return area, area


def _sample(chains: Chains, forward: Chain, nets: set[str]) -> _Sampled:
    """Cut the way there into pieces and look for return copper under and beside each."""
    corners, layers = _corners(chains, forward)
    lengths = np.hypot(*np.diff(corners, axis=0).T)
    middles = (corners[1:] + corners[:-1]) / 2
    next_m, any_m = np.full(len(middles), np.nan), np.full(len(middles), np.nan)
    stack = chains.copper.source.stack
    copper = [chains.copper.source.net(net) for net in sorted(nets)]
    for layer in sorted(set(layers)):
        mine = np.flatnonzero(np.array([name == layer for name in layers]))
        for fill in (fill for one in copper for fill in one.fills):
            height = stack.height_m(layer, fill.layer)
            under = mine[inside(middles[mine], fill.outline)] if height > 0 else mine[:0]
            any_m[under] = np.fmin(any_m[under], height)
            if fill.layer in stack.neighbours(layer):
                next_m[under] = np.fmin(next_m[under], height)
    _look_beside(middles, any_m, copper)
    return _Sampled(corners, lengths, next_m, any_m)


def _look_beside(middles: Points, any_m: NDArray[np.float64], copper: list[NetCopper]) -> None:
    """Fill in the gap to tracks and edges of fills of the return net, seen from above."""
    lines = [(fill.outline, np.roll(fill.outline, -1, axis=0)) for one in copper for fill in one.fills]
    lines += [(track.points[:-1], track.points[1:]) for one in copper for track in one.tracks]
    if not lines:
        return
    starts, ends = np.vstack([a for a, _ in lines]), np.vstack([b for _, b in lines])
    low, high = middles.min(axis=0) - _BESIDE_M, middles.max(axis=0) + _BESIDE_M
    near = (np.maximum(starts, ends) >= low).all(axis=1) & (np.minimum(starts, ends) <= high).all(axis=1)
    if not near.any():
        return
    for i in np.flatnonzero(np.isnan(any_m)).tolist():
        gap = float(project(middles[i], starts[near], ends[near])[1].min())
        if gap <= _BESIDE_M:
            any_m[i] = gap


def _corners(chains: Chains, forward: Chain) -> tuple[Points, list[str]]:
    """Points at most a step apart, and the layer of each piece between them; bodies lie on their part's side."""
    corners: list[Points] = []
    layers: list[str] = []
    for leg in forward.legs:
        side = ""
        if leg.body:
            side = "B.Cu" if chains.circuit.design.parts[leg.what].side == "bottom" else "F.Cu"
        for (x0, y0, from_layer), (x1, y1, to_layer) in pairwise(leg.points):
            a, b = np.array([x0, y0]), np.array([x1, y1])
            count = int(min(max(np.ceil(np.hypot(*(b - a)) / _STEP_M), 1), _MAX_SAMPLES))
            pieces = a + (b - a) * np.linspace(0, 1, count + 1)[:, None]
            if not corners:
                corners.append(pieces[0])
            corners += list(pieces[1:])
            layers += [side or from_layer or to_layer or "F.Cu"] * count
    return np.array(corners), layers


def _over_return(sampled: _Sampled, gaps_m: NDArray[np.float64], source: Points, home: Points) -> float:
    """Strips along return copper, and polygons where there is none, each closed by a straight line."""
    covered = ~np.isnan(gaps_m)
    area = float((sampled.lengths_m[covered] * gaps_m[covered]).sum())
    edges = np.flatnonzero(np.diff(covered.astype(int)))
    for first, last in pairwise([0, *(edges + 1).tolist(), len(covered)]):
        if covered[first]:
            continue
        ends = [home[None]] if first == 0 else []
        tail = [source[None]] if last == len(covered) else []
        area += enclosed_area(np.vstack([*ends, sampled.corners[first : last + 1], *tail]))
    # Where an end is covered, what is left is the corner between the pin and the return pin beside it.
    if covered[0]:
        area += enclosed_area(np.vstack([home, sampled.corners[:2]]))
    if covered[-1]:
        area += enclosed_area(np.vstack([sampled.corners[-2:], source]))
    return area

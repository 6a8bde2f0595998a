"""Each quantity of a gate, computed once when asked for, with its interval and where it came from.

A quantity that cannot be had is None, and `missing` says why and what it needs. Engineering units here: this
is where SI numbers become what reports and rules speak of.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.catalogue.load import pin_is
from gatecheck.copper.path import NoWay, straight_m
from gatecheck.finding import Origin, Quantity, least_trusted
from gatecheck.networks.resistance import least_resistance_ohm
from gatecheck.physics.ringing import peak_current_a
from gatecheck.values import Kind, parse_value

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from gatecheck.copper.chain import Chains
    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.model import GateNetwork
    from gatecheck.settings import Settings

_MM, _MM2 = 1e3, 1e6
# On-to-off swing assumed where nothing tells it: absolute maximum gate ratings by technology (common practice).
_ASSUMED_SWING_V = {"gan": 7.0, "sic": 30.0, "igbt": 35.0}
_ASSUMED_SWING_SI_V = 20.0
# Driver output and internal gate resistance together, at most: common practice for discrete switches.
_FURTHER_OHM = 10.0
# A gate loop that rings harder than this draws less at its peak, but fails for ringing. Our choice.
_LEAST_DAMPING = 0.5
_LARGEST_DRIVE_V = 35.0
_VOLTS = re.compile(r"(?<![\dA-Z.])\+?(\d{1,2})V(\d)?(?![A-Z\d])|(?<=V)[A-Z]*_?(\d{1,2})V?(?![A-Z\d])", re.IGNORECASE)
# Fields that hold a bead's rating, compared without blanks and case. Origin: common practice.
_RATING_FIELDS = ("rating", "ratedcurrent", "current", "currentrating", "irated", "imax", "i")


@dataclass(frozen=True, slots=True)
class Missing:
    """Why a quantity cannot be had, and what would help."""

    reason: str
    needs: str


class Quantities:
    """The quantities of one gate network."""

    def __init__(
        self, network: GateNetwork, technology: str, circuit: Circuit, chains: Chains | None, settings: Settings
    ) -> None:
        self._network, self._technology = network, technology
        self._circuit, self._chains, self._settings = circuit, chains, settings
        self._known: dict[str, Quantity | None] = {}
        self.missing: dict[str, Missing] = {}

    def get(self, name: str) -> Quantity | None:
        """A quantity by its published name; None where it cannot be had, with the reason in `missing`."""
        if name not in self._known:
            self._known[name] = _COMPUTED[name](self)
        return self._known[name]

    def all(self) -> Mapping[str, Quantity]:
        """All quantities that can be had."""
        found = {name: self.get(name) for name in _COMPUTED}
        return {name: value for name, value in found.items() if value is not None}

    def _without(self, name: str, reason: str, needs: str) -> None:
        self.missing[name] = Missing(reason, needs)

    def _distance(self, name: str, part: str | None) -> Quantity | None:
        """Along copper from a part, or from the driver, to the gate."""
        if self._chains is None:
            self._without(name, "a netlist has no copper", "the board")
            return None
        found: list[tuple[float, float]] = []
        for edge in ("on", "off"):
            if part is None or part in self._network.edge(edge).parts:
                chain = self._chains.forward(self._network, edge, after=part)
                if isinstance(chain, NoWay):
                    self._without(name, chain.reason, "a routed board with its zones filled")
                    return None
                found.append(chain.copper_m())
        if not found:
            self._without(name, "there is no such part in series", "")
            return None
        low, high = max(found)
        return _quantity(low * _MM, low * _MM, high * _MM, "mm", Origin.GEOMETRY)

    def _straight(self, part: str | None) -> Quantity | None:
        """From edge to edge as the crow flies."""
        gate = self._network.transistor
        goal = [pad for pin in gate.gate for pad in pin.pads]
        pins = [pin for d in self._network.drives for pin in d.pins]
        if part is not None:
            step = next((s for edge in ("on", "off") for s in self._network.edge(edge).steps if s.part == part), None)
            pins = [pin for pin in self._circuit.design.parts[part].pins if step is not None and pin.net == step.far]
        start = [pad for pin in pins for pad in pin.pads]
        if not start or not goal:
            return None
        value = straight_m(start, goal) * _MM
        return _quantity(value, value, value, "mm", Origin.GEOMETRY)

    def _last(self, parts: tuple[str, ...]) -> str | None:
        """The part nearest to the gate: the last one in its own branch, else the last one."""
        own = [part for part in parts if part in self._network.own_branch]
        return own[-1] if own else parts[-1] if parts else None

    def bead_distance(self) -> Quantity | None:
        """Copper from the bead to the gate."""
        bead = self._last(self._network.beads)
        return self._distance("bead_distance", bead) if bead is not None else None

    def bead_distance_straight(self) -> Quantity | None:
        """The same, straight."""
        bead = self._last(self._network.beads)
        return self._straight(bead) if bead is not None else None

    def resistor_distance(self) -> Quantity | None:
        """Copper from the last gate resistor to the gate."""
        resistor = self._last(self._network.gate_resistors)
        return self._distance("resistor_distance", resistor) if resistor is not None else None

    def resistor_distance_straight(self) -> Quantity | None:
        """The same, straight."""
        resistor = self._last(self._network.gate_resistors)
        return self._straight(resistor) if resistor is not None else None

    def driver_distance(self) -> Quantity | None:
        """Copper and bodies from the driver's pin to the gate."""
        return self._distance("driver_distance", None) if self._network.drives else None

    def driver_distance_straight(self) -> Quantity | None:
        """The same, straight."""
        return self._straight(None)

    def gate_vias(self) -> Quantity | None:
        """Vias between driver and gate on the on edge."""
        if self._chains is None:
            return None
        chain = self._chains.forward(self._network, "on")
        if isinstance(chain, NoWay):
            return None
        count = float(chain.vias())
        return _quantity(count, count, count, "1", Origin.GEOMETRY)

    def loop_area(self, edge: str) -> Quantity | None:
        """Area of one edge's loop."""
        from gatecheck.copper.loop import gate_loop  # noqa: PLC0415 (boards only)

        name = f"loop_area_{edge}"
        if self._chains is None:
            self._without(name, "a netlist has no copper", "the board")
            return None
        loop = gate_loop(self._chains, self._network, edge)
        if isinstance(loop, NoWay):
            self._without(name, loop.reason, "a routed board with its zones filled")
            return None
        self._known[f"return_coverage_{edge}"] = _quantity(*(loop.coverage,) * 3, "1", Origin.GEOMETRY)
        low, nominal, high = (area * _MM2 for area in loop.area_m2)
        return _quantity(low, nominal, high, "mm2", Origin.GEOMETRY)

    def return_coverage(self, edge: str) -> Quantity | None:
        """Share of the way over return copper on the next layer; comes with the loop's area."""
        self.get(f"loop_area_{edge}")
        return self._known.get(f"return_coverage_{edge}")

    def swing(self) -> tuple[float, Origin]:
        """The drive's swing in volts: stated, or at most what the driver's supply is called, or assumed."""
        if self._settings.drive_voltage_v is not None:
            return self._settings.drive_voltage_v, Origin.PROJECT
        named = [
            volts
            for drive in self._network.drives
            for pin in self._circuit.design.parts[drive.part].pins
            if pin.net and pin_is("supply", pin.function) and (volts := _volts(pin.net)) is not None
        ]
        if named and max(named) <= _LARGEST_DRIVE_V:
            return max(named), Origin.VALUE
        return _ASSUMED_SWING_V.get(self._technology, _ASSUMED_SWING_SI_V), Origin.ASSUMED

    def peak_current(self, edge: str) -> Quantity | None:
        """Peak gate current: at most voltage over known resistance, at least what a damped loop would draw."""
        name = f"peak_current_{edge}"
        if self._settings.peak_current_a is not None:
            return _quantity(*(self._settings.peak_current_a,) * 3, "A", Origin.PROJECT)
        resistance_ohm = least_resistance_ohm(self._circuit, self._network, edge)
        if resistance_ohm <= 0:
            self._without(name, "no known resistance bounds the gate current", "the peak gate current")
            return None
        volts, origin = self.swing()
        high = volts / resistance_ohm
        most_ohm = resistance_ohm + _FURTHER_OHM
        ring_ohm = most_ohm / (2 * _LEAST_DAMPING)
        low = float(peak_current_a(step_v=volts, loop_damping_ratio=_LEAST_DAMPING, characteristic_ohm=ring_ohm))
        return _quantity(low, high, high, "A", least_trusted(origin, Origin.VALUE))

    def bead_rating(self) -> tuple[float, Origin] | None:
        """The least rated current of the gate's beads, in ampere."""
        found = [rating for bead in self._network.beads if (rating := self._rating_of(bead)) is not None]
        return min(found) if len(found) == len(self._network.beads) and found else None

    def _rating_of(self, bead: str) -> tuple[float, Origin] | None:
        part = self._circuit.design.parts[bead]
        for key in (part.reference, part.value):
            data = self._settings.beads.get(key)
            if data is not None and data.rated_current_a is not None:
                return data.rated_current_a, Origin.PROJECT
        for name, text in part.fields.items():
            if re.sub(r"[\s_-]", "", name).lower() in _RATING_FIELDS:
                rated = parse_value(text, kind=Kind.BEAD).current_a
                if rated is not None:
                    return rated, Origin.FIELD
        value = self._circuit.kinds[bead].value
        return (value.current_a, Origin.VALUE) if value is not None and value.current_a is not None else None

    def bead_current_margin(self) -> Quantity | None:
        """Rated current of the bead over the peak gate current of the harder edge."""
        rating = self.bead_rating() if self._network.beads else None
        currents = [self.get(f"peak_current_{edge}") for edge in ("on", "off")]
        known = [current for current in currents if current is not None]
        if rating is None or not known:
            return None
        worst = max(known, key=lambda current: current.high)
        origin = least_trusted(rating[1], worst.origin)
        return _quantity(rating[0] / worst.high, rating[0] / worst.nominal, rating[0] / worst.low, "1", origin)


def _quantity(low: float, nominal: float, high: float, unit: str, origin: Origin) -> Quantity:
    """Rounded to what is meaningful, so that a last digit of arithmetic changes no report."""
    rounded = [float(f"{value:.4g}") for value in (low, nominal, high)]
    return Quantity(rounded[0], rounded[1], rounded[2], unit, origin)


def _volts(net: str) -> float | None:
    """The voltage a supply net's name states: +12V, 3V3, VDD_15."""
    match = _VOLTS.search(net.rpartition("/")[2])
    if match is None:
        return None
    if match.group(1) is not None:
        return float(f"{match.group(1)}.{match.group(2) or 0}")
    return float(match.group(3))


_COMPUTED: Mapping[str, Callable[[Quantities], Quantity | None]] = {
    "bead_distance": Quantities.bead_distance,
    "bead_distance_straight": Quantities.bead_distance_straight,
    "resistor_distance": Quantities.resistor_distance,
    "resistor_distance_straight": Quantities.resistor_distance_straight,
    "driver_distance": Quantities.driver_distance,
    "driver_distance_straight": Quantities.driver_distance_straight,
    "gate_vias": Quantities.gate_vias,
    "loop_area_on": lambda gate: gate.loop_area("on"),
    "loop_area_off": lambda gate: gate.loop_area("off"),
    "return_coverage_on": lambda gate: gate.return_coverage("on"),
    "return_coverage_off": lambda gate: gate.return_coverage("off"),
    "peak_current_on": lambda gate: gate.peak_current("on"),
    "peak_current_off": lambda gate: gate.peak_current("off"),
    "bead_current_margin": Quantities.bead_current_margin,
}

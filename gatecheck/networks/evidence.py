"""The evidence for a transistor's role, feature by feature; weights and words are in the catalogue."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.catalogue.load import features, pin_is, plain_pin_name, static_pin, word_in
from gatecheck.networks.circuit import is_shunt
from gatecheck.networks.kinds import Sort, bipolar
from gatecheck.networks.model import Evidence
from gatecheck.networks.ports import CHIP_PIN, CONNECTOR, NAMED_OUTPUT, OUTPUT, PUSH_PULL, WINDING

if TYPE_CHECKING:
    from collections.abc import Iterator, Mapping, Sequence

    from gatecheck.design.model import Part, Pin
    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.terminals import Transistor
    from gatecheck.networks.walk import Walk
    from gatecheck.values import TransistorText

_Key = tuple[str, str | None]
Found = tuple[str, dict[str, str]]

# Series gate resistance by what it can switch. Origin: common practice.
_LOW_OHM, _HIGH_OHM, _VERY_HIGH_OHM = 47.0, 470.0, 4700.0
_DRAIN_CAPACITOR_F = 1e-9
_SLOW_GATE_S = 100e-6
_POWER_INDUCTOR_H = 0.1e-6
_SNUBBER_OHM = 470.0
_SMALL_CURRENT_A = 1.0
_GATE_NAME = re.compile(
    r"(?<![A-Z])(?:G[HL][ABCUVW\d]?|[HL]O\d?|[HL]G\d?|[UVWABC]G?[HL]|PWM[A-Z\d]*_[HL]O?|GATE[A-Z\d_]*|[A-Z\d]*_GATE)(?![A-Z])",
    re.IGNORECASE,
)
_PORT_NAME = re.compile(r"P[A-K]\d{1,2}(?:[/_(-].*)?|GPIO\w*|IO\d+|P\d+\.\d+|Q[0-7A-H]|Y\d?|[1-8]?Y[1-8]?", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class Surroundings:
    """All that the evidence for one transistor may look at."""

    circuit: Circuit
    transistors: Sequence[Transistor]
    walks: Mapping[_Key, Walk]
    alternates: Mapping[_Key, tuple[_Key, ...]]

    def driven(self, transistor: Transistor) -> bool:
        """Is the gate driven actively, and not only fed through a large resistor?"""
        walked = self.walks[transistor.key]
        return walked.rank >= CONNECTOR and not walked.feed_only

    def partners(self, transistor: Transistor) -> list[tuple[Transistor, str]]:
        """The transistors that form a half bridge with this one, and the net in the middle."""
        found = []
        for other in self.transistors:
            if other.part == transistor.part and other.unit == transistor.unit:
                continue
            for middle, end in ((transistor.source_net, other.drain_net), (transistor.drain_net, other.source_net)):
                if middle and end and end in self.circuit.tied(middle) and not self.circuit.is_rail(middle):
                    found.append((other, middle))
        return [(other, net) for other, net in found if self.driven(other)]


def gather(around: Surroundings, transistor: Transistor, said: TransistorText) -> list[Evidence]:
    """All evidence for and against this transistor being a power switch, strongest first."""
    found: list[Found] = []
    for look in (_drive, _resistance, _bridge, _load, _surface, _against):
        found += look(around, transistor)
    part = around.circuit.design.parts[transistor.part]
    if said.current_a is not None and said.current_a < _SMALL_CURRENT_A:
        found.append(("small_ratings", {"word": f"{said.current_a:g} A"}))
    if said.technology in ("sic", "gan", "igbt"):
        word = {"sic": "SiC", "gan": "GaN", "igbt": "IGBT"}[said.technology]
        found.append(("power_technology", {"word": word}))
    if not part.fitted:
        found = [entry for entry in found if entry[0] != "paralleled"]
    known = features()
    evidence = [Evidence(known[name].text.format(**fill), known[name].weight) for name, fill in dict_of(found).items()]
    return sorted(evidence, key=lambda e: (-abs(e.weight), e.text))


def dict_of(found: list[Found]) -> dict[str, dict[str, str]]:
    """Each feature counts once, as first found."""
    first: dict[str, dict[str, str]] = {}
    for name, fill in found:
        first.setdefault(name, fill)
    return first


def _drive(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    circuit, walked = around.circuit, around.walks[transistor.key]
    if circuit.is_rail(transistor.gate_net):
        yield "rail_gate", {"net": transistor.gate_net}
    if not walked.drives:
        yield "no_drive", {}
        return
    pin = walked.drives[0].pins[0]
    fill = {"pin": _pin_text(circuit, pin), "path": _path_text(walked)}
    if walked.rank >= CHIP_PIN:
        yield from _chip_drive(around, transistor, pin, fill)
    elif walked.rank == PUSH_PULL:
        yield "discrete_driver", fill
    elif walked.rank == WINDING:
        yield "winding_driver", fill
    elif walked.rank == CONNECTOR:
        yield "connector_driver", fill
    else:
        yield "single_pull", fill
    if walked.on.conducts and not walked.off.conducts and not _helper(circuit, walked, transistor):
        diode = next((s.part for s in walked.on.steps if s.sort == Sort.DIODE), "")
        if diode:
            yield "peak_held", {"part": diode}
    edges = {drive.edge for drive in walked.drives}
    own = [part for part in walked.off.parts if part not in walked.on.parts]
    if edges == {"on", "off"} or (walked.on.conducts and walked.off.conducts and own):
        yield "fast_turn_off", {"path": ", ".join(own) or "split outputs"}


def _chip_drive(around: Surroundings, transistor: Transistor, pin: Pin, fill: dict[str, str]) -> Iterator[Found]:
    circuit = around.circuit
    chip = circuit.design.parts[pin.part]
    text = " ".join((chip.description, chip.keywords, chip.library, chip.value)).replace("_", " ")
    driver = bool(word_in("gate_driver", text))
    if static_pin(pin.function) or (word_in("static_controller", text) and not driver):
        yield "static_controller", fill
        return
    if _is_amplifier(chip, text):
        yield "linear_drive", fill
        return
    rank = around.walks[transistor.key].rank
    if rank < NAMED_OUTPUT and not driver and (word_in("logic", text) or _PORT_NAME.fullmatch(plain_pin_name(pin.function))):
        yield "logic_pin", fill
        return
    source = transistor.source_net
    near = (circuit.tied(source) | circuit.tied(transistor.kelvin_net)) - {""}
    holds = any(p.net in near and not circuit.is_rail(p.net) for p in chip.pins)
    if rank == NAMED_OUTPUT or driver:
        yield "driver_output", fill
    elif holds and len(chip.pins) > 1:
        yield "driver_likely", {**fill, "net": source}
    elif rank in (OUTPUT, CHIP_PIN):
        yield "output_pin", fill
    if holds and any(pin_is("floating_supply", p.function) for p in chip.pins):
        yield "floating_supply", {"net": source}
    if transistor.kelvin_net and any(p.net == transistor.kelvin_net for p in chip.pins):
        yield "kelvin_to_driver", {"net": transistor.kelvin_net}


def _is_amplifier(chip: Part, text: str) -> bool:
    """An operational amplifier by its words, or by inputs called + and -."""
    names = {pin.function for pin in chip.pins}
    return bool(word_in("amplifier", text)) or {"+", "-"} <= names


def _helper(circuit: Circuit, walked: Walk, transistor: Transistor) -> bool:
    """A transistor of its own on the gate's nets that can discharge the gate."""
    return any(
        circuit.kinds[pin.part].sort is Sort.TRANSISTOR and bipolar(circuit.design.parts[pin.part])
        for net in walked.nets - {drive.net for drive in walked.drives}
        for pin in circuit.pins(net)
        if pin.part != transistor.part
    )


def _resistance(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    walked = around.walks[transistor.key]
    if not walked.drives:
        return
    ohm = series_resistance(around.circuit, walked)
    text = f"{ohm:g} ohm"
    if ohm > _VERY_HIGH_OHM:
        yield "very_high_resistance", {"ohm": text}
    elif ohm > _HIGH_OHM:
        yield "high_resistance", {"ohm": text}
    elif 0 < ohm <= _LOW_OHM:
        yield "low_resistance", {"ohm": text}
    caps = [
        (e.part, farad)
        for e in around.circuit.between(transistor.gate_net, around.circuit.tied(transistor.source_net), Sort.CAPACITOR)
        if (farad := _amount(around.circuit, e.part)) is not None and farad * ohm > _SLOW_GATE_S
    ]
    if caps:
        part, farad = caps[0]
        yield "slow_gate", {"part": part, "seconds": f"{farad * ohm * 1e6:.0f} us"}


def series_resistance(circuit: Circuit, walked: Walk) -> float:
    """The known resistance from driver to gate: what all ways pass, plus the least of what only some pass."""
    resistors = [
        (step.part, ohm)
        for step in walked.on.steps
        if step.sort == Sort.RESISTOR and (ohm := _amount(circuit, step.part)) is not None
    ]
    common = sum(ohm for part, ohm in resistors if part in walked.on.covering)
    others = [ohm for part, ohm in resistors if part not in walked.on.covering]
    return common + min(others, default=0.0)


def _amount(circuit: Circuit, part: str) -> float | None:
    value = circuit.kinds[part].value
    return value.amount.nominal if value is not None and value.amount is not None else None


def _bridge(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    circuit = around.circuit
    partners = around.partners(transistor) if around.driven(transistor) else []
    for other, middle in partners[:1]:
        yield "half_bridge", {"part": name_of(other.key), "net": middle}
        for net in circuit.tied(middle):
            for pin in circuit.pins(net):
                if circuit.kinds[pin.part].sort is Sort.CONNECTOR:
                    yield "phase_connector", {"part": pin.part, "net": middle}
        high, low = (transistor, other) if transistor.source_net == middle else (other, transistor)
        outer = circuit.tied(low.source_net)
        for element in circuit.between(high.drain_net, outer, Sort.CAPACITOR):
            yield "bus_capacitor", {"part": element.part}
    if not partners:
        yield from _back_to_back(around, transistor)
    for other in around.transistors:
        same = (other.drain_net, other.source_net) == (transistor.drain_net, transistor.source_net)
        if other.part != transistor.part and same and other.key not in around.alternates.get(transistor.key, ()):
            yield "paralleled", {"part": name_of(other.key)}


def _back_to_back(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    for other in around.transistors:
        for mine, net in ((transistor.drain_net, other.drain_net), (transistor.source_net, other.source_net)):
            outer = (transistor.source_net, other.source_net) if mine == transistor.drain_net else (transistor.drain_net, other.drain_net)
            if other.key != transistor.key and mine and mine == net and outer[0] != outer[1]:
                if not around.circuit.is_rail(mine) and not around.partners(other):
                    yield "back_to_back", {"part": name_of(other.key), "net": mine}


def _load(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    circuit = around.circuit
    ends = [net for net in (transistor.drain_net, transistor.source_net) if net and not circuit.is_rail(net)]
    power = False
    for net in ends:
        for part in dict.fromkeys(pin.part for near in sorted(circuit.tied(net)) for pin in circuit.pins(near)):
            henry = _amount(circuit, part) if circuit.kinds[part].sort is Sort.INDUCTOR else None
            inductor = circuit.kinds[part].sort is Sort.INDUCTOR and (henry is None or henry >= _POWER_INDUCTOR_H)
            if inductor or circuit.kinds[part].sort is Sort.WINDING:
                power = True
                yield "power_load", {"part": part, "net": net}
        for snubber in _snubbers(circuit, net):
            yield "snubber", {"path": snubber, "net": net}
    for element in circuit.elements(transistor.source_net):
        if is_shunt(element) and element.sort is Sort.RESISTOR and not circuit.is_rail(transistor.source_net):
            yield "current_shunt", {"part": element.part}
    if power or (around.driven(transistor) and around.partners(transistor)):
        return
    yield "single_low_side", {}
    for element in circuit.elements(transistor.drain_net):
        if element.sort is Sort.LED:
            yield "led_load", {"part": element.part}
        if element.sort in (Sort.DIODE, Sort.ZENER) and element.one_way and element.a == transistor.drain_net:
            yield "coil_load", {"part": element.part, "net": transistor.drain_net}
    if circuit.is_rail(transistor.drain_net) and circuit.is_rail(transistor.source_net):
        yield "rail_to_rail", {}


def _snubbers(circuit: Circuit, net: str) -> Iterator[str]:
    """A small resistor and a capacitor in series from this net to elsewhere, in either order."""
    for first in circuit.elements(net):
        middle = first.other(net)
        if first.sort not in (Sort.RESISTOR, Sort.CAPACITOR) or len(circuit.pins(middle)) != 2:  # noqa: PLR2004
            continue
        for second in circuit.elements(middle):
            pair = {first.sort, second.sort}
            resistor = first if first.sort is Sort.RESISTOR else second
            small = resistor.ohm is None or 0 < resistor.ohm <= _SNUBBER_OHM
            if second.part != first.part and pair == {Sort.RESISTOR, Sort.CAPACITOR} and small:
                yield f"{first.part}-{second.part}"


def _surface(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    package = transistor.package
    if package is not None and package.size == "power":
        yield "power_package", {"word": package.name}
    if package is not None and package.size == "small":
        yield "small_package", {"word": package.name}
    walked = around.walks[transistor.key]
    for net in sorted(walked.nets):
        if not net.startswith(("Net-(", "unconnected-")) and _GATE_NAME.search(net.rpartition("/")[2]):
            yield "gate_net_name", {"net": net}


def _against(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    circuit = around.circuit
    for element in circuit.between(transistor.gate_net, [transistor.drain_net], Sort.CAPACITOR):
        farad = _amount(circuit, element.part)
        if farad is not None and farad >= _DRAIN_CAPACITOR_F:
            yield "gate_drain_capacitor", {"part": element.part}
    walked = around.walks[transistor.key]
    if walked.rank < WINDING and is_p_channel(circuit.design.parts[transistor.part]):
        for element in circuit.between(transistor.gate_net, [transistor.source_net], Sort.RESISTOR):
            yield "p_channel_pull_up", {"part": element.part}


def is_p_channel(part: Part) -> bool:
    """Does its text say that it is a P-channel device?"""
    return bool(word_in("p_channel", " ".join((part.description, part.value, part.library)).replace("_", " ")))


def name_of(key: _Key) -> str:
    """Reference and unit of a transistor as reports show it: `Q1`, `Q1 B`."""
    return key[0] if key[1] is None else f"{key[0]} {key[1]}"


def _pin_text(circuit: Circuit, pin: Pin) -> str:
    part = circuit.design.parts[pin.part]
    name = f" ({pin.function})" if pin.function and pin.function != pin.number else ""
    return f"{part.reference} pin {pin.number}{name}"


def _path_text(walked: Walk) -> str:
    return ", ".join(walked.on.parts or walked.off.parts) or "no part"

"""Evidence from what drives the gate, and through how much resistance."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from gatecheck.catalogue.load import pin_is, plain_pin_name, static_pin, word_in
from gatecheck.networks.kinds import Sort, bipolar
from gatecheck.networks.ports import CHIP_PIN, CONNECTOR, NAMED_OUTPUT, OUTPUT, PUSH_PULL, WINDING
from gatecheck.networks.surroundings import Found, Surroundings, amount

if TYPE_CHECKING:
    from collections.abc import Iterator

    from gatecheck.design.model import Part, Pin
    from gatecheck.networks.circuit import Circuit
    from gatecheck.networks.terminals import Transistor
    from gatecheck.networks.walk import Walk

# Series gate resistance by what it can switch. Origin: common practice.
_LOW_OHM, _HIGH_OHM, _VERY_HIGH_OHM = 47.0, 470.0, 4700.0
_SLOW_GATE_S = 100e-6
_LONGEST_NAME = 60
_AMPLIFIER_INPUT = re.compile(r"[+-](?:IN)?_?[A-D1-4]?", re.IGNORECASE)
# Pin names that say gate drive by themselves; GATE, DRV and OUT are used by protection controllers as well.
_DRIVE_NAMES = ("high_side", "low_side", "split_on", "split_off")
# What pins of processors and logic are called when their type does not say.
_PORT_NAME = re.compile(
    r"P[A-K]\d{1,2}(?:[/_(-].*)?|GPIO\w*|IO\d+|P\d+\.\d+|Q[0-7A-H]|Y\d?|[1-8]?Y[1-8]?", re.IGNORECASE
)


def drive(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    """What drives the gate, whether both ways, and with what turn-off."""
    circuit, walked = around.circuit, around.walks[transistor.key]
    if circuit.is_rail(transistor.gate_net):
        yield "rail_gate", {"net": transistor.gate_net}
        return
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
    text = f"{chip.description} {chip.keywords} {chip.library} {chip.value}".replace("_", " ")
    driver = bool(word_in("gate_driver", text))
    if static_pin(pin.function) or word_in("static_controller", text):
        yield "static_controller", fill
        return
    if _is_amplifier(chip, text):
        yield "linear_drive", fill
        return
    rank = around.walks[transistor.key].rank
    port = _PORT_NAME.fullmatch(plain_pin_name(pin.function)[:_LONGEST_NAME])
    if rank < NAMED_OUTPUT and not driver and (word_in("logic", text) or port):
        yield "logic_pin", fill
        return
    source = transistor.source_net
    near = (circuit.tied(source) | circuit.tied(transistor.kelvin_net)) - {""}
    holds = any(p.net in near and not circuit.is_rail(p.net) for p in chip.pins)
    if driver or (rank == NAMED_OUTPUT and any(pin_is(group, pin.function) for group in _DRIVE_NAMES)):
        yield "driver_output", fill
    elif rank == NAMED_OUTPUT and not holds:
        yield "gate_output", fill
    elif holds and len(chip.pins) > 1:
        yield "driver_likely", {**fill, "net": source}
    elif rank in (OUTPUT, CHIP_PIN):
        yield "output_pin", fill
    if holds and any(pin_is("floating_supply", p.function) for p in chip.pins):
        yield "floating_supply", {"net": source}
    if transistor.kelvin_net and any(p.net == transistor.kelvin_net for p in chip.pins):
        yield "kelvin_to_driver", {"net": transistor.kelvin_net}


def _is_amplifier(chip: Part, text: str) -> bool:
    """An operational amplifier by its words, or by inputs called + and -, or +IN and -IN.

    Gate drivers write IN+ and IN-.
    """
    signs = {pin.function[0] for pin in chip.pins if _AMPLIFIER_INPUT.fullmatch(pin.function[:_LONGEST_NAME])}
    return bool(word_in("amplifier", text)) or signs == {"+", "-"}


def _helper(circuit: Circuit, walked: Walk, transistor: Transistor) -> bool:
    """A transistor of its own on the gate's nets that can discharge the gate."""
    return any(
        circuit.kinds[pin.part].sort is Sort.TRANSISTOR and bipolar(circuit.design.parts[pin.part])
        for net in walked.nets - {drive.net for drive in walked.drives}
        for pin in circuit.pins(net)
        if pin.part != transistor.part
    )


def resistance(around: Surroundings, transistor: Transistor) -> Iterator[Found]:
    """Series resistance and gate time constant."""
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
        if (farad := amount(around.circuit, e.part)) is not None and farad * ohm > _SLOW_GATE_S
    ]
    if caps:
        part, farad = caps[0]
        yield "slow_gate", {"part": part, "seconds": f"{farad * ohm * 1e6:.0f} us"}


def series_resistance(circuit: Circuit, walked: Walk) -> float:
    """The known resistance from driver to gate: what all ways pass, plus the least of what only some pass."""
    resistors = [
        (step.part, ohm)
        for step in walked.on.steps
        if step.sort == Sort.RESISTOR and (ohm := amount(circuit, step.part)) is not None
    ]
    common = sum(ohm for part, ohm in resistors if part in walked.on.covering)
    others = [ohm for part, ohm in resistors if part not in walked.on.covering]
    return common + min(others, default=0.0)


def _pin_text(circuit: Circuit, pin: Pin) -> str:
    part = circuit.design.parts[pin.part]
    name = f" ({pin.function})" if pin.function and pin.function != pin.number else ""
    return f"{part.reference} pin {pin.number}{name}"


def _path_text(walked: Walk) -> str:
    return ", ".join(walked.on.parts or walked.off.parts) or "no part"

"""A circuit simulator's input file of any network that was judged, so that anyone can check the numbers.

The decks use elements that every SPICE knows; saturation and charge curves need the B source of Berkeley
SPICE 3 and its descendants. Run one in batch mode; the `.meas` lines print what is compared.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gatecheck.physics.gate_loop import loop_states
from gatecheck.physics.transient import record_length_s

if TYPE_CHECKING:
    from collections.abc import Iterator, Sequence

    from gatecheck.physics.arrays import Real
    from gatecheck.physics.bead import BeadLadder
    from gatecheck.physics.gate_loop import GateLoop
    from gatecheck.physics.hard_switching import HardSwitch
    from gatecheck.physics.nonlinear_loop import ChargeCurve, Saturation
    from gatecheck.physics.switch_circuit import SharedLeads, SwitchBranch

_STEP_S = 1e-12  # duration of an "ideal" edge; our choice, far below any gate loop's own times
_POINTS = 4000  # time steps of a record; our choice, 0.1 % on peaks with the trapezoidal rule
_OPTIONS = ".options reltol=1e-5 abstol=1e-10 vntol=1e-8 method=trap"
_KICK_V = 1e-3  # start of an oscillation; our choice, any size gives the same growth in a linear circuit
_CLAMP_DROP = 1e-4  # the clamp takes the load at this part of the bus voltage above it (`hard_switching`)
_SHORT_OHM = 1e-6  # a lead without resistance and inductance; a source of 0 V troubles the step control


def edge_deck(loop: GateLoop, *, title: str, start_v: float, final_v: float, duration_s: float | None = None) -> str:
    """Deck of one edge of a gate loop without corner axes.

    Args:
        loop: the loop.
        title: first line.
        start_v: driver voltage before the step.
        final_v: driver voltage after it.
        duration_s: length of the record, ten times the slowest time constant if not given.

    Returns:
        The deck; it measures the peak current `ipk` and the gate's extremes `vmax` and `vmin`.
    """
    lines = [
        *_driver(loop, start_v, final_v),
        *_bead_lines("b", loop.bead, ("n3", "g")),
        f"Cg g 0 {_number(loop.capacitance_f)} ic={_number(start_v)}",
    ]
    return _deck(title, [*lines, *_edge_analysis(loop, start_v, final_v, duration_s)])


def nonlinear_edge_deck(
    loop: GateLoop,
    *,
    title: str,
    swing_v: tuple[float, float],
    charge: ChargeCurve | None = None,
    saturation: Saturation | None = None,
) -> str:
    """Deck of one edge with a gate charge curve or a saturating bead, without corner axes.

    Args:
        loop: the loop; as in `nonlinear_loop`, the bead's own capacitance is left out.
        title: first line.
        swing_v: driver voltage before and after the step.
        charge: gate charge curve, or None for the loop's capacitance.
        saturation: bead saturation, or None.

    Returns:
        The deck, with the measurements of `edge_deck`.
    """
    start_v, final_v = swing_v
    lines = _driver(loop, start_v, final_v)
    lines += _bead_lines("b", loop.bead, ("n3", "g"), saturation=saturation, with_capacitance=False)
    if charge is None:
        lines.append(f"Cg g 0 {_number(loop.capacitance_f)} ic={_number(start_v)}")
    else:
        charge_nc = charge.charge_c * float(np.asarray(charge.charge_ratio)) * 1e9
        start_nc = float(np.interp(start_v, charge.voltage_v, charge_nc))
        points = ", ".join(f"{_number(q)}, {_number(v)}" for q, v in zip(charge_nc, charge.voltage_v, strict=True))
        lines += [
            "* voltage of node q: gate charge in nanocoulombs",
            "Vq g gq 0",
            "Fq 0 q Vq 1",
            f"Cq q 0 1e-9 ic={_number(start_nc)}",
            f"Bg gq 0 V=pwl(v(q), {points})",
        ]
    return _deck(title, [*lines, *_edge_analysis(loop, start_v, final_v, None)])


def bump_deck(loop: GateLoop, *, title: str, gate_drain_f: float, slope_v_per_s: float, swing_v: float) -> str:
    """Deck of a dv/dt bump on a gate that is held off, without corner axes.

    Args:
        loop: off path.
        title: first line.
        gate_drain_f: C_gd.
        slope_v_per_s: drain slope.
        swing_v: drain swing.

    Returns:
        The deck; it measures `vmax` above the off voltage.
    """
    pushed, edge_s = _number(gate_drain_f * slope_v_per_s), swing_v / slope_v_per_s
    lines = [
        f"R1 0 n2 {_number(loop.resistance_ohm)}",
        f"L1 n2 n3 {_number(loop.inductance_h)} ic=0",
        *_bead_lines("b", loop.bead, ("n3", "g")),
        f"Cg g 0 {_number(loop.capacitance_f)} ic=0",
        f"Ig 0 g PWL(0 {pushed} {_number(edge_s)} {pushed} {_number(edge_s + _STEP_S)} 0)",
        *_transient(3.0 * edge_s, 3.0 * edge_s / _POINTS),
        ".meas tran vmax MAX v(g)",
    ]
    return _deck(title, lines)


def oscillation_deck(
    devices: Sequence[SwitchBranch],
    shared: SharedLeads,
    *,
    title: str,
    kicks_v: Sequence[float] | None = None,
    duration_s: float,
) -> str:
    """Deck of switches in their active region, started by a small voltage on each gate, without corner axes.

    Args:
        devices: the switches; for the odd mode of two give them opposite kicks.
        shared: leads before the joint.
        title: first line.
        kicks_v: starting gate voltages, 1 mV on the first switch if not given.
        duration_s: length of the record.

    Returns:
        The deck; it prints every gate voltage along time.
    """
    kicks = [_KICK_V, *([0.0] * (len(devices) - 1))] if kicks_v is None else list(kicks_v)
    back = "0" if devices[0].kelvin_inductance_h is None else "k"
    lines = [
        *_lead("gc", back, "gj", shared.gate_resistance_ohm, shared.gate_inductance_h),
        *_lead("dc", "0", "dj", shared.drain_resistance_ohm, shared.drain_inductance_h),
    ]
    for place, (device, kick_v) in enumerate(zip(devices, kicks, strict=True), start=1):
        lines += _device(str(place), device, kick_v)
    probes = " ".join(f"v(g{place},s{place})" for place in range(1, len(devices) + 1))
    step_s = duration_s / _POINTS
    return _deck(title, [*lines, *_transient(duration_s, step_s), f".print tran {probes}"])


def turn_on_deck(
    loop: GateLoop, switch: HardSwitch, *, title: str, swing_v: tuple[float, float], duration_s: float
) -> str:
    """Deck of a turn-on under inductive load, without corner axes.

    Args:
        loop: gate loop.
        switch: switch and load.
        title: first line.
        swing_v: driver voltage before and after the step.
        duration_s: length of the record.

    Returns:
        The deck; it measures the loss `energy` and the crossing times `t_i10`, `t_i90`, `t_v90`, `t_v10`.
    """
    start_v, final_v = swing_v
    load, bus = float(np.asarray(switch.load_a)), float(np.asarray(switch.bus_v))
    overdrive = f"max(v(g)-{_number(switch.threshold_v)}, 0)"
    channel = f"{_number(switch.transconductance_siemens)}*{overdrive}*tanh(v(d))"
    lines = [
        *_driver(loop, start_v, final_v),
        *_bead_lines("b", loop.bead, ("n3", "g")),
        f"Cgs g 0 {_number(switch.gate_source_f)} ic={_number(start_v)}",
        f"Cgd g d {_number(switch.gate_drain_f)} ic={_number(start_v - bus * (1.0 + _CLAMP_DROP))}",
        f"Vch d dc 0\nBch dc 0 I={channel}",
        f"Vbus bus 0 {_number(bus)}\nIload bus d {_number(load)}",
        f"Bclamp d bus I={_number(load / (_CLAMP_DROP * bus))}*max(v(d)-v(bus), 0)",
        "* voltage of node e: lost energy in microjoules",
        "Be 0 e I=v(d)*i(Vch)\nCe e 0 1e-6 ic=0\nRe e 0 1e12",
        *_transient(duration_s, duration_s / _POINTS / 4),
        f".meas tran t_i10 WHEN i(Vch)={_number(0.1 * load)} RISE=1",
        f".meas tran t_i90 WHEN i(Vch)={_number(0.9 * load)} RISE=1",
        f".meas tran t_v90 WHEN v(d)={_number(0.9 * bus)} FALL=1",
        f".meas tran t_v10 WHEN v(d)={_number(0.1 * bus)} FALL=1",
        f".meas tran energy FIND v(e) AT={_number(duration_s * 0.999)}",
    ]
    return _deck(title, lines)


def _deck(title: str, lines: Sequence[str]) -> str:
    return "\n".join([f"* {title}", *lines, ".end", ""])


def _driver(loop: GateLoop, start_v: float, final_v: float) -> list[str]:
    return [
        f"Vd n1 0 PWL(0 {_number(start_v)} {_number(_STEP_S)} {_number(final_v)})",
        f"R1 n1 n2 {_number(loop.resistance_ohm)}",
        f"L1 n2 n3 {_number(loop.inductance_h)} ic=0",
    ]


def _edge_analysis(loop: GateLoop, start_v: float, final_v: float, duration_s: float | None) -> list[str]:
    if duration_s is None:
        duration_s = float(record_length_s(state_matrix_per_s=loop_states(loop).state_matrix_per_s))
    peak = "MAX" if final_v > start_v else "MIN"
    return [
        *_transient(duration_s, duration_s / _POINTS),
        f".meas tran ipk {peak} i(L1)",
        ".meas tran vmax MAX v(g)",
        ".meas tran vmin MIN v(g)",
    ]


def _transient(duration_s: float, step_s: float) -> list[str]:
    step = _number(step_s)
    return [_OPTIONS, f".tran {step} {_number(duration_s)} 0 {step} uic"]


def _bead_lines(
    name: str,
    bead: BeadLadder | None,
    between: tuple[str, str],
    *,
    saturation: Saturation | None = None,
    with_capacitance: bool = True,
) -> list[str]:
    """The ladder between two nodes; a short where there is none."""
    left, right = between
    if bead is None:
        return [f"R{name} {left} {right} {_number(_SHORT_OHM)}"]
    string = [
        (float(resistance), float(inductance))
        for resistance, inductance in zip(bead.section_resistance_ohm, bead.section_inductance_h, strict=True)
    ]
    lines = list(_lead(f"{name}dc", left, f"{name}0", bead.dc_resistance_ohm, 0.0))
    lines += _lead(f"{name}s", f"{name}0", f"{name}1", 0.0, bead.series_inductance_h)
    for place, (resistance, inductance) in enumerate(string, start=1):
        near, far = f"{name}{place}", right if place == len(string) else f"{name}{place + 1}"
        lines.append(f"R{name}{place} {near} {far} {_number(resistance)}")
        if saturation is None:
            lines.append(f"L{name}{place} {near} {far} {_number(inductance)} ic=0")
        else:
            lines += _saturating(f"{name}{place}", near, far, inductance, saturation)
    if with_capacitance and float(bead.capacitance_f) > 0.0:
        lines.append(f"C{name} {name}0 {right} {_number(bead.capacitance_f)} ic=0")
    return lines


def _saturating(name: str, near: str, far: str, inductance_h: float, saturation: Saturation) -> list[str]:
    """An inductance given by its flux: one henry carries the flux as a current, its voltage is copied."""
    half = float(np.asarray(saturation.half_current_a))
    left = float(np.asarray(saturation.residual_ratio)) * inductance_h
    sensed = f"i(V{name})"
    flux = f"{_number(left)}*{sensed}+{_number((inductance_h - left) * half)}*atan({sensed}/{_number(half)})"
    return [
        f"V{name} {near} x{name} 0",
        f"Ba{name} 0 y{name} I={flux}",
        f"Ly{name} y{name} 0 1 ic=0",
        f"Bb{name} x{name} {far} V=v(y{name})",
    ]


def _device(name: str, device: SwitchBranch, kick_v: float) -> Iterator[str]:
    yield from _lead(f"g{name}", "gj", f"p{name}", device.gate_resistance_ohm, device.gate_inductance_h)
    yield from _bead_lines(f"b{name}_", device.bead, (f"p{name}", f"g{name}"))
    yield from _lead(f"d{name}", "dj", f"d{name}", device.drain_resistance_ohm, device.drain_inductance_h)
    yield from _lead(f"s{name}", f"s{name}", "0", device.source_resistance_ohm, device.source_inductance_h)
    if device.kelvin_inductance_h is not None:
        yield from _lead(f"k{name}", f"s{name}", "k", device.kelvin_resistance_ohm, device.kelvin_inductance_h)
    yield f"Cgs{name} g{name} s{name} {_number(device.gate_source_f)} ic={_number(kick_v)}"
    yield f"Cgd{name} g{name} d{name} {_number(device.gate_drain_f)} ic={_number(kick_v)}"
    yield f"Cds{name} d{name} s{name} {_number(device.drain_source_f)} ic=0"
    yield f"G{name} d{name} s{name} g{name} s{name} {_number(device.transconductance_siemens)}"
    if float(np.asarray(device.output_siemens)) > 0.0:
        yield f"Ro{name} d{name} s{name} {_number(1.0 / np.asarray(device.output_siemens))}"


def _lead(name: str, near: str, far: str, resistance_ohm: Real, inductance_h: Real) -> Iterator[str]:
    """Resistance and inductance in series, each only if above zero; a short if neither is."""
    resistance, inductance = float(np.asarray(resistance_ohm)), float(np.asarray(inductance_h))
    if resistance > 0.0 and inductance > 0.0:
        yield f"R{name} {near} m{name} {_number(resistance)}"
        yield f"L{name} m{name} {far} {_number(inductance)} ic=0"
    elif resistance > 0.0:
        yield f"R{name} {near} {far} {_number(resistance)}"
    elif inductance > 0.0:
        yield f"L{name} {near} {far} {_number(inductance)} ic=0"
    else:
        yield f"R{name} {near} {far} {_number(_SHORT_OHM)}"


def _number(value: Real) -> str:
    return f"{float(np.asarray(value)):.9g}"

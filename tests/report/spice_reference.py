"""Random gate networks and what a circuit simulator says of them.

Run as `python -m tests.report.spice_reference` from the repository root, with ngspice installed, to draw the
networks anew from their seed and to write tests/reference/spice: one deck per edge and active region, and
networks.json with the element values, the simulator's version and its answers. The tests read those files
and need no simulator.
"""

from __future__ import annotations

import dataclasses
import json
import re
import subprocess
from pathlib import Path
from typing import Any

import numpy as np

from gatecheck.physics.bead import BeadLadder
from gatecheck.physics.gate_loop import GateLoop, loop_states
from gatecheck.physics.oscillation import fastest_mode, sweep_transconductance
from gatecheck.physics.switch_circuit import SharedLeads, SwitchBranch, parallel_poles_per_s
from gatecheck.physics.transient import record_length_s
from gatecheck.report.to_spice import edge_deck, oscillation_deck

FOLDER = Path(__file__).parent.parent / "reference" / "spice"
COMMAND = ["ngspice", "-b"]
SEED, COUNT = 20240611, 24
GROWTH_NEPER = 8.0  # length of a growing record: 1 mV becomes 3 V; a linear circuit does not care
DECAY_PERIODS = 12.0  # length of a decaying one
FITTED_NEPER = 3.5  # growth is read off the last part, where slower modes are small beside it


def networks() -> list[dict[str, Any]]:
    rng = np.random.default_rng(SEED)
    return [draw(rng, f"n{place:02d}") for place in range(COUNT)]


def draw(rng: np.random.Generator, name: str) -> dict[str, Any]:
    def between(low: float, high: float) -> float:
        return float(f"{np.exp(rng.uniform(np.log(low), np.log(high))):.4g}")

    place = int(name[1:])
    bead = None if place % 4 == 0 else draw_bead(between, sections=1 if place % 4 == 1 else 3, series=place % 4 == 3)
    edges = {
        edge: {"resistance_ohm": between(0.8, 12.0), "inductance_h": between(2e-9, 3e-8)} for edge in ("on", "off")
    }
    capacitance = between(2e-10, 8e-9)
    swing = [(0.0, 12.0), (-4.0, 18.0), (0.0, 6.0), (-8.0, 15.0)][place % 4]
    device = {
        "gate_resistance_ohm": between(0.3, 3.0),
        "gate_inductance_h": between(3e-9, 2e-8),
        "drain_inductance_h": between(2e-9, 2e-8),
        "gate_source_f": capacitance,
        "gate_drain_f": between(0.003, 0.03) * capacitance,
        "drain_source_f": between(0.03, 0.3) * capacitance,
        "transconductance_siemens": between(10.0, 100.0),
        "drain_resistance_ohm": between(0.01, 0.1),
        "source_inductance_h": between(5e-10, 5e-9) if place % 3 else 0.0,
        "kelvin_inductance_h": between(3e-9, 1e-8) if place % 5 == 0 else None,
        "kelvin_resistance_ohm": between(0.1, 1.0) if place % 5 == 0 else 0.0,
    }
    shared = {"gate_resistance_ohm": between(1.0, 10.0), "gate_inductance_h": between(2e-9, 2e-8)}
    count = 1 + place % 2
    return {"name": name, "swing_v": swing, "edges": edges, "capacitance_f": capacitance, "bead": bead,
            "device": device, "devices_count": count, "shared": shared if count > 1 else {}}  # fmt: skip


def draw_bead(between: Any, *, sections: int, series: bool) -> dict[str, Any]:
    resistances = [between(5.0, 200.0) for _ in range(sections)]
    return {
        "dc_resistance_ohm": between(0.005, 0.3),
        "section_resistance_ohm": resistances,
        "section_inductance_h": [r / (2.0 * np.pi * between(5e6, 2e8)) for r in resistances],
        "series_inductance_h": between(1e-9, 1e-8) if series else 0.0,
        "capacitance_f": between(2e-13, 1.5e-12),
    }


def bead_of(network: dict[str, Any]) -> BeadLadder | None:
    fields = network["bead"]
    return None if fields is None else BeadLadder(**{key: np.array(value) for key, value in fields.items()})


def loop_of(network: dict[str, Any], edge: str) -> GateLoop:
    return GateLoop(
        **{key: np.array(value) for key, value in network["edges"][edge].items()},
        capacitance_f=np.array(network["capacitance_f"]),
        bead=bead_of(network),
    )


def swing_of(network: dict[str, Any], edge: str) -> tuple[float, float]:
    low, high = network["swing_v"]
    return (low, high) if edge == "on" else (high, low)


def devices_of(network: dict[str, Any]) -> tuple[list[SwitchBranch], SharedLeads]:
    """The switches without bead, since a bead would calm most of them."""
    return [SwitchBranch(**network["device"])] * network["devices_count"], SharedLeads(**network["shared"])


def predicted(network: dict[str, Any]) -> tuple[float, float]:
    """Growth and frequency by the code under test; in the reference it only sets the record's length."""
    growth, frequency = fastest_mode(poles_per_s=parallel_poles_per_s(*devices_of(network)))
    return float(growth), float(frequency)


def with_worst_gain(network: dict[str, Any]) -> dict[str, Any]:
    """The network at its fastest growing transconductance, so that most of them grow."""
    devices, shared = devices_of(network)
    swept = sweep_transconductance(
        lambda gain: parallel_poles_per_s(
            [dataclasses.replace(one, transconductance_siemens=gain) for one in devices], shared
        ),
        maximum_siemens=devices[0].transconductance_siemens,
    )
    gain = float(f"{float(swept.transconductance_siemens):.4g}")
    return {**network, "device": {**network["device"], "transconductance_siemens": gain}}


def durations(network: dict[str, Any]) -> dict[str, float]:
    growth, frequency = predicted(network)
    active = GROWTH_NEPER / growth if growth > 0.02 * frequency else DECAY_PERIODS / frequency
    lengths = {
        edge: float(record_length_s(state_matrix_per_s=loop_states(loop_of(network, edge)).state_matrix_per_s))
        for edge in ("on", "off")
    }
    return {key: float(f"{value:.4g}") for key, value in {**lengths, "active": active}.items()}


def decks(network: dict[str, Any]) -> dict[str, str]:
    lengths = network["duration_s"]
    made = {}
    for edge in ("on", "off"):
        start, final = swing_of(network, edge)
        title = f"{network['name']}, {edge} edge"
        made[edge] = edge_deck(
            loop_of(network, edge), title=title, start_v=start, final_v=final, duration_s=lengths[edge]
        )
    devices, shared = devices_of(network)
    made["active"] = oscillation_deck(
        devices,
        shared,
        title=f"{network['name']}, active region",
        kicks_v=[1e-3, -1e-3][: len(devices)],
        duration_s=lengths["active"],
    )
    return made


def simulated(path: Path) -> str:
    finished = subprocess.run([*COMMAND, path.name], cwd=path.parent, capture_output=True, text=True, check=True)
    return finished.stdout


def measured(output: str) -> dict[str, float]:
    """The `.meas` lines of an edge."""
    found = re.findall(r"^(ipk|vmax|vmin)\s*=\s*(\S+)", output, re.MULTILINE)
    return {name: float(value) for name, value in found}


def growth_of(output: str) -> dict[str, float]:
    """Growth in nepers per second and frequency of the printed gate voltages (their difference if two)."""
    rows = [line.split() for line in output.splitlines() if re.match(r"\d+\s+\S+e[+-]\d+\s", line)]
    table = np.array([[float(word) for word in row] for row in rows])
    time, wave = table[:, 1], table[:, 2] - (table[:, 3] if table.shape[1] > 3 else 0.0)
    size = np.abs(wave)
    inner = np.flatnonzero((size[1:-1] > size[:-2]) & (size[1:-1] >= size[2:])) + 1
    times, logs = zip(*(peak(time, size, place) for place in inner.tolist()), strict=True)
    late = np.array(logs) > max(logs) - FITTED_NEPER if logs[-1] > logs[0] else np.ones(len(logs), dtype=bool)
    kept_times, kept_logs = np.array(times)[late], np.array(logs)[late]
    slope = float(np.polyfit(kept_times, kept_logs, 1)[0])
    period = 2.0 * float(np.mean(np.diff(kept_times)))
    return {"growth_per_s": slope, "frequency_hz": 1.0 / period}


def peak(time: Any, size: Any, place: int) -> tuple[float, float]:
    """Summit of the parabola through a largest sample and its neighbours: time and log of the height."""
    near = slice(place - 1, place + 2)
    centred = time[near] - time[place]
    bend, tilt, height = np.polyfit(centred, size[near], 2)
    shift = -tilt / (2.0 * bend)
    return float(time[place] + shift), float(np.log(height - tilt**2 / (4.0 * bend)))


def answers(network: dict[str, Any], outputs: dict[str, str]) -> dict[str, dict[str, float]]:
    del network
    return {
        "on": measured(outputs["on"]),
        "off": measured(outputs["off"]),
        "active": growth_of(outputs["active"]),
    }


def deck_path(network: dict[str, Any], part: str) -> Path:
    return FOLDER / f"{network['name']}_{part}.cir"


def run(network: dict[str, Any]) -> dict[str, dict[str, float]]:
    """Simulate the stored decks of one network."""
    return answers(network, {part: simulated(deck_path(network, part)) for part in ("on", "off", "active")})


def write() -> None:
    """Draw, simulate and store everything."""
    FOLDER.mkdir(parents=True, exist_ok=True)
    stored = []
    for drawn in networks():
        network = with_worst_gain(drawn)
        network["duration_s"] = durations(network)
        for part, text in decks(network).items():
            deck_path(network, part).write_text(text, encoding="utf-8")
        stored.append({**network, "answers": run(network)})
    version = subprocess.run([COMMAND[0], "--version"], capture_output=True, text=True, check=True).stdout
    found = re.search(r"ngspice-\S+", version)
    content = {
        "provenance": "Random gate networks of a fixed seed, simulated with the decks beside this file. "
        "Made by `python -m tests.report.spice_reference`; each deck by the command below.",
        "command": "ngspice -b NAME.cir",
        "version": found[0] if found else version.split("\n", 1)[0],
        "networks": stored,
    }
    (FOLDER / "networks.json").write_text(json.dumps(content, indent=1) + "\n", encoding="utf-8")


if __name__ == "__main__":
    write()

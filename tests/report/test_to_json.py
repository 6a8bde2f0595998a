"""The JSON contract: names and shapes that other programs rely on."""

from __future__ import annotations

import json
import shutil
from typing import Any

from tests.test_hostile import BOARD, NETLIST, SAMPLES, run

REPORT = {"schema", "tool", "cautions", "inputs", "transistors", "gates", "findings", "not_judged", "unread", "summary"}
GATE = {
    "id", "switch", "unit", "gate_pads", "gate_net", "source_net", "return_net", "drain_net", "drivers", "on_path", "off_path",
    "beads", "gate_resistors", "pulldowns", "gate_capacitors", "clamps", "parallel_with", "alternates", "quantities",
}  # fmt: skip
FINDING = {
    "rule", "verdict", "level", "subject", "also", "edge", "message", "quantity", "value", "limit", "rests_on", "ask",
    "places", "advice", "fingerprint",
}  # fmt: skip


def report(*paths: object) -> dict[str, Any]:
    code, out, _ = run("review", *map(str, paths), "--format", "json")
    assert code == 0
    parsed: dict[str, Any] = json.loads(out)
    return parsed


def test_report_has_the_promised_shape() -> None:
    found = report(BOARD)
    assert set(found) == REPORT
    assert found["schema"] == "gatecheck.report/1"
    assert len(found["inputs"][0]["sha256"]) == 64
    assert all(set(gate) == GATE for gate in found["gates"])
    assert all(set(finding) == FINDING for finding in found["findings"])
    assert {"id", "ref", "unit", "role", "score", "technology", "evidence"} <= set(found["transistors"][0])
    place = found["findings"][0]["places"][0]
    assert set(place) == {"file", "line", "column", "x_mm", "y_mm", "layer", "part", "pad"}
    line = BOARD.read_text().splitlines()[place["line"] - 1]
    assert line[place["column"] - 1 :].startswith("(footprint")


def test_the_healthy_stage_is_what_its_maker_drew() -> None:
    # tests/sample_maker/half_bridge.py
    high, low = report(BOARD)["gates"]
    assert (high["switch"], high["on_path"], high["off_path"]) == ("Q1", ["R1", "FB1"], ["D2", "R2", "FB1"])
    assert (low["switch"], low["on_path"], low["off_path"]) == ("Q2", ["R4", "FB2"], ["D3", "R5", "FB2"])
    assert [(d["ref"], d["edge"]) for d in high["drivers"]] == [("U1", "both")]
    assert (high["beads"], high["pulldowns"], high["gate_resistors"]) == (["FB1"], ["R3"], ["R1", "R2"])


def test_board_netlist_and_the_next_format_give_the_same_gates() -> None:
    def gates(path: object) -> list[dict[str, Any]]:
        return [
            {key: value for key, value in gate.items() if key not in ("id", "quantities")}
            for gate in report(path)["gates"]
        ]

    assert gates(BOARD) == gates(NETLIST) == gates(SAMPLES / "half_bridge_v10" / "half_bridge.kicad_pcb")


def test_the_logic_board_stays_silent() -> None:
    found = report(SAMPLES / "logic" / "logic.kicad_pcb")
    assert (found["gates"], found["findings"]) == ([], [])
    assert len(found["transistors"]) == 5


def test_summary_counts_what_the_findings_say() -> None:
    found = report(SAMPLES / "half_bridge", SAMPLES / "logic")
    verdicts = [finding["verdict"] for finding in found["findings"]]
    assert found["summary"]["pass"] == verdicts.count("pass")
    assert found["summary"]["not_judged"] == len(found["not_judged"])


def test_ids_and_fingerprints_are_unique_and_survive_moved_parts(tmp_path: Any) -> None:
    found = report(BOARD)
    ids = [gate["id"] for gate in found["gates"]]
    assert len(ids) == len(set(ids))
    prints = [finding["fingerprint"] for finding in found["findings"]]
    assert len(prints) == len(set(prints))
    moved = shutil.copytree(BOARD.parent, tmp_path / "moved") / BOARD.name
    moved.write_text("\n\n" + BOARD.read_text().replace("\t\t(at 4", "\t\t(at 5"))
    assert [finding["fingerprint"] for finding in report(moved)["findings"]] == prints


def test_nets_of_a_file() -> None:
    code, out, _ = run("nets", NETLIST, "--format", "json")
    nets = json.loads(out)
    assert (code, nets["schema"], nets["source"]) == (0, "gatecheck.nets/1", str(NETLIST))
    assert ["U1", "4"] in nets["nets"]["GND"] or any(pin[0] == "U1" for pin in nets["nets"]["GND"])
    assert list(nets["nets"]) == sorted(nets["nets"])

"""Board, netlist and schematic of one design tell the same gates, and a joined review tells them once."""

from __future__ import annotations

import json
import shutil
from pathlib import Path
from typing import Any

import pytest

from tests.test_hostile import run

SAMPLES = Path(__file__).parent.parent / "sample_boards"
DRAWN = sorted(path.stem for path in SAMPLES.glob("*/*.kicad_pro"))
WITH_NETLIST = [name for name in DRAWN if (SAMPLES / name / f"{name}.net").is_file()]


def told(*files: Path) -> dict[str, Any]:
    code, out, err = run("gates", *files, "--format", "json")
    assert code == 0, err
    report: dict[str, Any] = json.loads(out)
    assert report["unread"] == []
    return report


def bare(entries: list[dict[str, Any]]) -> list[dict[str, Any]]:
    """Without what differs by nature: the file in the identity."""
    return [{key: value for key, value in entry.items() if key != "id"} for entry in entries]


def alone(name: str, folder: Path, *suffixes: str) -> Path:
    """A folder with some files of a sample only."""
    folder.mkdir()
    for file in (SAMPLES / name).iterdir():
        if file.suffix in suffixes:
            shutil.copy(file, folder)
    return folder


@pytest.mark.parametrize("name", DRAWN)
def test_schematic_tells_what_the_board_tells(name: str, tmp_path: Path) -> None:
    board = told(alone(name, tmp_path / "board", ".kicad_pcb"))
    sheets = told(alone(name, tmp_path / "sheets", ".kicad_sch", ".kicad_pro"))
    assert {entry["kind"] for entry in sheets["inputs"]} == {"schematic"}
    assert bare(sheets["gates"]) == bare(board["gates"])
    assert [(one["ref"], one["role"], one["score"]) for one in sheets["transistors"]] == [
        (one["ref"], one["role"], one["score"]) for one in board["transistors"]
    ]


@pytest.mark.parametrize("name", WITH_NETLIST)
def test_netlist_tells_the_same(name: str, tmp_path: Path) -> None:
    sheets = told(alone(name, tmp_path / "sheets", ".kicad_sch", ".kicad_pro"))
    netlist = told(alone(name, tmp_path / "netlist", ".net"))
    assert bare(netlist["gates"]) == bare(sheets["gates"])


@pytest.mark.parametrize("name", DRAWN)
def test_together_they_are_one_design(name: str) -> None:
    folder = SAMPLES / name
    whole = told(folder)
    assert bare(whole["gates"]) == bare(told(folder / f"{name}.kicad_pcb")["gates"])
    for sheet in folder.glob("*.kicad_sch"):
        assert whole["gates"] == told(sheet)["gates"]


@pytest.mark.parametrize("name", DRAWN)
def test_samples_are_in_step(name: str) -> None:
    code, out, _ = run("review", SAMPLES / name, "--format", "json")
    assert code in (0, 1)
    verdicts = {finding["verdict"] for finding in json.loads(out)["findings"] if finding["rule"] == "board-out-of-step"}
    assert verdicts <= {"pass"}

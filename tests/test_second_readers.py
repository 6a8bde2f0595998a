"""Independent general-purpose readers see the same parts, pads and nets as gatecheck does."""

from __future__ import annotations

import subprocess
import sys
import warnings
from typing import TYPE_CHECKING

import pytest

from gatecheck.load import load_design
from tests.test_hostile import SAMPLES

if TYPE_CHECKING:
    from pathlib import Path

BOARDS = sorted(p for p in SAMPLES.rglob("*.kicad_pcb") if "v10" not in p.parts[1])
NETLISTS = sorted(SAMPLES.rglob("*.net"))


@pytest.mark.parametrize("path", BOARDS, ids=str)
def test_kiutils_sees_the_same_board(path: Path) -> None:
    from kiutils.board import Board

    want = Board.from_file(str(path))
    design = load_design(path).design
    copper = {
        (f.properties["Reference"], pad.number, pad.net.name if pad.net else "")
        for f in want.footprints
        for pad in f.pads
        if pad.number and pad.type != "np_thru_hole" and any(".Cu" in layer for layer in pad.layers)
    }
    assert {(p.reference, pin.number, pin.net) for p in design.parts.values() for pin in p.pins} == copper
    assert sorted(p.reference for p in design.parts.values()) == sorted(
        f.properties["Reference"] for f in want.footprints
    )
    assert {net.name for net in want.nets if net.name} >= set(design.nets)
    functions = {
        (f.properties["Reference"], pad.number): pad.pinFunction or "" for f in want.footprints for pad in f.pads
    }
    assert all(functions[p.reference, pin.number] == pin.function for p in design.parts.values() for pin in p.pins)
    places = {f.properties["Reference"]: (f.position.X, f.position.Y) for f in want.footprints}
    for part in design.parts.values():
        x_mm, y_mm = places[part.reference]
        assert (part.place.x_m, part.place.y_m) == pytest.approx((x_mm * 1e-3, y_mm * 1e-3))


@pytest.mark.parametrize("path", NETLISTS, ids=str)
def test_kinparse_sees_the_same_netlist(path: Path) -> None:
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # the other reader uses names its own library has since renamed
        import kinparse

        want = kinparse.parse_netlist(path.read_text())
    design = load_design(path).design
    assert {p.reference: p.value for p in design.parts.values()} == {part.ref: part.value for part in want.parts}
    assert {(name, pin.part, pin.number) for name, pins in design.nets.items() for pin in pins} == {
        (net.name, pin.ref, pin.num) for net in want.nets for pin in net.pins
    }


HEAVY = {"scipy", "pandas", "matplotlib", "shapely", "skrf", "jsonschema", "pytest", "kiutils", "kinparse"}
LISTED = """
import io, sys, contextlib
from gatecheck.cli import main
with contextlib.redirect_stdout(io.StringIO()):
    try:
        main(sys.argv[1:])
    except SystemExit:
        pass
print(*sorted({name.partition(".")[0] for name in sys.modules}))
"""


def loaded(*arguments: str) -> set[str]:
    done = subprocess.run([sys.executable, "-c", LISTED, *arguments], capture_output=True, text=True, check=True)
    return set(done.stdout.split())


def test_run_time_needs_no_second_opinion() -> None:
    for arguments in (
        ["review", str(BOARDS[0])],
        ["review", str(BOARDS[0]), "--color", "always"],
        ["gates", str(NETLISTS[0])],
    ):
        assert not loaded(*arguments) & HEAVY


def test_help_loads_nothing_but_the_argument_parser() -> None:
    ours = {"numpy", "networkx", "yaml", "rich", "sexpdata"}
    assert not loaded("--help") & (HEAVY | ours)
    assert "rich" not in loaded("review", str(BOARDS[0])), "no terminal, no terminal library"
    assert not loaded("rules") & {"numpy", "networkx", "sexpdata"}

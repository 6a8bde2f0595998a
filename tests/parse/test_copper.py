"""Tracks, vias and fills of chosen nets; the quick way of reading a track and the parser agree."""

from __future__ import annotations

import pytest

from gatecheck.parse.board import read_board
from gatecheck.parse.copper import NetForms, TrackForm, read_copper
from gatecheck.parse.document import open_document

HEAD = '(kicad_pcb (version 20241229) (layers (0 "F.Cu" signal) (2 "B.Cu" signal)) (net 0 "") (net 1 "G") (net 2 "X")'
PART = '(footprint "R" (layer "F.Cu") (at 0 0) (property "Reference" "R1") (pad "1" smd rect (at 0 0) (size 1 1)))'


def copper(form: str) -> tuple[NetForms, list[str]]:
    board = read_board(open_document("b.kicad_pcb", f"{HEAD} {PART} {form})".encode()))
    found = read_copper(board, frozenset({"G"}))
    return found.nets.get("G", NetForms()), [trouble.message for trouble in found.troubles]


USUAL = '(segment (start 1.5 -2) (end 3 4) (width 0.25) (layer "B.Cu") (net 1) (uuid "a"))'


@pytest.mark.parametrize(
    "form",
    [
        USUAL,
        USUAL.replace(" (", "\n\t("),
        USUAL.replace('"B.Cu"', "B.Cu"),
        USUAL.replace("(net 1)", "(locked yes) (net 1)"),
        USUAL.replace("(start 1.5 -2) (end 3 4)", "(end 3 4) (start 1.5 -2)"),
        USUAL.replace("1.5", "15e-1"),
        USUAL.replace("(width", "(locked) (width"),
    ],
)
def test_a_track_is_read_alike_however_it_is_written(form: str) -> None:
    found, troubles = copper(form)
    assert found.tracks == [TrackForm(((1.5, -2.0), (3.0, 4.0)), 0.25, "B.Cu")]
    assert not troubles


def test_only_the_nets_asked_for_are_read() -> None:
    assert copper(USUAL.replace("(net 1)", "(net 2)")) == (NetForms(), [])
    assert copper(USUAL.replace("(net 1)", "(net 11)")) == (NetForms(), [])


@pytest.mark.parametrize("bad", ["x", "1e400", "nan", "99999999999"])
def test_a_number_that_is_none_is_a_trouble_and_the_next_track_is_read(bad: str) -> None:
    found, troubles = copper(USUAL.replace("1.5", bad) + USUAL)
    assert len(found.tracks) == 1
    assert len(troubles) == 1


def test_a_track_on_no_copper_layer_has_none() -> None:
    found, _ = copper(USUAL.replace("B.Cu", "Edge.Cuts"))
    assert found.tracks[0].layer == ""

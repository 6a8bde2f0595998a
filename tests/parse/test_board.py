"""Boards of every era: the same small board written the way each version writes it.

Source of the differences: notes of the file format's developers on versions, checked on real files.
"""

from __future__ import annotations

import pytest

from gatecheck.errors import InputError
from gatecheck.parse.board import BoardFile, read_board
from gatecheck.parse.document import open_document

V4 = """(kicad_pcb (version 4) (host pcbnew 4.0.7)
  (layers (0 Oben signal) (1 GNDplane power) (31 Unten signal) (44 Edge.Cuts user))
  (net 0 "") (net 1 GATE) (net 2 "Net-(R1-Pad1)")
  (module Lib:TO-220 (layer Unten) (tedit 5F) (tstamp 60AA0001)
    (at 100 50 90) (descr "three leads") (tags power) (path /5AD0C2F1/5AD0C310) (attr smd)
    (fp_text reference Q7 (at 0 -4) (layer F.SilkS)) (fp_text value "SiC 650V" (at 0 4) (layer F.Fab))
    (pad 1 smd rect (at 2 0 90) (size 1 2) (layers Unten F.Mask) (net 1 GATE))
    (pad 2 thru_hole oval (at 0 1) (size 1 1) (drill 0.5 (offset 0.25 0)) (layers *.Cu) (net 2 "Net-(R1-Pad1)"))
    (pad "" np_thru_hole circle (at 0 0) (size 3 3) (drill 3) (layers *.Cu))))"""
V6 = """(kicad_pcb (version 20211014) (generator pcbnew)
  (layers (0 "F.Cu" signal "TopSide") (31 "B.Cu" signal) (44 "Edge.Cuts" user))
  (net 0 "") (net 1 "GATE")
  (footprint "Lib:TO-220" locked (layer "B.Cu") (tedit 5F) (tstamp 8878024e-3167-4d1b-8a3e-0123456789ab)
    (at 100 50 90) (descr "three leads") (tags "power")
    (property "MPN" "ABC-1") (property ki_fp_filters "TO?220") (property private "Note" "own")
    (path "/3c7e/91af") (attr smd exclude_from_bom)
    (fp_text reference locked "Q7" (at 0 -4) (layer "F.SilkS") hide) (fp_text value "SiC 650V" (at 0 4) (layer "F.Fab"))
    (fp_text user "${REFERENCE}" (at 0 0) (layer "F.Fab"))
    (pad "1" smd roundrect locked (at 2 0 90) (size 1 2) (layers "B.Cu" "B.Mask") (roundrect_rratio 0.25)
      (net 1 "GATE") (pinfunction "G") (pintype "input"))))"""
V9 = """(kicad_pcb (version 20241229) (generator "pcbnew") (generator_version "9.0")
  (layers (0 "F.Cu" signal) (4 "In1.Cu" power) (2 "B.Cu" signal) (39 "User.1" signal))
  (net 0 "") (net 1 "GATE")
  (footprint "Lib:TO-220" (locked yes) (layer "B.Cu") (uuid "u") (at 100 50 90) (descr "three leads") (tags "power")
    (property "Reference" "Q7" (at 0 -4) (layer "B.SilkS")) (property "Value" "SiC 650V" (at 0 4) (layer "B.Fab"))
    (property "MPN" "ABC-1" (at 0 0) (layer "B.Fab") (hide yes)) (path "/3c7e/91af") (attr smd dnp)
    (net_tie_pad_groups "1, 2" "3,4")
    (pad "1" smd roundrect (at 2 0 90) (size 1 2) (layers "B.Cu" "B.Mask") (roundrect_rratio 0.25)
      (net 1 "GATE") (pinfunction "G") (pintype "input") (uuid "p"))))"""
V10 = """(kicad_pcb (version 20260206) (generator "pcbnew")
  (layers (0 "F.Cu" signal) (2 "B.Cu" signal))
  (footprint "Lib:TO-220" (locked yes) (layer "B.Cu") (uuid "u") (at 100 50 90) (descr "three leads") (tags "power")
    (property "Reference" "Q7") (property "Value" "SiC 650V") (path "/3c7e/91af")
    (units (unit (name "A") (pins "1" "2")) (unit (name "B") (pins "3")))
    (attr smd (dnp yes))
    (pad "1" smd roundrect (at 2 0 90) (size 1 2) (layers "B.Cu") (net "GATE") (pinfunction "G_1") (pintype "input"))
    (pad "2" smd rect (at 0 0) (size 1 1) (layers "*.Cu") (net "3"))))"""


def read(text: str) -> BoardFile:
    return read_board(open_document("b.kicad_pcb", text.encode()))


@pytest.mark.parametrize("text", [V4, V6, V9, V10], ids=["v4", "v6", "v9", "v10"])
@pytest.mark.parametrize("ends", ["\n", "\r\n"])
def test_the_same_part_in_every_era(text: str, ends: str) -> None:
    board = read(text.replace("\n", ends))
    assert board.troubles == ()
    (form,) = board.footprints
    assert (form.reference, form.value, form.library) == ("Q7", "SiC 650V", "Lib:TO-220")
    assert (form.x_mm, form.y_mm, form.angle_deg, form.layer) == (100, 50, 90, "B.Cu")
    pad = form.pads[0]
    assert (pad.number, pad.net, pad.x_mm, pad.y_mm, pad.angle_deg) == ("1", "GATE", 2, 0, 90)
    assert (pad.width_mm, pad.height_mm) == (1, 2)
    assert pad.layers[0] == "B.Cu"
    assert pad.function == ("" if text is V4 else "G")


def test_v4_layers_are_called_by_the_users_names() -> None:
    board = read(V4)
    assert board.layers == {"Oben": "F.Cu", "GNDplane": "In1.Cu", "Unten": "B.Cu"}
    _, second, unnumbered = board.footprints[0].pads
    assert (second.net, second.offset_mm) == ("Net-(R1-Pad1)", (0.25, 0))
    assert (unnumbered.number, unnumbered.net) == ("", "")


def test_v6_fields_with_bare_keys_and_flags_in_any_place() -> None:
    (form,) = read(V6).footprints
    assert form.fields == {"MPN": "ABC-1", "ki_fp_filters": "TO?220", "Note": "own"}
    assert form.pads[0].corner_ratio == 0.25


def test_signal_type_alone_makes_no_copper() -> None:
    assert read(V9).layers == {"F.Cu": "F.Cu", "In1.Cu": "In1.Cu", "B.Cu": "B.Cu"}


def test_not_fitted_in_both_spellings_and_net_ties() -> None:
    assert "dnp" in read(V9).footprints[0].attributes
    assert "dnp" in read(V10).footprints[0].attributes
    assert read(V9).footprints[0].net_ties == (("1", "2"), ("3", "4"))


def test_v10_names_nets_even_when_they_look_like_numbers() -> None:
    (form,) = read(V10).footprints
    assert [pad.net for pad in form.pads] == ["GATE", "3"]
    assert form.units == (("A", ("1", "2")), ("B", ("3",)))


def test_v9_function_that_ends_like_the_pad_is_kept() -> None:
    (form,) = read(V9.replace('(pinfunction "G")', '(pinfunction "IO_1")')).footprints
    assert form.pads[0].function == "IO_1"


def test_order_of_sections_does_not_matter() -> None:
    start, layers, nets, rest = V4.split("\n", 3)
    shuffled = "\n".join([start, rest[:-1], nets, layers]) + ")"
    assert read(shuffled).footprints == tuple(
        form for form in read(shuffled).footprints if form.layer == "B.Cu" and form.pads[0].net == "GATE"
    )
    assert len(read(shuffled).footprints) == 1


def test_bad_bytes_are_read_as_latin_1_with_a_note() -> None:
    document = open_document("b.kicad_pcb", V9.replace("SiC 650V", "10 µH").encode("latin-1"))
    (form,) = read_board(document).footprints
    assert form.value == "10 µH"
    assert len(document.notes) == 1
    assert "Latin-1" in document.notes[0]


def test_byte_order_mark_is_passed_over() -> None:
    assert read_board(open_document("b", b"\xef\xbb\xbf" + V9.encode())).footprints


def test_bad_pad_is_a_trouble_with_its_place_and_the_rest_is_read() -> None:
    text = V9.replace("(size 1 2)", "(size 1 wide)")[:-1] + V9[V9.index("  (footprint") : -1].replace("Q7", "Q8") + ")"
    board = read(text)
    (trouble,) = board.troubles
    assert isinstance(trouble, InputError)
    assert (trouble.line, "'wide'" in trouble.message) == (8, True)
    assert [form.reference for form in board.footprints] == ["Q8"]

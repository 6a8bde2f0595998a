"""Text variables and bus aliases of a project file, and files that are none."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from gatecheck.errors import InputError
from gatecheck.parse.project_file import ProjectFile, read_project_file, resolved
from gatecheck.review import review
from tests.sheets import file, label, nets, symbol, wire

if TYPE_CHECKING:
    from pathlib import Path


def test_variables_and_aliases() -> None:
    found = read_project_file("p", b'{"text_variables": {"R": "4R7"}, "schematic": {"bus_aliases": {"B": ["X", "Y"]}}}')
    assert found == ProjectFile({"R": "4R7"}, {"B": ["X", "Y"]})


@pytest.mark.parametrize(
    "data", [b"[]", b"3", b'{"text_variables": [], "schematic": {"bus_aliases": {"B": 1}}}', b"{}"]
)
def test_other_shapes_say_nothing(data: bytes) -> None:
    assert read_project_file("p", data) == ProjectFile()


@pytest.mark.parametrize("data", [b"", b"{", b"[" * 100_000, b"\xff", b'{"a": NaN,}'])
def test_no_json_is_one_error(data: bytes) -> None:
    with pytest.raises(InputError, match="no JSON"):
        read_project_file("p", data)


def test_unknown_variables_stay_and_loops_end() -> None:
    assert resolved("${A} ${B}", {"A": "1"}) == "1 ${B}"
    assert resolved("${A}", {"A": "${A}${A}"}).startswith("${A}")
    assert resolved("${A}", {"A": "${C}"}, {"C": "x"}) == "x"


def test_a_value_is_filled_in_from_the_project(tmp_path: Path) -> None:
    (tmp_path / "x.kicad_sch").write_text(file(symbol("P", "R1", "0 0", value="${GATE}")))
    (tmp_path / "x.kicad_pro").write_text('{"text_variables": {"GATE": "4R7"}}')
    (one,) = review([tmp_path / "x.kicad_sch"]).designs
    assert one.networks.design.parts["R1"].value == "4R7"
    (tmp_path / "x.kicad_pro").write_text("{")
    assert [entry.message for entry in review([tmp_path / "x.kicad_sch"]).unread] == ["this project file is no JSON"]


def test_a_bus_of_an_alias_in_a_sheet() -> None:
    alias = '(bus_alias "B" (members "X" "Y"))'
    root = file(
        symbol("P", "P1", "0 0"), label("U.X", "0 0"), wire("9 0", "9 9", kind="bus"), label("U{B}", "9 5"), alias
    )
    assert nets(root) == {"/U.X": "P1.1"}

"""Hierarchies and hostile sheets: one trouble at the sheet symbol, and the rest is read."""

from __future__ import annotations

import pytest

from gatecheck.parse import sheets
from tests.sheets import file, hierarchy, sheet, symbol

LEAF = file(symbol("P", "P1", "0 0"))


def test_paths_and_names_of_sheets() -> None:
    found = hierarchy(file(sheet("A/B", "x")), {"x": file(sheet("Sub", "y")), "y": LEAF})
    assert [(use.path, use.name, use.below_root) for use in found.uses] == [
        ("/top", "/", ""),
        ("/top/A/B", "/A{slash}B/", "/A/B"),
        ("/top/A/B/Sub", "/A{slash}B/Sub/", "/A/B/Sub"),
    ]


@pytest.mark.parametrize(
    ("root", "others", "message"),
    [
        (file(sheet("S", "x")), {"x": file(sheet("S", "x"))}, "contains itself"),
        (file(sheet("S", "gone"), sheet("T", "y")), {"y": LEAF}, "no such file"),
        (file(sheet("S", ""), sheet("T", "y")), {"y": LEAF}, "no such file"),
    ],
)
def test_a_bad_sheet_is_said_where_it_stands_and_the_rest_is_read(
    root: str, others: dict[str, str], message: str
) -> None:
    found = hierarchy(root, others)
    (trouble,) = found.troubles
    assert message in trouble.message
    assert root.splitlines()[trouble.line - 1][trouble.column - 1 :].startswith("(sheet ")
    assert len(found.uses) == 2


def test_a_sheet_drawn_a_million_times_is_stopped(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sheets, "_MOST_USES", 50)
    levels = {f"l{i}": file(*(sheet(f"S{k}", f"l{i + 1}") for k in range(10))) for i in range(6)} | {"l6": LEAF}
    found = hierarchy(file(sheet("S", "l0")), levels)
    assert len(found.uses) == 50
    assert all(trouble.message.startswith("more than 50 sheets") for trouble in found.troubles)
    assert len(found.troubles) >= 1


def test_a_full_sheet_drawn_often_is_stopped(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sheets, "_MOST_DRAWN", 100)
    full = file(*(symbol("P", f"P{i}", f"{i} 0") for i in range(60)))
    found = hierarchy(file(*(sheet(f"S{i}", "full") for i in range(9))), {"full": full})
    assert len(found.uses) == 3
    assert len(found.troubles) == 1


def test_sheets_nested_without_end_are_stopped() -> None:
    levels = {f"l{i}": file(sheet("S", f"l{i + 1}")) for i in range(40)} | {"l40": LEAF}
    found = hierarchy(file(sheet("S", "l0")), levels)
    assert [trouble.message for trouble in found.troubles] == ["sheets nested deeper than 30"]


def test_a_bad_symbol_is_a_trouble_and_the_others_are_read() -> None:
    found = hierarchy(file('(symbol (lib_id "P") (unit 1))', symbol("P", "P1", "0 0")))
    assert len(found.root.symbols) == 1
    assert "(at)" in found.troubles[0].message

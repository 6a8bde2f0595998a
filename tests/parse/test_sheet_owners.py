"""Which project a sheet belongs to, from any of its files; and what a sheet may not reach."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from gatecheck.parse.project import find_projects
from gatecheck.review import review
from tests.sheets import file, sheet, symbol

if TYPE_CHECKING:
    from pathlib import Path

LEAF = file(symbol("P", "P1", "0 0"))


@pytest.fixture
def project(tmp_path: Path) -> Path:
    """A project of a root and a sheet in a folder below, one more sheet below that, and a sheet left over."""
    (tmp_path / ".git").mkdir()
    folder = tmp_path / "drive"
    (folder / "parts").mkdir(parents=True)
    (folder / "drive.kicad_pro").write_text("{}")
    (folder / "drive.kicad_sch").write_text(file(sheet("A", "parts/leg.kicad_sch"), sheet("B", "parts/leg.kicad_sch")))
    (folder / "parts" / "leg.kicad_sch").write_text(file(sheet("G", "gate.kicad_sch")))
    (folder / "parts" / "gate.kicad_sch").write_text(LEAF)
    (folder / "old.kicad_sch").write_text(LEAF)
    return folder


@pytest.mark.parametrize("name", ["drive.kicad_sch", "drive.kicad_pro", "parts/leg.kicad_sch", "parts/gate.kicad_sch"])
def test_any_file_leads_to_its_project(project: Path, name: str) -> None:
    (one,) = find_projects([project / name])
    assert one.path.resolve() == (project / "drive.kicad_sch").resolve()


def test_several_files_of_a_project_are_one(project: Path) -> None:
    assert len(find_projects([project / "parts/leg.kicad_sch", project / "parts/gate.kicad_sch", project])) == 1


def test_a_folder_holds_its_projects_and_no_sheets_left_over(project: Path) -> None:
    assert [one.path.name for one in find_projects([project])] == ["drive.kicad_sch"]
    assert [one.path.name for one in find_projects([project / "old.kicad_sch"])] == ["old.kicad_sch"]


def test_without_a_project_file_the_uppermost_sheet_is_the_root(project: Path) -> None:
    (project / "drive.kicad_pro").unlink()
    assert {one.path.name for one in find_projects([project / "parts/gate.kicad_sch"])} == {"drive.kicad_sch"}


def test_a_sheet_of_two_projects_leads_to_both(project: Path) -> None:
    (project / "test.kicad_pro").write_text("{}")
    (project / "test.kicad_sch").write_text(file(sheet("A", "parts/gate.kicad_sch")))
    names = {one.path.name for one in find_projects([project / "parts/gate.kicad_sch"])}
    assert names == {"drive.kicad_sch", "test.kicad_sch"}


def test_every_sheet_read_is_an_input_with_its_hash(project: Path) -> None:
    report = review([project])
    assert [entry.path.rpartition("drive/")[2] for entry in report.inputs] == [
        "drive.kicad_sch",
        "parts/leg.kicad_sch",
        "parts/gate.kicad_sch",
    ]
    assert not report.unread


@pytest.mark.parametrize("way", ["../../outside.kicad_sch", "/etc/passwd", "link.kicad_sch"])
def test_a_sheet_outside_the_repository_is_refused(project: Path, way: str) -> None:
    outside = project.parent.parent / "outside.kicad_sch"
    outside.write_text(LEAF)
    (project / "link.kicad_sch").symlink_to(outside)
    (project / "drive.kicad_sch").write_text(file(sheet("A", way), symbol("P", "P1", "0 0")))
    report = review([project / "drive.kicad_sch"])
    assert [entry.message for entry in report.unread] == ["this sheet lies outside the project"]
    assert len(report.inputs) == 1
    if "passwd" not in way:
        assert not review([project / "drive.kicad_sch"], outside=True).unread
    outside.unlink()


def test_a_sheet_that_is_no_schematic_is_said(project: Path) -> None:
    (project / "parts" / "leg.kicad_sch").write_text("(kicad_pcb (version 4))")
    messages = [entry.message for entry in review([project]).unread]
    assert messages == ["this sheet's file is no schematic"]


def test_copies_of_editors_are_no_projects(project: Path) -> None:
    (project / "_autosave-drive.kicad_sch").write_text(LEAF)
    (project / "drive-backups").mkdir()
    (project / "drive-backups" / "x.kicad_sch").write_text(LEAF)
    assert len(find_projects([project])) == 1


def test_variants_are_said_not_to_be_reviewed(project: Path) -> None:
    other = '(instances (project "p" (path "/top" (reference "P1") (unit 1) (variant (name "Lean") (dnp yes)))))'
    (project / "drive.kicad_sch").write_text(file(symbol("P", "P1", "0 0", other)))
    (entry,) = review([project / "drive.kicad_sch"]).not_judged
    assert entry.reason == "variants Lean: the design without them is reviewed"


@pytest.mark.parametrize("name", ["a\\x00b.kicad_sch", "x" * 5000, "a\\nb", "", "leg", "."])
def test_odd_names_of_sheets_are_one_trouble(project: Path, name: str) -> None:
    (project / "drive.kicad_sch").write_text(file(sheet("A", name), symbol("P", "P1", "0 0")))
    report = review([project / "drive.kicad_sch"])
    assert len(report.unread) == 1
    assert report.unread[0].line > 0

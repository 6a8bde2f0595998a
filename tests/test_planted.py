"""Each planted fault is found, and nothing else; without the project's own word it blocks nothing."""

from __future__ import annotations

import json
import shutil
from pathlib import Path
from typing import Any

import pytest
import yaml

from tests.test_hostile import SAMPLES, run

FOLDERS = sorted(path.parent for path in SAMPLES.glob("*/expected.yaml"))


def failing(out: str, level: str) -> set[tuple[str, str]]:
    return {
        (finding["rule"], subject)
        for finding in json.loads(out)["findings"]
        if finding["verdict"] == "fail" and finding["level"] == level
        for subject in (finding["subject"], *finding["also"])
    }


def listed(rows: list[dict[str, str]]) -> set[tuple[str, str]]:
    return {(row["rule"], row["subject"]) for row in rows}


def test_there_is_a_folder_for_every_rule_on_copper_and_current() -> None:
    said = {
        row["rule"] for folder in FOLDERS for row in yaml.safe_load((folder / "expected.yaml").read_text())["errors"]
    }
    assert said == {"series-bead", "bead-distance", "loop-area", "bead-current"}


@pytest.mark.parametrize("folder", FOLDERS, ids=lambda folder: folder.name)
def test_with_the_projects_own_word(folder: Path) -> None:
    want = yaml.safe_load((folder / "expected.yaml").read_text())
    code, out, err = run("review", folder, "--format", "json")
    assert (code, failing(out, "error"), err) == (want["exit"], listed(want["errors"]), "")
    assert failing(out, "warning") == set()
    assert any(entry["kind"] == "settings" for entry in json.loads(out)["inputs"])


@pytest.mark.parametrize("folder", FOLDERS, ids=lambda folder: folder.name)
def test_without_it_faults_are_warnings(folder: Path, tmp_path: Path) -> None:
    want: dict[str, Any] = yaml.safe_load((folder / "expected.yaml").read_text())["without_project_file"]
    (board,) = folder.glob("*.kicad_pcb")
    alone = Path(shutil.copy(board, tmp_path))
    code, out, _ = run("review", alone, "--format", "json")
    assert (code, failing(out, "error"), failing(out, "warning")) == (want["exit"], set(), listed(want["warnings"]))
    assert run("review", alone, "--block-at", "warning")[0] == bool(want["warnings"])


def test_every_fail_shows_where_how_much_and_what_to_do() -> None:
    for folder in FOLDERS:
        for finding in json.loads(run("review", folder, "--format", "json")[1])["findings"]:
            if finding["verdict"] == "fail":
                assert finding["advice"]
                assert finding["places"]
                assert all(place["x_mm"] is not None and place["line"] > 1 for place in finding["places"])
                if finding["quantity"]:
                    assert (
                        finding["limit"]["origin"].endswith("gatecheck.yaml") or "common" in finding["limit"]["origin"]
                    )


def test_fingerprints_survive_a_moved_part_and_renumbered_lines(tmp_path: Path) -> None:
    folder = SAMPLES / "bead_far"
    shutil.copytree(folder, tmp_path / "b")
    board = tmp_path / "b" / "bead_far.kicad_pcb"
    before = {f["fingerprint"] for f in json.loads(run("review", board, "--format", "json")[1])["findings"]}
    text = board.read_text()
    hole = text.rindex("\n\t(footprint", 0, text.index('"Reference" "H1"'))
    at = text.index("\n\t\t(at ", hole) + len("\n\t\t(at ")
    board.write_text("\n\n" + text[:at] + "1" + text[at:])
    assert {f["fingerprint"] for f in json.loads(run("review", board, "--format", "json")[1])["findings"]} == before

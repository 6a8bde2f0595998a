"""Exit codes, streams and formats, as a user and a pipeline see them."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from typing import TYPE_CHECKING

import pytest

from gatecheck.registry import load_rules
from tests.circuits import netlist_text
from tests.test_hostile import BOARD, NETLIST, SAMPLES, run

if TYPE_CHECKING:
    from pathlib import Path

COMMAND = [sys.executable, "-m", "gatecheck"]
OPEN_BEAD = "(attr smd dnp)"


def with_open_bead(tmp_path: Path) -> Path:
    """The healthy sample with one gate's bead marked as not fitted."""
    text = BOARD.read_text()
    at = text.index('(property "Reference" "FB1"')
    attribute = text.index("(attr smd)", at)
    path = tmp_path / "open.kicad_pcb"
    path.write_text(text[:attribute] + OPEN_BEAD + text[attribute + len("(attr smd)") :])
    return path


def test_healthy_board_is_0_and_says_what_was_found() -> None:
    code, out, err = run("review", BOARD)
    assert (code, err) == (0, "")
    assert "2 switching gates" in out
    assert "0 errors  0 warnings" in out
    assert "lethal voltages" in out


def test_finding_at_the_blocking_level_is_1_and_below_it_0(tmp_path: Path) -> None:
    path = with_open_bead(tmp_path)
    code, out, _ = run("review", path)
    assert code == 1
    assert "open-series-part" in out
    assert "FB1 at " in out
    assert "open.kicad_pcb:" in out
    beadless = tmp_path / "beadless.net"
    beadless.write_text(
        NETLIST.read_text()
        .replace('(value "60R@100MHz 3A")', '(value "0R")')
        .replace("Ferrite_Bead", "R")
        .replace("FB", "R9")
    )
    assert run("review", beadless)[0] == 0
    # A missing bead is undecided while its need is not computed, and undecided never blocks.
    assert run("review", beadless, "--block-at", "note")[0] == 0


def test_quiet_says_nothing_when_all_is_well_and_only_fails_otherwise(tmp_path: Path) -> None:
    assert run("review", BOARD, "--quiet") == (0, "", "")
    code, out, _ = run("review", with_open_bead(tmp_path), "--quiet")
    assert code == 1
    assert out.startswith("error ")


@pytest.mark.parametrize(
    "arguments", [[], ["review"], ["check", "x"], ["review", str(BOARD), "--format", "xml"], ["rules", "series-bed"]]
)
def test_wrong_use_is_2_and_names_the_way_out(arguments: list[str]) -> None:
    done = subprocess.run([*COMMAND, *arguments], capture_output=True, text=True, check=False)
    assert done.returncode == 2
    assert done.stdout == ""
    assert "usage" in done.stderr or "did you mean series-bead" in done.stderr


def test_board_without_transistors_is_a_finished_review(tmp_path: Path) -> None:
    path = tmp_path / "plain.net"
    path.write_text(
        '(export (version "E") (components (comp (ref "R1") (value "1k"))) (nets (net (name "A") (node (ref "R1") (pin "1")))))'
    )
    code, out, _ = run("review", path)
    assert (code, "no switching gates" in out) == (0, True)


def test_a_fault_of_ours_is_4_without_a_trace_unless_asked(monkeypatch: pytest.MonkeyPatch) -> None:
    from gatecheck import review

    def broken(*_: object, **__: object) -> None:
        raise KeyError("inside")

    monkeypatch.setattr(review, "find_networks", broken)
    code, out, err = run("review", BOARD)
    assert (code, out) == (4, "")
    assert "a fault of gatecheck itself: KeyError" in err
    assert "Traceback" not in err
    assert "Traceback" in run("review", BOARD, "-v")[2]


def test_a_broken_rule_is_a_fault_not_a_clean_result(monkeypatch: pytest.MonkeyPatch) -> None:
    import dataclasses

    from gatecheck import registry

    def broken(_: object) -> object:
        raise ZeroDivisionError

    rules = tuple(dataclasses.replace(rule, check=broken) for rule in registry.load_rules())  # type: ignore[arg-type]
    monkeypatch.setattr(registry, "load_rules", lambda: rules)
    code, _, err = run("review", BOARD)
    assert (code, "the rule bead-current failed" in err) == (4, True)


def test_output_file_is_whole_and_stdout_stays_empty(tmp_path: Path) -> None:
    target = tmp_path / "report.json"
    code, out, _ = run("review", BOARD, "--format", "json", "--output", target)
    assert (code, out) == (0, "")
    assert json.loads(target.read_text())["schema"] == "gatecheck.report/1"
    assert list(tmp_path.iterdir()) == [target]
    assert run("review", BOARD, "--output", tmp_path / "no" / "x")[0] == 2


def test_color_only_for_eyes(monkeypatch: pytest.MonkeyPatch) -> None:
    assert "\x1b[" not in run("review", BOARD)[1], "not a terminal"
    assert "\x1b[" in run("review", BOARD, "--color", "always")[1]
    monkeypatch.setenv("NO_COLOR", "1")
    assert "\x1b[" not in run("review", BOARD, "--color", "auto")[1]


def test_color_changes_no_words() -> None:
    import re

    plain, colored = run("review", BOARD)[1], run("review", BOARD, "--color", "always")[1]
    bare = re.sub(r"\x1b\[[0-9;]*m", "", colored)
    assert [line.rstrip() for line in bare.splitlines()] == plain.splitlines()


def test_closed_pipe_ends_quietly() -> None:
    done = subprocess.run(
        ["bash", "-c", f"{sys.executable} -m gatecheck nets {BOARD} --format json | head -c 10"],
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.stderr == ""


def test_narrow_encodings_get_escapes_instead_of_an_end() -> None:
    environment = {**os.environ, "PYTHONIOENCODING": "ascii"}
    done = subprocess.run([*COMMAND, "gates", BOARD], capture_output=True, env=environment, check=False)
    assert done.returncode == 0


def test_output_is_the_same_to_the_byte_under_any_hash_seed() -> None:
    outputs = {
        subprocess.run(
            [*COMMAND, "review", SAMPLES, "--format", form],
            capture_output=True,
            env={**os.environ, "PYTHONHASHSEED": seed},
            check=False,
        ).stdout
        for form in ("terminal", "json")
        for seed in ("0", "1", "2")
    }
    assert len(outputs) == 2


def test_folder_is_reviewed_project_by_project_each_once() -> None:
    report = json.loads(run("review", SAMPLES, BOARD, NETLIST, "--format", "json")[1])
    paths = [entry["path"] for entry in report["inputs"]]
    assert len(paths) == len(set(paths))
    assert [p for p in paths if p.endswith(".net")] == []
    assert str(BOARD) in paths
    assert any("beside it" in entry["reason"] for entry in report["not_judged"])


def test_a_netlist_named_alone_is_read_itself() -> None:
    report = json.loads(run("review", NETLIST, "--format", "json")[1])
    assert [entry["kind"] for entry in report["inputs"]] == ["netlist", "settings"]


def test_a_project_file_stands_for_the_designs_of_its_folder() -> None:
    report = json.loads(run("review", SAMPLES / "half_bridge" / "gatecheck.yaml", "--format", "json")[1])
    assert [entry["kind"] for entry in report["inputs"]] == ["board", "schematic", "settings"]


def test_a_report_is_never_written_over_a_design(tmp_path: Path) -> None:
    board = tmp_path / "b.kicad_pcb"
    board.write_bytes(BOARD.read_bytes())
    code, out, err = run("review", board, "--output", board)
    assert (code, out, "never written over a design" in err) == (2, "", True)
    assert board.read_bytes() == BOARD.read_bytes()


def test_output_follows_links_and_writes_into_pipes(tmp_path: Path) -> None:
    target, link = tmp_path / "real.txt", tmp_path / "link.txt"
    target.write_text("old")
    link.symlink_to(target)
    assert run("review", BOARD, "--output", link)[0] == 0
    assert link.is_symlink()
    assert "switching gates" in target.read_text()


def test_the_same_board_by_three_spellings_is_reviewed_once() -> None:
    spellings = [BOARD, BOARD.resolve(), BOARD.parent / ".." / BOARD.parent.name / BOARD.name]
    report = json.loads(run("review", *spellings, "--format", "json")[1])
    assert [entry["kind"] for entry in report["inputs"]] == ["board", "schematic", "settings"]


@pytest.mark.parametrize("other", ["half_bridge.missing", "half_bridge.txt", "gone.net"])
def test_a_named_file_is_never_dropped_in_silence(tmp_path: Path, other: str) -> None:
    board = tmp_path / "half_bridge.kicad_pcb"
    board.write_bytes(BOARD.read_bytes())
    (tmp_path / "half_bridge.txt").write_text("no design")
    assert run("review", board, tmp_path / other)[0] == 3
    assert run("review", tmp_path / other, board)[0] == 3


def test_a_foreign_netlist_in_a_folder_is_no_failure(tmp_path: Path) -> None:
    (tmp_path / "half_bridge.kicad_pcb").write_bytes(BOARD.read_bytes())
    (tmp_path / "spice.net").write_text("* source spice\nR1 a b 1\n")
    code, out, _ = run("review", tmp_path, "--format", "json")
    assert code == 0
    assert any("spice.net" in entry["subject"] for entry in json.loads(out)["not_judged"])
    assert run("review", tmp_path / "spice.net")[0] == 3


def test_a_legacy_schematic_beside_a_board_is_a_line_and_alone_an_error(tmp_path: Path) -> None:
    (tmp_path / "half_bridge.kicad_pcb").write_bytes(BOARD.read_bytes())
    (tmp_path / "half_bridge.sch").write_text("EESchema Schematic File Version 4\n")
    code, out, _ = run("review", tmp_path / "half_bridge.kicad_pcb", "--format", "json")
    assert code == 0
    assert any("legacy" in entry["reason"] for entry in json.loads(out)["not_judged"])
    assert run("review", tmp_path / "half_bridge.sch")[0] == 3


def test_a_closed_pipe_changes_no_outcome(tmp_path: Path) -> None:
    path = with_open_bead(tmp_path)
    script = f"set -o pipefail; {sys.executable} -m gatecheck review {path} --format json | head -c 10"
    done = subprocess.run(["bash", "-c", script], capture_output=True, check=False)
    assert done.returncode == 1


def test_a_full_disk_is_said() -> None:
    done = subprocess.run(
        ["bash", "-c", f"{sys.executable} -m gatecheck review {BOARD} > /dev/full"],
        capture_output=True,
        text=True,
        check=False,
    )
    assert (done.returncode, "cannot be written to" in done.stderr) == (2, True)


def test_transistors_that_cannot_be_told_are_said(tmp_path: Path) -> None:
    path = tmp_path / "unclear.net"
    path.write_text(netlist_text("Q1 NMOS G=g D=d S=s\nU1 chip XX=o YY=y\nR1 10 o g"))
    (entry,) = json.loads(run("review", path, "--format", "json")[1])["not_judged"]
    assert "Q1" in entry["reason"]
    assert "Role" in entry["needs"]


def test_a_sheet_leads_to_the_board_beside_it(tmp_path: Path) -> None:
    (tmp_path / "x.kicad_pcb").write_bytes(BOARD.read_bytes())
    (tmp_path / "x.kicad_sch").write_text("(kicad_sch)")
    report = json.loads(run("review", tmp_path / "x.kicad_sch", "--format", "json")[1])
    assert [entry["kind"] for entry in report["inputs"]] == ["board"]


def test_rules_are_listed_and_explained() -> None:
    code, out, _ = run("rules")
    assert code == 0
    assert [line.split()[0] for line in out.splitlines()] == [rule.id for rule in load_rules()]
    _, out, _ = run("rules", "series-bead")
    assert "common practice" in out
    rules = json.loads(run("rules", "--format", "json")[1])["rules"]
    assert all(rule["reason"] and rule["limits"] and rule["sources"] for rule in rules)


def test_help_and_version_name_every_verb() -> None:
    done = subprocess.run([*COMMAND, "--help"], capture_output=True, text=True, check=True)
    assert all(verb in done.stdout for verb in ("review", "gates", "nets", "rules"))
    assert subprocess.run([*COMMAND, "--version"], capture_output=True, text=True, check=True).stdout.startswith(
        "gatecheck "
    )

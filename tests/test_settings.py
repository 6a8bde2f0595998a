"""gatecheck.yaml: all mistakes at once, each with its line; quantities are text with units."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gatecheck.settings import BeadData, Limits, Settings, SettingsError, read_settings
from tests.test_hostile import BOARD, run

if TYPE_CHECKING:
    from pathlib import Path

WHOLE = """
block_at: warning
bead_policy: always
drive: {voltage: 15 V, peak_current: 500 mA}
limits:
  bead_distance: 200 mil
  loop_area: 0.4 cm2
  bead_current_margin: 1.5
beads:
  FB1 FB2: {rated_current: 2 A, impedance: 60 ohm @ 100 MHz}
  60R@100MHz 3A: {rated_current: 3 A}
"""


def mistakes(text: str) -> list[tuple[int, str, str]]:
    with pytest.raises(SettingsError) as caught:
        read_settings("gatecheck.yaml", text)
    return [(m.line, m.message, m.next_step) for m in caught.value.mistakes]


def test_a_whole_file() -> None:
    said = read_settings("gatecheck.yaml", WHOLE)
    assert (said.block_at, said.bead_policy, said.policy_stated) == ("warning", "always", True)
    assert (said.drive_voltage_v, said.peak_current_a) == (15.0, 0.5)
    assert said.limits == Limits(200 * 25.4e-6, 0.4 * 1e-4, 1.5)
    assert said.beads["FB2"] == BeadData(2.0, 60.0)
    assert said.beads["60R@100MHz 3A"].rated_current_a == 3.0


@pytest.mark.parametrize("text", ["", "# nothing\n", "---\n"])
def test_an_empty_file_says_nothing(text: str) -> None:
    assert read_settings("gatecheck.yaml", text) == Settings(path="gatecheck.yaml")


def test_all_mistakes_at_once_with_lines_and_nearest_keys() -> None:
    found = mistakes(
        "block_at: loud\nlimts: {}\nlimits:\n  bead_distance: 5\n  loop_area: big\n  bead_distanse: 5 mm\n"
    )
    assert [line for line, _, _ in found] == [1, 2, 4, 5, 6]
    assert "did you mean 'limits'?" in found[1][2]
    assert "as in `5 mm`" in found[2][2]
    assert "did you mean 'bead_distance'?" in found[4][2]


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("block_at: note\nblock_at: error\n", "a second time"),
        ("a: &x 1\nb: *x\n", "anchors"),
        ("drive: [1, 2]\n", "keys with values"),
        ("drive: {voltage: [1]}\n", "no voltage"),
        ("drive: {voltage: -5 V}\n", "no voltage"),
        ("drive: {voltage: 1e99 V}\n", "no voltage"),
        ("drive: {voltage: 5 A}\n", "no voltage"),
        ("beads: {FB1: {impedance: 60 ohm @ 50 MHz}}\n", "no resistance"),
        ("limits: {bead_distance: yes}\n", "no length"),
        ("limits: !!python/object:os.system {}\n", "tags"),
        ("drive:\n\tvoltage: 5 V\n", "not readable as YAML"),
        ("a: b: c\n", "not readable as YAML"),
        ("- a\n- b\n", "keys with values"),
        ("[" * 2000, "not readable"),
    ],
)
def test_mistakes_are_named(text: str, message: str) -> None:
    assert any(message in said for _, said, _ in mistakes(text))


@settings(max_examples=200, deadline=None)
@given(st.text(max_size=80))
def test_any_text_is_settings_or_a_settings_error(text: str) -> None:
    try:
        said = read_settings("gatecheck.yaml", text)
    except SettingsError as why:
        said = None
        count = len(why.mistakes)
    assert said is not None or count > 0


def test_the_command_says_all_and_ends_in_2(tmp_path: Path) -> None:
    board = tmp_path / "half_bridge.kicad_pcb"
    board.write_bytes(BOARD.read_bytes())
    (tmp_path / "gatecheck.yaml").write_text("limits:\n  bead_distanse: 5 mm\nblock_at: loud\n")
    code, out, err = run("review", board)
    assert (code, out) == (2, "")
    assert "gatecheck.yaml:2:3: unknown key 'bead_distanse'" in err
    assert "gatecheck.yaml:3:11: 'loud' is no choice here" in err


def test_the_file_of_the_repository_counts_for_a_board_farther_down(tmp_path: Path) -> None:
    (tmp_path / ".git").mkdir()
    (tmp_path / "gatecheck.yaml").write_text("bead_policy: never\n")
    board = tmp_path / "hardware" / "rev2" / "half_bridge.kicad_pcb"
    board.parent.mkdir(parents=True)
    board.write_bytes(BOARD.read_bytes())
    assert run("review", board)[0] == 1
    (board.parent / "gatecheck.yaml").write_text("bead_policy: always\n")
    assert run("review", board)[0] == 0, "the nearest file counts alone"


def test_a_file_above_is_no_business_of_a_board_outside_a_repository(tmp_path: Path) -> None:
    (tmp_path / "gatecheck.yaml").write_text("bead_policy: never\n")
    board = tmp_path / "sub" / "half_bridge.kicad_pcb"
    board.parent.mkdir()
    board.write_bytes(BOARD.read_bytes())
    assert run("review", board)[0] == 0


def test_the_command_line_overrides_the_blocking_level(tmp_path: Path) -> None:
    board = tmp_path / "half_bridge.kicad_pcb"
    board.write_bytes(BOARD.read_bytes())
    (tmp_path / "gatecheck.yaml").write_text("block_at: note\n")
    assert run("review", board)[0] == 1
    assert run("review", board, "--block-at", "warning")[0] == 0

"""The README shows what the tool really prints, and its commands are the ones that CI runs."""

from __future__ import annotations

import re
from pathlib import Path

from tests.test_hostile import run

ROOT = Path(__file__).parent.parent
README = (ROOT / "README.md").read_text()


def test_pasted_review_is_a_real_one() -> None:
    code, out, _ = run("review", "sample_boards/half_bridge")
    assert code == 0
    assert out.rstrip() in README


def test_pasted_evidence_is_real() -> None:
    shown = re.search(r"\$ gatecheck gates sample_boards/logic\n(.*?)\n```", README, re.DOTALL)
    assert shown is not None
    assert shown[1] in run("gates", "sample_boards/logic")[1]


def test_rule_table_is_complete() -> None:
    rows = [tuple(line.split(maxsplit=1)) for line in run("rules")[1].splitlines()]
    assert re.findall(r"^\| `([\w-]+)` \| (.+) \|$", README, re.MULTILINE) == rows


def test_first_paragraph_states_the_job() -> None:
    first = README.split("\n\n")[1]
    assert all(word in first for word in ("gate", "damped", "bead", "review"))


def test_nothing_says_to_install_from_an_index() -> None:
    for name in ("README.md", "DEVELOPERS.md"):
        assert not re.search(r"pip install (?:-\w+ )*gatecheck", (ROOT / name).read_text())

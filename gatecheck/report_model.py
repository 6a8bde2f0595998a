"""The Report: all a review found out, with what it could not judge or read."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.finding import WEAK_ORIGINS, Finding, Level, Verdict, at_least

if TYPE_CHECKING:
    from gatecheck.networks.find import Networks


@dataclass(frozen=True, slots=True)
class NotJudged:
    """Something a review would look at and could not, with the reason and what it needs."""

    rule: str | None
    subject: str
    reason: str
    needs: str


@dataclass(frozen=True, slots=True)
class Unread:
    """A file, or a form in it, that could not be read."""

    path: str
    line: int
    column: int
    message: str
    next_step: str
    excerpt: str = ""


@dataclass(frozen=True, slots=True)
class InputFile:
    """A file that was read."""

    path: str
    kind: str
    sha256: str


@dataclass(frozen=True, slots=True)
class Report:
    """All a review found out, ready to be written in any format.

    `networks` holds one entry per design that was read, in the order of `inputs`.
    """

    inputs: tuple[InputFile, ...]
    networks: tuple[Networks, ...]
    findings: tuple[Finding, ...]
    not_judged: tuple[NotJudged, ...]
    unread: tuple[Unread, ...]

    def count(self, verdict: Verdict, *, level: Level | None = None, weak: bool | None = None) -> int:
        """How many findings have this verdict, of one level, or resting on weak origins or not."""
        return sum(
            finding.verdict is verdict
            and (level is None or finding.level is level)
            and (weak is None or (finding.rests_on in WEAK_ORIGINS) is weak)
            for finding in self.findings
        )

    def blocks(self, level: Level) -> bool:
        """Does any fail reach the blocking level?"""
        return any(f.verdict is Verdict.FAIL and at_least(f.level, level) for f in self.findings)

"""The Report: all a review found out, with what it could not judge or read."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.finding import WEAK_ORIGINS, Finding, Level, Quantity, Verdict

if TYPE_CHECKING:
    from collections.abc import Mapping

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
class Reviewed:
    """One design: its networks, and the quantities of each gate by its transistor's part and unit."""

    networks: Networks
    quantities: Mapping[tuple[str, str | None], Mapping[str, Quantity]]


@dataclass(frozen=True, slots=True)
class Report:
    """All a review found out, ready to be written in any format.

    `blocked` says that a fail reached the blocking level of its project or of the command line.
    """

    inputs: tuple[InputFile, ...]
    designs: tuple[Reviewed, ...]
    findings: tuple[Finding, ...]
    not_judged: tuple[NotJudged, ...]
    unread: tuple[Unread, ...]
    blocked: bool = False

    def count(self, verdict: Verdict, *, level: Level | None = None, weak: bool | None = None) -> int:
        """How many findings have this verdict, of one level, or resting on weak origins or not."""
        return sum(
            finding.verdict is verdict
            and (level is None or finding.level is level)
            and (weak is None or (finding.rests_on in WEAK_ORIGINS) is weak)
            for finding in self.findings
        )

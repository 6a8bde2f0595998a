"""What a rule says of a design: findings with verdict, level, places and limit."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass
from enum import StrEnum


class Verdict(StrEnum):
    """The outcome of a rule on one subject."""

    FAIL = "fail"
    UNDECIDED = "undecided"
    PASS = "pass"  # noqa: S105 (no password)
    NOT_APPLICABLE = "not-applicable"


class Level(StrEnum):
    """How much a fail weighs, in the words of SARIF 2.1.0; every other verdict has level none."""

    ERROR = "error"
    WARNING = "warning"
    NOTE = "note"
    NONE = "none"


class Origin(StrEnum):
    """Where an input, a limit or a role comes from, from most to least trusted."""

    MEASURED = "measured"
    PROJECT = "project"
    FIELD = "field"
    MODEL = "model"
    GEOMETRY = "geometry"
    VALUE = "value"
    DESCRIPTION = "description"
    CATALOGUE = "catalogue"
    ASSUMED = "assumed"


# A fail that rests on one of these is a warning at most, and a pass on them is a screening pass.
WEAK_ORIGINS = frozenset({Origin.CATALOGUE, Origin.ASSUMED})
_LEVELS = (Level.NONE, Level.NOTE, Level.WARNING, Level.ERROR)


def least_trusted(*origins: Origin) -> Origin:
    """The origin a verdict rests on."""
    return max(origins, key=list(Origin).index)


def at_least(level: Level, other: Level) -> bool:
    """Is a level as grave as the other, or graver?"""
    return _LEVELS.index(level) >= _LEVELS.index(other)


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number with its interval, in the engineering unit of the report, and where it came from."""

    low: float
    nominal: float
    high: float
    unit: str
    origin: Origin


@dataclass(frozen=True, slots=True)
class Limit:
    """The bound a quantity is held against."""

    unit: str
    origin: str
    minimum: float | None = None
    maximum: float | None = None


@dataclass(frozen=True, slots=True)
class Ask:
    """The one datum that would settle an undecided verdict."""

    part: str
    datum: str
    unit: str


@dataclass(frozen=True, slots=True)
class Spot:
    """A place to look at: in the file, and on the board where there is one."""

    file: str
    line: int
    column: int
    part: str
    pad: str | None = None
    x_mm: float | None = None
    y_mm: float | None = None
    layer: str | None = None


@dataclass(frozen=True, slots=True)
class Finding:
    """One verdict of one rule on one subject; `also` are subjects of repeated channels it holds for too."""

    rule: str
    verdict: Verdict
    level: Level
    subject: str
    message: str
    rests_on: Origin
    fingerprint: str
    also: tuple[str, ...] = ()
    edge: str | None = None
    quantity: str | None = None
    value: Quantity | None = None
    limit: Limit | None = None
    ask: tuple[Ask, ...] = ()
    places: tuple[Spot, ...] = ()
    advice: str = ""


def fingerprint(*identity: str) -> str:
    """A short stable name for a finding: from rule and part identity, never from lines or coordinates."""
    return hashlib.sha256("\x1f".join(identity).encode("utf-8", errors="replace")).hexdigest()[:20]

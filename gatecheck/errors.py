"""The error family: whatever goes wrong with an input, settings or a rule ends in one of these.

Each says what is wrong, where, and what to do next. Nothing else may leave the package: a parser that
lets a KeyError or a RecursionError through has a defect.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass
class GatecheckError(Exception):
    """Anything gatecheck refuses; `message` says what is wrong, `next_step` what to do about it."""

    message: str
    next_step: str = ""

    def __str__(self) -> str:
        return self.message


@dataclass
class UsageError(GatecheckError):
    """The command was called with something it cannot act on (exit code 2)."""


@dataclass
class InputError(GatecheckError):
    """A file, or a form in it, cannot be read (exit code 3).

    `line` and `column` count from 1 and are 0 when the trouble has no place in the text. `excerpt` is the
    piece of the file the place points at, as it stands there.
    """

    path: str = ""
    line: int = 0
    column: int = 0
    excerpt: str = ""


@dataclass
class RuleError(GatecheckError):
    """A rule module cannot be used: our own fault, never the user's (exit code 4)."""

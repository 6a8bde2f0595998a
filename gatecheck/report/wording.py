"""Words that every format shares: cautions, safe text, and the summary's counts."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from gatecheck.finding import Level, Verdict

if TYPE_CHECKING:
    from gatecheck.report_model import Report

CAUTIONS = (
    "Estimates for a design review, no proof that a circuit is safe, compliant or fit for use.",
    "Gate drives sit beside lethal voltages and stored energy: discharge and measure before touching.",
    "Follow local codes and licensed practice.",
    "A passed check cannot exclude that a stage is destroyed: verify both edges at low, current-limited bus voltage.",
    "Not checked: insulation, creepage, fusing, heat, short-circuit protection, functional safety, EMC.",
)
SHORT_CAUTION = (
    "Estimates, no proof of safety: gate drives sit beside lethal voltages. Verify at low bus voltage; "
    "follow local codes and licensed practice."
)

# Control characters, and those that reorder text on a terminal, come from hostile names only.
_UNSAFE = re.compile("[\x00-\x1f\x7f-\x9f\u00ad\u061c\u200b-\u200f\u2028-\u202e\u2060-\u2069\ufeff\ufff9-\ufffb]")
_LONGEST = 200


def safe(text: str) -> str:
    """Text from a design file as it may be shown: control characters written out, length bounded."""
    shown = _UNSAFE.sub(lambda match: f"\\u{ord(match.group()):04x}", text)
    return shown if len(shown) <= _LONGEST else shown[: _LONGEST - 3] + "..."


def summary(report: Report) -> dict[str, int]:
    """How many findings of each sort there are."""
    return {
        "error": report.count(Verdict.FAIL, level=Level.ERROR),
        "warning": report.count(Verdict.FAIL, level=Level.WARNING),
        "note": report.count(Verdict.FAIL, level=Level.NOTE),
        "undecided": report.count(Verdict.UNDECIDED),
        "pass": report.count(Verdict.PASS),
        "screening_pass": report.count(Verdict.PASS, weak=True),
        "not_judged": len(report.not_judged),
    }


def counted(number: int, noun: str) -> str:
    """`1 error`, `2 errors`."""
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"

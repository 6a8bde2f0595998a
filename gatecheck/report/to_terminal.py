"""Report to lines for a terminal. Markup is never interpreted: nets are called `D[0]` and `[/GATE]`.

Lines are made of styled pieces first, so that colour can be added or left out without touching the words.
"""

from __future__ import annotations

from collections import Counter
from io import StringIO
from typing import TYPE_CHECKING

from gatecheck.finding import Level, Verdict
from gatecheck.networks.surroundings import name_of
from gatecheck.report.chain import alike, chain, listed, names, shunts
from gatecheck.report.wording import SHORT_CAUTION, counted, safe, summary

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from gatecheck.finding import Finding, Limit, Quantity, Spot
    from gatecheck.networks.find import Networks
    from gatecheck.report_model import Report
    from gatecheck.rulekit import Rule

# (text, style); styles are rich's.
_Piece = tuple[str, str]
_Line = list[_Piece]
_STYLES = {Level.ERROR: "bold magenta", Level.WARNING: "yellow", Level.NOTE: "cyan", Level.NONE: "blue"}
_INDENT = "  "
_MAX_PLACES = 6


def report_text(report: Report, *, color: bool, quiet: bool) -> str:
    """A whole review: what was found, what to act on, what one number would settle, one closing line.

    `quiet` leaves fails only, and nothing at all where there are none.
    """
    acting = [finding for finding in report.findings if finding.verdict in (Verdict.FAIL, Verdict.UNDECIDED)]
    if quiet:
        acting = [finding for finding in acting if finding.verdict is Verdict.FAIL]
        lines = [line for finding in _worst_first(acting) for line in _finding(finding)]
        return _rendered(lines, color=color)
    lines = []
    for design in report.designs:
        lines += _networks(design.networks)
    for finding in _worst_first(acting):
        lines += _finding(finding)
    if acting:
        lines.append([])
    reasons: dict[str, list[str]] = {}
    for entry in report.not_judged:
        reasons.setdefault(entry.reason, []).append(safe(entry.subject))
    for reason, subjects in reasons.items():
        who = subjects[0] if len(subjects) == 1 else f"{len(subjects)} designs"
        lines.append([("not judged ", "dim"), (f"{who}: {safe(reason)}", "")])
    if report.not_judged:
        lines.append([])
    if report.inputs:
        lines += [[(_closing(report), "bold")], [(SHORT_CAUTION, "dim")]]
    return _rendered(lines, color=color)


def gates_text(report: Report, *, color: bool) -> str:
    """The gate networks and every transistor's role with its evidence."""
    lines: list[_Line] = []
    for networks in (design.networks for design in report.designs):
        lines += _networks(networks)
        for switch in networks.switches:
            name = safe(name_of(switch.transistor.key))
            role = f"likely {switch.role}" if switch.likely else switch.role
            lines.append([(f"{name}  ", "bold"), (f"{role}  ", ""), (f"score {switch.score:+g}", "dim")])
            lines += [[(f"{_INDENT}{entry.weight:+5g}  {safe(entry.text)}", "")] for entry in switch.evidence]
        lines.append([])
    return _rendered(lines, color=color)


def nets_text(source: str, nets: Mapping[str, Iterable[tuple[str, str]]], *, color: bool) -> str:
    """The connectivity of one file, a net per line."""
    lines: list[_Line] = [[(safe(source), "bold")]]
    for name, pins in nets.items():
        members = " ".join(f"{safe(reference)}.{safe(pin)}" for reference, pin in pins)
        lines.append([(f"{_INDENT}{safe(name)}", "cyan"), (f"  {members}", "")])
    return _rendered(lines, color=color)


def rules_text(rules: Iterable[Rule], *, color: bool, whole: bool) -> str:
    """The rules, a line each, or one rule with its reason, limits and sources."""
    lines: list[_Line] = []
    for rule in rules:
        lines.append([(f"{rule.id:<18}", "bold"), (rule.title, "")])
        if whole:
            lines += [[], [(rule.reason, "")], [], [("quantity  ", "dim"), (rule.quantity, "")]]
            lines += [[("limit     ", "dim"), (limit, "")] for limit in rule.limits]
            lines += [[("source    ", "dim"), (source, "")] for source in rule.sources]
    return _rendered(lines, color=color)


def _networks(networks: Networks) -> list[_Line]:
    switching = [s for s in networks.switches if s.role == "switching"]
    others = len(networks.switches) - len(switching)
    groups = alike(networks)
    head = (
        f"{counted(len(switching), 'switching gate')} in {counted(len(groups), 'sort')} of network"
        if switching
        else "no switching gates"
    )
    left = f"   {counted(others, 'other transistor')} left alone (`gatecheck gates` says why)" if others else ""
    lines: list[_Line] = [[(safe(networks.design.source), "bold"), (f"   {head}{left}", "")], []]
    roles = {s.transistor.key: s for s in switching}
    width = max((len(names(group)) for group in groups), default=0)
    for group in groups:
        first = group[0]
        likely = " (likely)" if roles[first.transistor.key].likely else ""
        for i, text in enumerate(chain(networks, first)):
            label = names(group) if i == 0 else ""
            lines.append([(f"{_INDENT}{label:<{width}}   ", "bold"), (text + (likely if i == 0 else ""), "")])
        extra = "; ".join(filter(None, (shunts(networks, first), _company(first.parallel_with, first.alternates))))
        if extra:
            lines.append([(f"{_INDENT}{'':<{width}}   {extra}", "dim")])
    if groups:
        lines.append([])
    return lines


def _company(parallel: Iterable[tuple[str, str | None]], alternates: Iterable[tuple[str, str | None]]) -> str:
    said = []
    count = len(tuple(parallel)) + 1
    if count > 1:
        said.append(f"{count} switches in parallel")
    places = " ".join(safe(name_of(key)) for key in alternates)
    if places:
        said.append(f"in the place of {places}")
    return ", ".join(said)


def _worst_first(findings: Iterable[Finding]) -> list[Finding]:
    order = (Level.ERROR, Level.WARNING, Level.NOTE, Level.NONE)
    return sorted(findings, key=lambda finding: order.index(finding.level))


def _finding(finding: Finding) -> list[_Line]:
    word = finding.level.value if finding.verdict is Verdict.FAIL else finding.verdict.value
    subjects = listed([safe(name) for name in (finding.subject, *finding.also)])
    edge = f", {finding.edge} edge" if finding.edge else ""
    style = _STYLES[finding.level]
    lines: list[_Line] = [
        [
            (f"{word:<10} ", style),
            (f"{finding.rule:<17} ", ""),
            (f"{subjects}{edge}: {safe(finding.message)}", ""),
        ]
    ]
    pad = " " * 29
    if finding.value is not None and finding.limit is not None:
        lines.append([(f"{pad}{_measure(finding.value, finding.limit)}", "")])
    if finding.verdict is Verdict.FAIL:
        lines += [[(pad + _place(place), "dim")] for place in finding.places[:_MAX_PLACES]]
    if finding.ask:
        wanted: dict[str, list[str]] = {}
        for ask in finding.ask:
            wanted.setdefault(ask.datum.replace("_", " "), []).append(safe(ask.part))
        said = "; ".join(f"{datum} of {listed(parts)}" for datum, parts in wanted.items())
        lines.append([(f"{pad}would settle it: {said}", "dim")])
    if finding.advice:
        lines.append([(f"{pad}{finding.advice}", "")])
    return lines


def _measure(value: Quantity, limit: Limit) -> str:
    """`12.6 mm, at most 5 mm (common practice)`; an interval as `12 to 19 mm`."""
    unit = "" if value.unit == "1" else f" {value.unit}"
    span = f"{value.low:.3g}" if value.low == value.high else f"{value.low:.3g} to {value.high:.3g}"
    word, bound = ("at most", limit.maximum) if limit.maximum is not None else ("at least", limit.minimum)
    return f"{span}{unit}, {word} {bound:g}{unit} ({safe(limit.origin)})"


def _place(place: Spot) -> str:
    board = (
        ""
        if place.x_mm is None
        else f" at {place.x_mm:g}, {place.y_mm:g} mm {'bottom' if place.layer == 'B.Cu' else 'top'}"
    )
    return f"{safe(place.part)}{board}  ({safe(place.file)}:{place.line}:{place.column})"


def _closing(report: Report) -> str:
    counts = Counter(summary(report))
    passed = f"{counts['pass']} passed" + (
        f", {counts['screening_pass']} of them by screening" if counts["screening_pass"] else ""
    )
    levels = [
        counted(counts[level], level) for level in ("error", "warning", "note") if counts[level] or level != "note"
    ]
    return "  ".join([*levels, f"{counts['undecided']} undecided", passed])


def _rendered(lines: Iterable[_Line], *, color: bool) -> str:
    """Lines to text. Without colour no terminal library is needed, or loaded."""
    if not color:
        return "".join("".join(text for text, _ in line).rstrip() + "\n" for line in lines)
    from rich.console import Console  # noqa: PLC0415 (50 ms that piped output need not pay)
    from rich.text import Text  # noqa: PLC0415 (the same)

    target = StringIO()
    console = Console(
        file=target, force_terminal=True, color_system="standard", markup=False, highlight=False, emoji=False
    )
    for line in lines:
        console.print(Text.assemble(*line), soft_wrap=True)
    return target.getvalue()

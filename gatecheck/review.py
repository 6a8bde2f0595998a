"""The whole pipeline in one place: paths in, Report out."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from gatecheck.errors import GatecheckError, InputError
from gatecheck.files import shown_path
from gatecheck.finding import Finding, Spot
from gatecheck.load import Loaded, load_design
from gatecheck.networks.find import Networks, find_networks
from gatecheck.parse.project import Project, find_projects
from gatecheck.report_model import InputFile, NotJudged, Report, Unread

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable
    from pathlib import Path

# One bad form tells enough; a file of nothing else would fill the report.
_MAX_TROUBLES = 20


@dataclass(slots=True)
class _Gathered:
    inputs: list[InputFile] = field(default_factory=list)
    networks: list[Networks] = field(default_factory=list)
    findings: list[Finding] = field(default_factory=list)
    not_judged: list[NotJudged] = field(default_factory=list)
    unread: list[Unread] = field(default_factory=list)


def review(paths: Iterable[Path], *, with_rules: bool = True) -> Report:
    """Review the designs behind some paths.

    A file that cannot be read is in the report's `unread` and stops nothing else.
    """
    found = _Gathered()
    for project in _projects(paths, found):
        try:
            loaded = load_design(project.path)
        except InputError as why:
            found.unread.append(_unread(why))
            continue
        _review_one(loaded, project, found, with_rules=with_rules)
    return Report(
        tuple(found.inputs),
        tuple(found.networks),
        tuple(found.findings),
        tuple(found.not_judged),
        tuple(found.unread),
    )


def _projects(paths: Iterable[Path], found: _Gathered) -> list[Project]:
    """The projects of all paths that lead to one; the others go into `unread`."""
    good: list[Path] = []
    for path in paths:
        try:
            find_projects([path])
        except InputError as why:
            found.unread.append(_unread(why))
        else:
            good.append(path)
    return find_projects(good)


def _review_one(loaded: Loaded, project: Project, found: _Gathered, *, with_rules: bool) -> None:
    networks = find_networks(loaded.design)
    found.inputs.append(loaded.source)
    found.networks.append(networks)
    found.unread += [_unread(trouble) for trouble in loaded.troubles[:_MAX_TROUBLES]]
    left = len(loaded.troubles) - _MAX_TROUBLES
    if left > 0:
        found.unread.append(Unread(loaded.source.path, 0, 0, f"{left} more forms could not be read", ""))
    found.not_judged += [
        NotJudged(None, shown_path(path), reason, "give this file alone to review it")
        for path, reason in project.passed_over
    ]
    found.not_judged += [NotJudged(None, loaded.source.path, note, "") for note in loaded.document.notes]
    if not with_rules or not networks.gates:
        return
    found.findings += _apply_rules(networks, spot_finder(loaded))
    found.not_judged.append(
        NotJudged(
            None,
            loaded.source.path,
            "distances, loop areas and inductances are not measured",
            "a later version of gatecheck" if loaded.source.kind == "board" else "the board",
        )
    )


def _apply_rules(networks: Networks, spot: Callable[[str], Spot]) -> list[Finding]:
    from gatecheck.registry import load_rules  # noqa: PLC0415 (a board without gates needs no rules)
    from gatecheck.rulekit import Design, grouped  # noqa: PLC0415 (the same)

    design = Design(networks, spot)
    found: list[Finding] = []
    for rule in load_rules():
        try:
            found += grouped(design.finding(rule, say) for say in rule.check(design))
        except GatecheckError:
            raise
        except Exception as why:
            from gatecheck.errors import RuleError  # noqa: PLC0415 (only when a rule is broken)

            raise RuleError(f"the rule {rule.id} failed on {networks.design.source}: {why!r}") from why
    return found


def spot_finder(loaded: Loaded) -> Callable[[str], Spot]:
    """A function from a part's id to the place where it stands."""

    def spot(key: str) -> Spot:
        part = loaded.design.parts[key]
        line, column = loaded.document.place(part.place.offset)
        x_m, y_m = part.place.x_m, part.place.y_m
        return Spot(
            file=part.place.file,
            line=line,
            column=column,
            part=part.reference or part.id,
            x_mm=None if x_m is None else round(x_m * 1e3, 3),
            y_mm=None if y_m is None else round(y_m * 1e3, 3),
            layer=part.place.layer or None,
        )

    return spot


def _unread(why: InputError) -> Unread:
    return Unread(why.path, why.line, why.column, why.message, why.next_step, why.excerpt)

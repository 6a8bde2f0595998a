"""The whole pipeline in one place: paths in, Report out."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from gatecheck import rulekit
from gatecheck.errors import GatecheckError, InputError, RuleError
from gatecheck.files import shown_path
from gatecheck.finding import Finding, Level, Quantity, Spot, Verdict, at_least
from gatecheck.load import Loaded, load_project, load_settings
from gatecheck.networks.find import Networks, find_networks
from gatecheck.networks.surroundings import name_of
from gatecheck.parse.project import Project, find_projects
from gatecheck.report_model import InputFile, NotJudged, Report, Reviewed, Unread

if TYPE_CHECKING:
    from collections.abc import Callable, Iterable, Mapping
    from pathlib import Path

    from gatecheck.copper.chain import Chains
    from gatecheck.quantities import Missing
    from gatecheck.settings import Settings

# One bad form tells enough; a file of nothing else would fill the report.
_MAX_TROUBLES = 20


@dataclass(slots=True)
class _Gathered:
    inputs: list[InputFile] = field(default_factory=list)
    designs: list[Reviewed] = field(default_factory=list)
    findings: list[Finding] = field(default_factory=list)
    not_judged: list[NotJudged] = field(default_factory=list)
    unread: list[Unread] = field(default_factory=list)
    blocked: bool = False


def review(
    paths: Iterable[Path], *, with_rules: bool = True, block_at: Level | None = None, outside: bool = False
) -> Report:
    """Review the designs behind some paths.

    A file that cannot be read is in the report's `unread` and stops nothing else. `block_at` overrides the
    level that project files state; `outside` lets sheets lie outside the repository.

    Raises:
        SettingsError: if a project file has mistakes: nothing is judged by half of a project's word.
    """
    found = _Gathered()
    for project in _projects(paths, found):
        try:
            loaded = load_project(project, outside=outside)
            settings, settings_file = load_settings(project.path)
        except InputError as why:
            if project.named or project.path.suffix != ".net":
                found.unread.append(_unread(why))
            else:
                # Other programs write .net files as well; one that lies in a named folder is not our business.
                found.not_judged.append(NotJudged(None, why.path, why.message, "name the file to see why"))
            continue
        found.inputs += [file for file in (*loaded.sources, settings_file) if file and file not in found.inputs]
        new = _review_one(loaded, project, settings, found, with_rules=with_rules)
        level = block_at or Level(settings.block_at)
        found.blocked |= any(f.verdict is Verdict.FAIL and at_least(f.level, level) for f in new)
        found.findings += new
    return Report(
        tuple(found.inputs),
        tuple(found.designs),
        tuple(found.findings),
        tuple(found.not_judged),
        tuple(found.unread),
        blocked=found.blocked,
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


def _review_one(
    loaded: Loaded, project: Project, settings: Settings, found: _Gathered, *, with_rules: bool
) -> list[Finding]:
    networks = find_networks(loaded.design)
    path = loaded.source.path
    found.unread += [_unread(trouble) for trouble in loaded.troubles[:_MAX_TROUBLES]]
    left = len(loaded.troubles) - _MAX_TROUBLES
    if left > 0:
        found.unread.append(Unread(path, 0, 0, f"{left} more forms could not be read", ""))
    found.not_judged += [
        NotJudged(None, shown_path(other), reason, "give this file alone to review it")
        for other, reason in project.passed_over
    ]
    found.not_judged += [
        NotJudged(None, name, note, "") for name, document in loaded.documents.items() for note in document.notes
    ]
    if loaded.variants:
        names = " ".join(loaded.variants[:_MAX_TROUBLES])
        found.not_judged.append(NotJudged(None, path, f"variants {names}: the design without them is reviewed", ""))
    found.not_judged += _unclear(networks, path)
    chains = _chains(loaded, networks) if with_rules and networks.gates else None
    design = rulekit.Design(networks, spot_finder(loaded), settings, chains, loaded.out_of_step)
    findings = _apply_rules(design, path) if with_rules else []
    found.designs.append(Reviewed(networks, _quantities(design) if with_rules else {}))
    if chains is not None:
        found.unread += [_unread(trouble) for trouble in chains.copper.source.troubles[:_MAX_TROUBLES]]
    if with_rules:
        found.not_judged += _missing(design, path)
    return findings


def _unclear(networks: Networks, path: str) -> list[NotJudged]:
    """Transistors whose role the circuit does not tell: said, since a gate among them is not reviewed."""
    names = [name_of(switch.transistor.key) for switch in networks.switches if switch.role == "unclear"]
    if not names:
        return []
    reason = f"not clear whether {' '.join(names[:_MAX_TROUBLES])} switch or not (`gatecheck gates` shows the evidence)"
    return [NotJudged(None, path, reason, "a field Role with switch, static, linear or small-signal on the part")]


def _chains(loaded: Loaded, networks: Networks) -> Chains | None:
    """The copper of a board's gate networks, found in one search of the file."""
    if loaded.board is None:
        return None
    from gatecheck.copper.chain import Chains  # noqa: PLC0415 (boards with gates only)
    from gatecheck.copper.path import Copper  # noqa: PLC0415 (the same)
    from gatecheck.copper.source import CopperSource  # noqa: PLC0415 (the same)

    source = CopperSource(loaded.board)
    nets: set[str] = set()
    for gate in networks.gates:
        transistor = gate.transistor
        nets |= {transistor.gate_net, transistor.source_net, transistor.kelvin_net, gate.return_net}
        nets |= {net for edge in (gate.on, gate.off) for step in edge.steps for net in (step.near, step.far)}
        nets |= {drive.net for drive in gate.drives}
    source.expect(nets)
    return Chains(Copper(loaded.design, source), networks.circuit)


def _quantities(design: rulekit.Design) -> dict[tuple[str, str | None], Mapping[str, Quantity]]:
    return {gate.network.transistor.key: gate.quantities.all() for gate in design.gates}


def _missing(design: rulekit.Design, path: str) -> list[NotJudged]:
    """What could not be had, said once for all gates it holds for."""
    grouped: dict[tuple[str, Missing], list[str]] = {}
    for gate in design.gates:
        for name, missing in gate.quantities.missing.items():
            grouped.setdefault((name, missing), []).append(gate.name)
    by_reason: dict[tuple[Missing, tuple[str, ...]], list[str]] = {}
    for (name, missing), gates in grouped.items():
        by_reason.setdefault((missing, tuple(gates)), []).append(name)
    return [
        NotJudged(None, f"{path} {' '.join(gates)}", f"{', '.join(names)}: {missing.reason}", missing.needs)
        for (missing, gates), names in by_reason.items()
    ]


def _apply_rules(design: rulekit.Design, path: str) -> list[Finding]:
    from gatecheck.registry import load_rules  # noqa: PLC0415 (a board without gates needs no rules)

    found: list[Finding] = []
    for rule in load_rules() if design.gates else ():
        try:
            found += rulekit.grouped(design.finding(rule, say) for say in rule.check(design))
        except GatecheckError:
            raise
        except Exception as why:
            raise RuleError(f"the rule {rule.id} failed on {path}: {why!r}") from why
    return found


def spot_finder(loaded: Loaded) -> Callable[[str], Spot]:
    """A function from a part's id to the place where it stands."""

    def spot(key: str) -> Spot:
        part = loaded.design.parts[key]
        line, column = loaded.documents[part.place.file].place(part.place.offset)
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

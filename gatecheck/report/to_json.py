"""Report to JSON, by the published contract: names and shapes here are what other programs rely on."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

from gatecheck import __version__
from gatecheck.report.wording import CAUTIONS, summary

if TYPE_CHECKING:
    from collections.abc import Iterable, Mapping

    from gatecheck.finding import Finding, Limit, Quantity, Spot
    from gatecheck.networks.find import Networks
    from gatecheck.networks.model import GateNetwork, Switch
    from gatecheck.report_model import Report, Reviewed
    from gatecheck.rulekit import Rule

_Key = tuple[str, "str | None"]


def report_json(report: Report) -> str:
    """A whole review."""
    return _dumped(
        {
            "schema": "gatecheck.report/1",
            "tool": {"name": "gatecheck", "version": __version__},
            "cautions": list(CAUTIONS),
            "inputs": [{"path": i.path, "kind": i.kind, "sha256": i.sha256} for i in report.inputs],
            "transistors": [entry for d in report.designs for entry in _transistors(d.networks)],
            "gates": [entry for d in report.designs for entry in _gates(d)],
            "findings": [_finding(finding) for finding in report.findings],
            "not_judged": [
                {"rule": n.rule, "subject": n.subject, "reason": n.reason, "needs": n.needs} for n in report.not_judged
            ],
            "unread": [
                {
                    "path": u.path,
                    "line": u.line,
                    "column": u.column,
                    "message": u.message,
                    "excerpt": u.excerpt,
                    "next_step": u.next_step,
                }
                for u in report.unread
            ],
            "summary": summary(report),
        }
    )


def nets_json(source: str, nets: Mapping[str, Iterable[tuple[str, str]]]) -> str:
    """The connectivity of one file."""
    pins = {name: [list(pin) for pin in members] for name, members in nets.items()}
    return _dumped({"schema": "gatecheck.nets/1", "source": source, "nets": pins})


def rules_json(rules: Iterable[Rule]) -> str:
    """The rules with their reasons."""
    return _dumped(
        {
            "schema": "gatecheck.rules/1",
            "rules": [
                {
                    "id": rule.id,
                    "title": rule.title,
                    "reason": rule.reason,
                    "quantity": rule.quantity,
                    "limits": list(rule.limits),
                    "sources": list(rule.sources),
                }
                for rule in rules
            ],
        }
    )


def _dumped(content: Mapping[str, Any]) -> str:
    # ASCII only: names from a file may hold characters that a terminal acts on.
    return json.dumps(content, indent=1, ensure_ascii=True) + "\n"


def _id(networks: Networks, key: _Key) -> str:
    """Unique within a report that holds several designs, and the same on every run."""
    unit = f".{key[1]}" if key[1] else ""
    return f"{networks.design.source}#{key[0]}{unit}"


def _reference(networks: Networks, part: str) -> str:
    return networks.design.parts[part].reference or part


def _references(networks: Networks, parts: Iterable[str]) -> list[str]:
    return [_reference(networks, part) for part in parts]


def _transistors(networks: Networks) -> list[dict[str, Any]]:
    return [_transistor(networks, switch) for switch in networks.switches]


def _transistor(networks: Networks, switch: Switch) -> dict[str, Any]:
    return {
        "id": _id(networks, switch.transistor.key),
        "ref": _reference(networks, switch.transistor.part),
        "unit": switch.transistor.unit,
        "role": switch.role,
        "likely": switch.likely,
        "score": switch.score,
        "technology": switch.technology,
        "evidence": [{"text": entry.text, "weight": entry.weight} for entry in switch.evidence],
    }


def _gates(design: Reviewed) -> list[dict[str, Any]]:
    return [_gate(design, gate) for gate in design.networks.gates]


def _gate(design: Reviewed, gate: GateNetwork) -> dict[str, Any]:
    networks, transistor = design.networks, gate.transistor
    quantities = design.quantities.get(transistor.key, {})
    return {
        "id": _id(networks, transistor.key),
        "switch": _reference(networks, transistor.part),
        "unit": transistor.unit,
        "gate_pads": list(dict.fromkeys(pin.number for pin in transistor.gate)),
        "gate_net": transistor.gate_net,
        "source_net": transistor.source_net,
        "return_net": gate.return_net,
        "drain_net": transistor.drain_net,
        "drivers": [
            {"ref": _reference(networks, d.part), "pads": [pin.number for pin in d.pins], "edge": d.edge}
            for d in gate.drives
        ],
        "on_path": _references(networks, gate.on.parts),
        "off_path": _references(networks, gate.off.parts),
        "beads": _references(networks, gate.beads),
        "gate_resistors": _references(networks, gate.gate_resistors),
        "pulldowns": _references(networks, gate.pulldowns),
        "gate_capacitors": _references(networks, gate.gate_capacitors),
        "clamps": _references(networks, gate.clamps),
        "parallel_with": _references(networks, (key[0] for key in gate.parallel_with)),
        "alternates": _references(networks, (key[0] for key in gate.alternates)),
        "quantities": {name: _quantity(value) for name, value in quantities.items()},
    }


def _finding(finding: Finding) -> dict[str, Any]:
    return {
        "rule": finding.rule,
        "verdict": finding.verdict.value,
        "level": finding.level.value,
        "subject": finding.subject,
        "also": list(finding.also),
        "edge": finding.edge,
        "message": finding.message,
        "quantity": finding.quantity,
        "value": _quantity(finding.value),
        "limit": _limit(finding.limit),
        "rests_on": finding.rests_on.value,
        "ask": [{"part": ask.part, "datum": ask.datum, "unit": ask.unit} for ask in finding.ask],
        "places": [_spot(place) for place in finding.places],
        "advice": finding.advice,
        "fingerprint": finding.fingerprint,
    }


def _quantity(value: Quantity | None) -> dict[str, Any] | None:
    if value is None:
        return None
    return {
        "low": value.low,
        "nominal": value.nominal,
        "high": value.high,
        "unit": value.unit,
        "origin": value.origin.value,
    }


def _limit(limit: Limit | None) -> dict[str, Any] | None:
    if limit is None:
        return None
    bounds = {"min": limit.minimum, "max": limit.maximum}
    return {**{k: v for k, v in bounds.items() if v is not None}, "unit": limit.unit, "origin": limit.origin}


def _spot(spot: Spot) -> dict[str, Any]:
    return {
        "file": spot.file,
        "line": spot.line,
        "column": spot.column,
        "x_mm": spot.x_mm,
        "y_mm": spot.y_mm,
        "layer": spot.layer,
        "part": spot.part,
        "pad": spot.pad,
    }

"""The role of each transistor: the sum of its evidence against the catalogue's limits."""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.catalogue.load import role_limits, word_in
from gatecheck.networks.evidence import gather
from gatecheck.networks.model import Evidence, Switch
from gatecheck.networks.surroundings import is_p_channel
from gatecheck.values import parse_transistor_text

if TYPE_CHECKING:
    from collections.abc import Iterator

    from gatecheck.design.model import Part
    from gatecheck.networks.surroundings import Surroundings
    from gatecheck.networks.terminals import Transistor

# What a field called `role` on a part may say, and the role it stands for.
_FIELD_ROLES = {
    "switch": "switching",
    "switching": "switching",
    "static": "static",
    "linear": "linear",
    "small": "small-signal",
    "small-signal": "small-signal",
}
_CERTAIN = 100.0
_TECHNOLOGIES = ("sic", "gan", "igbt")
_LINEAR = ("linear_drive", "follower")
_LOADS = ("coil_load", "connector_load")


def judge_roles(around: Surroundings) -> Iterator[Switch]:
    """The role of each transistor, with the evidence that decided it."""
    for transistor in around.transistors:
        part = around.circuit.design.parts[transistor.part]
        text = " ".join((part.value, part.description, part.library.rpartition(":")[2])).replace("_", " ")
        said = parse_transistor_text(text)
        technology: str = said.technology or next((t for t in _TECHNOLOGIES if word_in(t, text)), "")
        channel = said.channel or ("p" if is_p_channel(part) else "n")
        evidence = gather(around, transistor, said)
        score = sum(entry.weight for entry in evidence)
        stated = _stated_role(part)
        if stated:
            evidence = [Evidence("field_role", f"the part's field says {stated}", _CERTAIN), *evidence]
            yield Switch(transistor, stated, _CERTAIN, False, technology, channel, tuple(evidence))
            continue
        role, likely = _role(transistor, score, evidence)
        yield Switch(transistor, role, round(score, 3), likely, technology, channel, tuple(evidence))


def _role(transistor: Transistor, score: float, evidence: list[Evidence]) -> tuple[str, bool]:
    limits = role_limits()
    if any(entry.name in _LINEAR for entry in evidence):
        return "linear", False
    if score >= limits["switching"]:
        return "switching", False
    if score >= limits["likely"]:
        return "switching", True
    if score >= limits["unclear"]:
        return "unclear", False
    small = transistor.package is not None and transistor.package.size == "small"
    # A small transistor that switches a load on a connector is a switch all the same, a slow one.
    loaded = any(entry.name in _LOADS for entry in evidence)
    return ("small-signal" if small and not loaded else "static"), False


def _stated_role(part: Part) -> str:
    for name, value in part.fields.items():
        if name.strip().lower() == "role":
            return _FIELD_ROLES.get(value.strip().lower(), "")
    return ""

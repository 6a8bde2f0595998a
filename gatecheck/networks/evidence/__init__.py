"""The evidence for a transistor's role, feature by feature; weights and words are in the catalogue."""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.catalogue.load import features
from gatecheck.networks.evidence.against import against
from gatecheck.networks.evidence.drive import drive, resistance
from gatecheck.networks.evidence.power import bridge, load, surface
from gatecheck.networks.model import Evidence

if TYPE_CHECKING:
    from gatecheck.networks.surroundings import Found, Surroundings
    from gatecheck.networks.terminals import Transistor
    from gatecheck.values import TransistorText

_SMALL_CURRENT_A = 1.0
_TECHNOLOGY = {"sic": "SiC", "gan": "GaN", "igbt": "IGBT"}


def gather(around: Surroundings, transistor: Transistor, said: TransistorText) -> list[Evidence]:
    """All evidence for and against this transistor being a power switch, strongest first."""
    found: dict[str, dict[str, str]] = {}
    for look in (drive, resistance, bridge, load, surface, against):
        for name, fill in look(around, transistor):
            found.setdefault(name, fill)  # each feature counts once, as first found
    for name, fill in _ratings(said):
        found.setdefault(name, fill)
    known = features()
    evidence = [Evidence(name, known[name].text.format(**fill), known[name].weight) for name, fill in found.items()]
    return sorted(evidence, key=lambda entry: (-abs(entry.weight), entry.text))


def _ratings(said: TransistorText) -> list[Found]:
    """What the part's own text says."""
    found: list[Found] = []
    if said.current_a is not None and said.current_a < _SMALL_CURRENT_A:
        found.append(("small_ratings", {"word": f"{said.current_a:g} A"}))
    if said.technology in _TECHNOLOGY:
        found.append(("power_technology", {"word": _TECHNOLOGY[said.technology]}))
    return found

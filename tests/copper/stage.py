"""A half bridge's low side on a small board: driver, 10 ohm, bead, gate, all on one line, 20 mm long."""

from __future__ import annotations

from gatecheck import rulekit
from gatecheck.copper.chain import Chains
from gatecheck.copper.path import Copper
from gatecheck.copper.source import CopperSource
from gatecheck.design.build import from_board
from gatecheck.finding import Finding, Spot
from gatecheck.networks.find import find_networks
from gatecheck.parse.board import read_board
from gatecheck.parse.document import open_document
from gatecheck.registry import rule_by_id
from gatecheck.settings import read_settings

NETS = ("", "LO", "J", "G", "GND", "SW", "VBUS", "OUT")
GATE_MM = 20.0


def _part(reference: str, value: str, *pads: tuple[str, str, float, float, str]) -> str:
    forms = "".join(
        f'(pad "{number}" smd rect (at {x} {y}) (size 0.4 0.4) (layers "F.Cu") (net {NETS.index(net)} "{net}")'
        f' (pinfunction "{function}"))'
        for number, function, x, y, net in pads
    )
    head = f'(footprint "TO-263-2" (layer "F.Cu") (at 0 0) (property "Reference" "{reference}")'
    return f'{head} (property "Value" "{value}") {forms})'


def _track(x0: float, y0: float, x1: float, y1: float, net: str) -> str:
    return f'(segment (start {x0} {y0}) (end {x1} {y1}) (width 0.2) (layer "F.Cu") (net {NETS.index(net)}))'


def stage_text(bead_mm: float, return_mm: float | None, *, routed: bool) -> str:
    """`bead_mm` from the bead's pad edge to the gate's, `return_mm` between gate trace and return track."""
    bead = GATE_MM - bead_mm - 0.4
    home = return_mm if return_mm is not None else 1.0
    items = [
        _part("U1", "gate driver", ("1", "LO", 0, 0, "LO"), ("2", "COM", 0, home, "GND"), ("3", "VS", -3, 3, "SW")),
        _part("R1", "10", ("1", "", 2, 0, "LO"), ("2", "", 3, 0, "J")),
        _part("FB1", "60R@100MHz 3A", ("1", "", bead - 1, 0, "J"), ("2", "", bead, 0, "G")),
        _part("Q1", "NMOS", ("1", "G", GATE_MM, 0, "G"), ("2", "D", 25, 0, "SW"), ("3", "S", GATE_MM, home, "GND")),
        _part("Q2", "NMOS", ("1", "G", 30, 9, ""), ("2", "D", 33, 9, "VBUS"), ("3", "S", 30, 11, "SW")),
        _part("L1", "10u", ("1", "", 40, 0, "SW"), ("2", "", 45, 0, "OUT")),
    ]
    if routed:
        items += [_track(0, 0, 2, 0, "LO"), _track(3, 0, bead - 1, 0, "J"), _track(bead, 0, GATE_MM, 0, "G")]
    if return_mm is not None:
        items.append(_track(0, home, GATE_MM, home, "GND"))
    nets = "".join(f'(net {i} "{name}")' for i, name in enumerate(NETS))
    layers = '(layers (0 "F.Cu" signal) (2 "B.Cu" signal))'
    return f"(kicad_pcb (version 20241229) {layers} {nets} {''.join(items)})"


def findings_on_board(
    rule: str, settings: str = "", *, bead_mm: float, return_mm: float | None = 1.0, routed: bool = True
) -> list[Finding]:
    """What one rule says of the stage, with a project file's text."""
    board = read_board(open_document("b.kicad_pcb", stage_text(bead_mm, return_mm, routed=routed).encode()))
    design = from_board(board)
    networks = find_networks(design)
    chains = Chains(Copper(design, CopperSource(board)), networks.circuit)
    own = read_settings("gatecheck.yaml", settings)
    gates = rulekit.Design(networks, lambda key: Spot("b.kicad_pcb", 1, 1, key), own, chains)
    chosen = rule_by_id(rule)
    return rulekit.grouped(gates.finding(chosen, say) for say in chosen.check(gates))

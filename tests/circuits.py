"""Tiny circuits as text, for tests: one part per line, turned into a netlist and read like any other.

Q1 NMOS       G=g1 D=bus S=sw      pins by function
R1 10         ho g1                pins 1 and 2
R2 0R dnp     ho g1                not fitted
"""

from __future__ import annotations

from collections import defaultdict
from typing import TYPE_CHECKING

from gatecheck import rulekit
from gatecheck.design.build import from_netlist
from gatecheck.finding import Finding, Spot
from gatecheck.networks.find import Networks, find_networks
from gatecheck.parse.document import open_document
from gatecheck.parse.netlist import read_netlist
from gatecheck.registry import rule_by_id
from gatecheck.settings import read_settings

if TYPE_CHECKING:
    from gatecheck.design.model import Design
    from gatecheck.networks.model import GateNetwork, Switch

FIELDS = ("description", "footprint", "lib")


def netlist_text(circuit: str) -> str:
    """The netlist of a circuit, as the newest exporter writes it."""
    components: list[str] = []
    nets: dict[str, list[str]] = defaultdict(list)
    for line in circuit.strip().splitlines():
        words = line.split()
        if not words or words[0].startswith("#"):
            continue
        reference, value, *rest = words
        flags = '(property (name "dnp"))' if "dnp" in rest else ""
        said = {key: text.replace("~", " ") for key, _, text in (w.partition("=") for w in rest) if key in FIELDS}
        pins = [w.partition("=") for w in rest if w != "dnp" and w.partition("=")[0] not in FIELDS]
        components.append(
            f'(comp (ref "{reference}") (value "{value}") (footprint "{said.get("footprint", "")}")'
            f' (libsource (lib "Own") (part "{said.get("lib", "")}") (description "{said.get("description", "")}"))'
            f' {flags} (tstamps "{reference}"))'
        )
        for number, (name, equals, net) in enumerate(pins, start=1):
            function = f' (pinfunction "{name}")' if equals else ""
            node = f'(node (ref "{reference}") (pin "{number}"){function} (pintype "passive"))'
            nets[net if equals else name].append(node)
    rows = [f'(net (code "{i}") (name "{name}") {" ".join(nodes)})' for i, (name, nodes) in enumerate(nets.items())]
    return f'(export (version "E") (components {" ".join(components)}) (nets {" ".join(rows)}))'


def design_of(circuit: str) -> Design:
    return from_netlist(read_netlist(open_document("circuit.net", netlist_text(circuit).encode())))


def networks_of(circuit: str) -> Networks:
    return find_networks(design_of(circuit))


def gate_of(circuit: str, reference: str = "Q1", unit: str | None = None) -> GateNetwork:
    gates = {gate.transistor.key: gate for gate in networks_of(circuit).gates}
    return gates[reference, unit]


def switch_of(circuit: str, reference: str = "Q1") -> Switch:
    return next(s for s in networks_of(circuit).switches if s.transistor.part == reference)


# A half bridge whose gates are driven straight, to which tests add what they are about.
BRIDGE = """
Q1 NMOS footprint=TO-263-2 G=g1 D=VBUS S=sw
Q2 NMOS footprint=TO-263-2 G=g2 D=sw S=GND
U1 driver description=half-bridge~gate~driver HIN=in1 LIN=in2 VDD=+12V COM=GND LO=lo VB=boot HO=ho VS=sw
C1 100n boot sw
L1 10u sw out
"""


def findings_of(circuit: str, rule: str, settings: str = "") -> list[Finding]:
    """What one rule says of a circuit, with a project file's text, grouped as a report has it."""
    networks = networks_of(circuit)
    own = read_settings("gatecheck.yaml", settings)
    design = rulekit.Design(networks, lambda key: Spot("circuit.net", 1, 1, key), own)
    chosen = rule_by_id(rule)
    return rulekit.grouped(design.finding(chosen, say) for say in chosen.check(design))

"""Sheets drawn in a few lines of Python, for tests of what connects. Places in millimetres, y down."""

from __future__ import annotations

from typing import TYPE_CHECKING

from gatecheck.design.build import pins_by_net
from gatecheck.design.from_sheets import from_sheets
from gatecheck.errors import InputError
from gatecheck.parse.document import open_document
from gatecheck.parse.sheets import read_hierarchy

if TYPE_CHECKING:
    from collections.abc import Mapping

    from gatecheck.design.model import Design
    from gatecheck.parse.document import Document
    from gatecheck.parse.sheets import Hierarchy

# A one-pin part P (pin at its origin), an L-shaped two-pin part L, supplies, and parts with odd pins.
LIBRARY = """
(symbol "P" (symbol "P_1_1" (pin passive line (at 0 0 0) (name "~") (number "1"))))
(symbol "L" (symbol "L_1_1" (pin passive line (at 5 0 0) (name "A") (number "1"))
                            (pin passive line (at 0 10 0) (name "B") (number "2"))))
(symbol "+5V" (power) (symbol "+5V_1_1" (pin power_in line (at 0 0 0) (name "+5V") (number "1"))))
(symbol "LOCAL" (power local) (symbol "LOCAL_1_1" (pin power_in line (at 0 0 0) (name "VX") (number "1"))))
(symbol "FLAG" (power) (symbol "FLAG_1_1" (pin power_out line (at 0 0 0) (name "pwr") (number "1"))))
(symbol "HIDDEN" (symbol "HIDDEN_1_1" (pin input line (at 0 0 0) (name "IN") (number "1"))
                                      (pin power_in line (at 0 10 0) hide (name "+5V") (number "14"))))
(symbol "NC" (symbol "NC_1_1" (pin no_connect line (at 0 0 0) (name "NC") (number "1"))))
(symbol "TWICE" (symbol "TWICE_1_1" (pin passive line (at 0 0 0) (name "A") (number "1"))
                                    (pin passive line (at 10 0 0) (name "B") (number "1"))))
(symbol "DUAL" (symbol "DUAL_1_1" (pin input line (at 0 0 0) (name "G") (number "2")))
               (symbol "DUAL_2_1" (pin input line (at 0 0 0) (name "G") (number "5"))))
(symbol "STACK" (symbol "STACK_1_1" (pin passive line (at 0 0 0) (name "D") (number "[1-3,7]"))))
(symbol "JUMPER" (jumper_pin_groups ("1" "2")) (symbol "JUMPER_1_1"
    (pin passive line (at 0 0 0) (name "~") (number "1")) (pin passive line (at 10 0 0) (name "~") (number "2"))))
"""


def symbol(kind: str, reference: str, at: str, *more: str, value: str = "", uuid: str = "") -> str:
    """A symbol; `at` is "x y" or "x y angle"."""
    place = at if at.count(" ") == 2 else f"{at} 0"
    fields = f'(property "Reference" "{reference}") (property "Value" "{value}")'
    return f'(symbol (lib_id "{kind}") (at {place}) {" ".join(more)} (uuid "{uuid or reference}") {fields})'


def wire(*points: str, kind: str = "wire") -> str:
    return f"({kind} (pts {' '.join(f'(xy {point})' for point in points)}))"


def label(text: str, at: str, kind: str = "label") -> str:
    return f'({kind} "{text}" (at {at} 0))'


def sheet(name: str, file: str, *pins: tuple[str, str]) -> str:
    drawn = " ".join(f'(pin "{text}" input (at {at} 180))' for text, at in pins)
    fields = f'(property "Sheetname" "{name}") (property "Sheetfile" "{file}")'
    return f'(sheet (at 0 0) (size 1 1) (uuid "{name}") {fields} {drawn})'


def file(*items: str, version: int = 20250114) -> str:
    return f'(kicad_sch (version {version}) (uuid "top") (lib_symbols {LIBRARY}) {" ".join(items)})'


def hierarchy(root: str, others: Mapping[str, str] | None = None) -> Hierarchy:
    opened: dict[str, Document] = {"root.kicad_sch": open_document("root.kicad_sch", root.encode())}

    def fetch(above: str, name: str) -> Document:
        if name not in opened:
            if name not in (others or {}):
                raise InputError("there is no such file", "check the spelling of the path", above)
            opened[name] = open_document(name, (others or {})[name].encode())
        return opened[name]

    return read_hierarchy(opened["root.kicad_sch"], fetch)


def design(root: str, others: Mapping[str, str] | None = None) -> Design:
    return from_sheets(hierarchy(root, others))[0]


def nets(root: str, others: Mapping[str, str] | None = None) -> dict[str, str]:
    """Name of every net -> its pins, as text: "P1.1 P2.1"."""
    found = pins_by_net(design(root, others))
    return {name: " ".join(f"{reference}.{number}" for reference, number in pins) for name, pins in found.items()}

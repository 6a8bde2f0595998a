"""Which drawings make up the schematic of each sample."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

from .draw_half_bridge import BARE_LEG, BEAD_ONE_EDGE_SHEET, HALF_BRIDGE_SHEET, LEG
from .draw_logic import LOGIC_SHEET
from .draw_three_phase import THREE_PHASE_SHEET
from .drawing import Drawing, DrawingFault, Layout
from .faults import BEAD_FAR, BEAD_MISSING, BEAD_ONE_EDGE, BEAD_UNDERRATED, RETURN_DETOUR
from .half_bridge import HALF_BRIDGE
from .logic import LOGIC
from .three_phase import THREE_PHASE

if TYPE_CHECKING:
    from collections.abc import Mapping

    from .circuit import Circuit, Part, Sheet


@dataclass(frozen=True)
class SheetFile:
    """One file of a schematic and the sheets that show it; None is the root."""

    name: str
    drawing: Drawing
    shown: tuple[Sheet | None, ...]


@dataclass(frozen=True)
class Schematic:
    """The drawings of a circuit. `below` says what the sheets below the root show: name -> file and drawing."""

    circuit: Circuit
    root: Drawing
    below: Mapping[str, tuple[str, Drawing]]

    @property
    def root_file(self) -> str:
        """The file that carries the project's name; a board made from another one may still name that one's."""
        return f"{self.circuit.name}.kicad_sch"

    @cached_property
    def files(self) -> list[SheetFile]:
        """The root's file, then the others in the order of their first use."""
        uses: dict[str, list[Sheet | None]] = {}
        drawings: dict[str, Drawing] = {}
        for sheet in self.circuit.sheets:
            name, drawings[name] = self.below[sheet.name]
            uses.setdefault(name, []).append(sheet)
        below = [SheetFile(name, drawings[name], tuple(uses[name])) for name in uses]
        return [SheetFile(self.root_file, self.root, (None,)), *below]

    @property
    def root_identifier(self) -> str:
        """The identifier of the root, with which the paths of all instances start."""
        return self.circuit.identifier("schematic", "root")

    def page(self, sheet: Sheet | None) -> int:
        """The page's number; the root is page 1."""
        return self.circuit.sheets.index(sheet) + 2 if sheet else 1

    def path(self, sheet: Sheet | None) -> str:
        """The identifiers from the root's down to the sheet's, without a final slash."""
        return f"/{self.root_identifier}{self.circuit.sheet_path(sheet)}".rstrip("/")

    def parts(self, shown: Sheet | None) -> dict[str, Part]:
        """The parts on one sheet by the reference they are drawn with."""
        return {part.drawn_as or part.ref: part for part in self.circuit.parts if part.sheet == shown}

    def layout(self, file: SheetFile) -> Layout:
        """The file's drawing with all its points.

        Raises:
            DrawingFault: it does not show the parts of its sheets, or lines and bodies run into each other.
        """
        parts = self.parts(file.shown[0])
        drawn = {text.split()[0].split(":")[0] for text in file.drawing.symbols}
        for sheet in file.shown:
            if wrong := drawn ^ self.parts(sheet).keys():
                raise DrawingFault(f"{file.name}: drawn or needed, but not both: {sorted(wrong)}")
        used = {name: part.symbol for name, part in parts.items()}
        return Layout(file.drawing, used, below_another=file.shown[0] is not None)


_LEGS = {f"Leg {letter}": ("leg.kicad_sch", LEG) for letter in "ABC"}

SCHEMATICS = (
    Schematic(HALF_BRIDGE, HALF_BRIDGE_SHEET, {}),
    Schematic(LOGIC, LOGIC_SHEET, {}),
    Schematic(THREE_PHASE, THREE_PHASE_SHEET, _LEGS),
    # a sheet that is shown three times cannot lack a part once: the middle leg has a file of its own
    Schematic(BEAD_MISSING, THREE_PHASE_SHEET, {**_LEGS, "Leg B": ("leg_b.kicad_sch", BARE_LEG)}),
    Schematic(BEAD_FAR, HALF_BRIDGE_SHEET, {}),
    Schematic(RETURN_DETOUR, HALF_BRIDGE_SHEET, {}),
    Schematic(BEAD_UNDERRATED, HALF_BRIDGE_SHEET, {}),
    Schematic(BEAD_ONE_EDGE, BEAD_ONE_EDGE_SHEET, {}),
)

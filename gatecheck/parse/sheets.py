"""The hierarchy of sheets: one file drawn many times is read once and used once per path.

Sheet files are hostile: a sheet may contain itself, be missing, lie outside the project, or be drawn a million
times. Each of these is a trouble at the sheet symbol; the rest is read.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from gatecheck.errors import InputError
from gatecheck.parse.schematic import SheetFile, read_sheet

if TYPE_CHECKING:
    from collections.abc import Callable

    from gatecheck.parse.document import Document
    from gatecheck.parse.schematic import SheetSymbol

# Our choice: designs of thirty sheets are large; bounds work on hostile files.
_MOST_USES = 2000
_MOST_DEPTH = 30
_MOST_DRAWN = 300_000  # symbols and labels, counted once per use


@dataclass(frozen=True, slots=True)
class SheetUse:
    """One drawing of a sheet file. `path` is in identifiers (`/top/S1`), `name` as people read it (`/Leg A/`)."""

    index: int
    file: SheetFile
    path: str
    name: str
    depth: int
    parent: SheetUse | None
    symbol: SheetSymbol | None

    @property
    def below_root(self) -> str:
        """The path without the root's identifier, as boards have it: empty for the root itself."""
        return "/" + "/".join(self.path.split("/")[2:]) if self.depth else ""


@dataclass(slots=True)
class Hierarchy:
    """All uses of all sheets of one design, the root first."""

    uses: list[SheetUse] = field(default_factory=list)
    files: dict[str, SheetFile] = field(default_factory=dict)
    troubles: list[InputError] = field(default_factory=list)
    drawn: int = 0

    @property
    def full(self) -> bool:
        """Is it as large as a design may be?"""
        return len(self.uses) >= _MOST_USES or self.drawn > _MOST_DRAWN

    @property
    def variants(self) -> list[str]:
        """The named variants of the design; what is read is the design without any of them."""
        return sorted({name for file in self.files.values() for name in file.variants})

    @property
    def root(self) -> SheetFile:
        """The root sheet's file."""
        return self.uses[0].file


def read_hierarchy(root: Document, fetch: Callable[[str, str], Document]) -> Hierarchy:
    """Read a root sheet and all below it.

    Args:
        root: the root sheet.
        fetch: opens the file that a sheet symbol names, given the path of the file it stands in and that name;
            raises InputError if that must not or cannot be.
    """
    found = Hierarchy()
    file = found.files[root.path] = read_sheet(root)
    found.troubles += file.troubles
    _use(found, fetch, SheetUse(0, file, f"/{file.uuid}", "/", 0, None, None), (root.path,))
    return found


def _use(found: Hierarchy, fetch: Callable[[str, str], Document], use: SheetUse, above: tuple[str, ...]) -> None:
    found.uses.append(use)
    found.drawn += len(use.file.symbols) + len(use.file.labels)
    for symbol in use.file.sheets:
        if found.full:
            message = f"more than {_MOST_USES} sheets, or {_MOST_DRAWN} symbols and labels on them"
            _trouble(found, use, symbol, InputError(message, "split the design", ""))
            return
        try:
            below = _below(fetch, use, symbol, above)
        except InputError as why:
            _trouble(found, use, symbol, why)
            continue
        if below.path not in found.files:
            found.files[below.path] = read_sheet(below)
            found.troubles += found.files[below.path].troubles
        name = f"{use.name}{symbol.name.replace('/', '{slash}')}/"
        path = f"{use.path}/{symbol.uuid}"
        file = found.files[below.path]
        _use(
            found, fetch, SheetUse(len(found.uses), file, path, name, use.depth + 1, use, symbol), (*above, below.path)
        )


def _below(
    fetch: Callable[[str, str], Document], use: SheetUse, symbol: SheetSymbol, above: tuple[str, ...]
) -> Document:
    here = use.file.document.path
    if use.depth >= _MOST_DEPTH:
        raise InputError(f"sheets nested deeper than {_MOST_DEPTH}", "flatten the design", here)
    below = fetch(here, symbol.file)
    if below.path in above:
        raise InputError("this sheet contains itself", "name another file in it", here)
    return below


def _trouble(found: Hierarchy, use: SheetUse, symbol: SheetSymbol, why: InputError) -> None:
    """Said at the sheet symbol, once however often its sheet is drawn."""
    document = use.file.document
    line, column = document.place(symbol.start)
    trouble = InputError(why.message, why.next_step, document.path, line, column, f"{symbol.name}: {symbol.file}"[:80])
    known = {(other.path, other.line, other.message) for other in found.troubles}
    if (document.path, line, why.message) not in known:
        found.troubles.append(trouble)

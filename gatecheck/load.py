"""From a path to a Design: opened, sniffed, indexed, parsed and built, with the project file beside it."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.design.build import from_board, from_netlist
from gatecheck.files import read_bytes, shown_path
from gatecheck.parse.document import Document, open_document
from gatecheck.parse.sniff import FileKind, sniff
from gatecheck.report_model import InputFile
from gatecheck.settings import MAX_BYTES, NAME, Settings, read_settings

if TYPE_CHECKING:
    from pathlib import Path

    from gatecheck.design.model import Design
    from gatecheck.errors import InputError
    from gatecheck.parse.board import BoardFile


@dataclass(frozen=True, slots=True)
class Loaded:
    """A design with the file it came from; `troubles` are its forms that could not be read."""

    source: InputFile
    document: Document
    design: Design
    troubles: tuple[InputError, ...]
    board: BoardFile | None


def load_design(path: Path) -> Loaded:
    """Read one board or netlist.

    Raises:
        InputError: if it cannot be read at all.
    """
    shown = shown_path(path)
    data = read_bytes(path)
    kind = sniff(shown, data)
    document = open_document(shown, data)
    source = InputFile(shown, kind.value, hashlib.sha256(data).hexdigest())
    if kind is FileKind.BOARD:
        from gatecheck.parse.board import read_board  # noqa: PLC0415 (only what is needed)

        board = read_board(document)
        return Loaded(source, document, from_board(board), board.troubles, board)
    from gatecheck.parse.netlist import read_netlist  # noqa: PLC0415 (the same)

    netlist = read_netlist(document)
    return Loaded(source, document, from_netlist(netlist), netlist.troubles, None)


def load_settings(path: Path) -> tuple[Settings, InputFile | None]:
    """The settings of the design at a path: gatecheck.yaml beside it, or the next one up to the repository's root.

    Raises:
        SettingsError: with all mistakes in the file.
        InputError: if it cannot be read.
    """
    file = _settings_file(path)
    if file is None:
        return Settings(), None
    data = read_bytes(file, max_bytes=MAX_BYTES)
    shown = shown_path(file)
    settings = read_settings(shown, data.decode("utf-8", errors="replace"))
    return settings, InputFile(shown, "settings", hashlib.sha256(data).hexdigest())


def _settings_file(path: Path) -> Path | None:
    """Beside the design; farther up only inside a repository, whose root is as far as a project reaches."""
    folder = path.resolve().parent
    beside = folder / NAME
    if beside.is_file():
        return path.parent / NAME
    above = [folder, *folder.parents]
    root = next((here for here in above if (here / ".git").exists()), None)
    if root is None:
        return None
    for here in above[1 : above.index(root) + 1]:
        if (here / NAME).is_file():
            return here / NAME
    return None

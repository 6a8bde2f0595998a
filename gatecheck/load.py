"""From a path to a Design: opened, sniffed, indexed, parsed and built."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass
from typing import TYPE_CHECKING

from gatecheck.design.build import from_board, from_netlist
from gatecheck.files import read_bytes, shown_path
from gatecheck.parse.document import Document, open_document
from gatecheck.parse.sniff import FileKind, sniff
from gatecheck.report_model import InputFile

if TYPE_CHECKING:
    from pathlib import Path

    from gatecheck.design.model import Design
    from gatecheck.errors import InputError


@dataclass(frozen=True, slots=True)
class Loaded:
    """A design with the file it came from; `troubles` are its forms that could not be read."""

    source: InputFile
    document: Document
    design: Design
    troubles: tuple[InputError, ...]


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
        return Loaded(source, document, from_board(board), board.troubles)
    from gatecheck.parse.netlist import read_netlist  # noqa: PLC0415 (the same)

    netlist = read_netlist(document)
    return Loaded(source, document, from_netlist(netlist), netlist.troubles)

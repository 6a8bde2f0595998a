"""What kind of file this is, told by its first bytes: names lie, and `.net` is used by many programs."""

from __future__ import annotations

from enum import StrEnum

from gatecheck.errors import InputError
from gatecheck.parse.document import error_at


class FileKind(StrEnum):
    """The kinds of design files that are read."""

    BOARD = "board"
    NETLIST = "netlist"
    SCHEMATIC = "schematic"


_HEADS = {"kicad_pcb": FileKind.BOARD, "export": FileKind.NETLIST, "kicad_sch": FileKind.SCHEMATIC}
# First bytes of files that are often given by mistake, with what to give instead.
_FOREIGN = (
    (b"<?xml", "this is a netlist in XML", "export the netlist in the S-expression format"),
    (b"EESchema", "this is a legacy text schematic", "give the board, or export a netlist from it"),
    (
        b"PCBNEW-BOARD",
        "this is a board of a format before S-expressions",
        "open and save it with a newer editor",
    ),
    (b"{", "this is a project or settings file", "give the board, the netlist, or the folder they lie in"),
    (b"*", "this is a circuit-simulator netlist", "export the netlist in the S-expression format"),
    (b"PK\x03\x04", "this is an archive", "unpack it, then give the board or the netlist"),
    (b"%PDF", "this is a PDF document", "give the board or the netlist it was made from"),
)
_OTHER_HEADS = {
    "kicad_symbol_lib": ("this is a symbol library", "give the board or an exported netlist"),
    "footprint": ("this is a single footprint", "give the board it is used on"),
    "module": ("this is a single footprint", "give the board it is used on"),
    "kicad_wks": ("this is a drawing frame", "give the board or an exported netlist"),
}
_LOOK = 1 << 20
_NAME_A_DESIGN = "give a board (.kicad_pcb), a schematic (.kicad_sch) or an exported netlist (.net)"


def sniff(path: str, data: bytes) -> FileKind:
    """The kind of a design file.

    Raises:
        InputError: if it is none that can be read; says what it looks like and what to give instead.
    """
    # Blank lines may stand before a form; a file of nothing else is empty.
    start = data[:_LOOK].removeprefix(b"\xef\xbb\xbf").lstrip()[:400]
    if not start:
        raise InputError("this file is empty", _NAME_A_DESIGN, path)
    if data[:2] in (b"\xff\xfe", b"\xfe\xff") or b"\x00" in data[:400]:
        raise error_at(path, data[:400], 0, "this is no UTF-8 text", "save the file as UTF-8, or " + _NAME_A_DESIGN)
    for mark, message, next_step in _FOREIGN:
        if start.startswith(mark):
            raise error_at(path, data[:4000], 0, message, next_step)
    word = start[1:].lstrip()[:40].split(b"(")[0].split()
    head = word[0].decode("latin-1") if start.startswith(b"(") and word else ""
    if head in _HEADS:
        return _HEADS[head]
    message, next_step = _OTHER_HEADS.get(head, ("this is no board, schematic or netlist", _NAME_A_DESIGN))
    raise error_at(path, data[:4000], 0, message, next_step)

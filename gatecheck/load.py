"""From a path to a Design: opened, sniffed, indexed, parsed and built, with the project file beside it."""

from __future__ import annotations

import hashlib
import os
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from gatecheck.design.build import from_board, from_netlist
from gatecheck.errors import InputError
from gatecheck.files import read_bytes, shown_path
from gatecheck.parse.document import Document, open_document
from gatecheck.parse.sniff import FileKind, sniff
from gatecheck.report_model import InputFile
from gatecheck.settings import MAX_BYTES, NAME, Settings, read_settings

if TYPE_CHECKING:
    from collections.abc import Mapping
    from pathlib import Path

    from gatecheck.design.join import OutOfStep
    from gatecheck.design.model import Design
    from gatecheck.parse.board import BoardFile
    from gatecheck.parse.project import Project
    from gatecheck.parse.project_file import ProjectFile

_MOST_PROJECT_BYTES = 8 * 1024 * 1024  # of a project file; three hundred times the largest seen, our choice


@dataclass(frozen=True, slots=True)
class Loaded:
    """A design with the files it came from, the main one first.

    `troubles` are forms that could not be read; `out_of_step` is where board and schematic differ; `variants`
    are named ones, of which none was read.
    """

    sources: tuple[InputFile, ...]
    documents: Mapping[str, Document]
    design: Design
    troubles: tuple[InputError, ...]
    board: BoardFile | None = None
    out_of_step: OutOfStep | None = None
    variants: tuple[str, ...] = ()

    @property
    def source(self) -> InputFile:
        """The main file."""
        return self.sources[0]


def load_project(project: Project, *, outside: bool = False) -> Loaded:
    """Read a design with all its files: a board is joined with its schematic.

    Raises:
        InputError: if the main file cannot be read. Of a schematic beside a board, that is a trouble.
    """
    loaded = load_design(project.path, outside=outside)
    if project.sheets is None or loaded.board is None:
        return loaded
    try:
        document, source = _opened(project.sheets)
        drawn, paths = _schematic(project.sheets, document, source, outside=outside)
    except InputError as why:
        return replace(loaded, troubles=(*loaded.troubles, why))
    from gatecheck.design.join import join_designs  # noqa: PLC0415 (only what is needed)

    design, step = join_designs(loaded.design, drawn.design, paths)
    return Loaded(
        (*loaded.sources, *drawn.sources),
        {**loaded.documents, **drawn.documents},
        design,
        (*loaded.troubles, *drawn.troubles),
        loaded.board,
        # Half a schematic differs from any board; what is missing has been said.
        step if not drawn.troubles else None,
        drawn.variants,
    )


def load_design(path: Path, *, outside: bool = False) -> Loaded:
    """Read one board, schematic or netlist; `outside` lets sheets lie outside the repository.

    Raises:
        InputError: if it cannot be read at all.
    """
    document, source = _opened(path)
    if source.kind == FileKind.BOARD.value:
        from gatecheck.parse.board import read_board  # noqa: PLC0415 (only what is needed)

        board = read_board(document)
        return Loaded((source,), {document.path: document}, from_board(board), board.troubles, board)
    if source.kind == FileKind.SCHEMATIC.value:
        return _schematic(path, document, source, outside=outside)[0]
    from gatecheck.parse.netlist import read_netlist  # noqa: PLC0415 (the same)

    netlist = read_netlist(document)
    return Loaded((source,), {document.path: document}, from_netlist(netlist), netlist.troubles)


def _opened(path: Path) -> tuple[Document, InputFile]:
    shown = shown_path(path)
    data = read_bytes(path)
    kind = sniff(shown, data)
    return open_document(shown, data), InputFile(shown, kind.value, hashlib.sha256(data).hexdigest())


def _schematic(path: Path, document: Document, source: InputFile, *, outside: bool) -> tuple[Loaded, Mapping[str, str]]:
    """A schematic with all its sheets, and the part that each symbol path belongs to.

    Raises:
        InputError: if there is no symbol on any sheet.
    """
    from gatecheck.design.from_sheets import from_sheets  # noqa: PLC0415 (only what is needed)
    from gatecheck.parse.sheets import read_hierarchy  # noqa: PLC0415 (the same)

    places, documents, sources = {document.path: path}, {document.path: document}, [source]
    reach = _repository(path.resolve().parent) or path.resolve().parent

    def fetch(above: str, name: str) -> Document:
        file = places[above].parent / name.replace("\\", "/")
        if not name or "\0" in name or not (outside or file.resolve().is_relative_to(reach)):
            raise InputError("this sheet lies outside the project", "move its file there, or --allow-outside", above)
        shown = shown_path(file.parent.resolve() / file.name) if ".." in file.parts else shown_path(file)
        if shown not in documents:
            below, found = _opened(file)
            if found.kind != FileKind.SCHEMATIC.value:
                raise InputError("this sheet's file is no schematic", "name a .kicad_sch file in the sheet", above)
            documents[shown], places[shown] = below, file
            sources.append(found)
        return documents[shown]

    hierarchy = read_hierarchy(document, fetch)
    if not any(file.symbols for file in hierarchy.files.values()) and not hierarchy.troubles:
        raise InputError("no part is drawn in this schematic", "give a schematic with symbols", document.path)
    project, troubles = _project_file(path.with_suffix(".kicad_pro"))
    design, paths = from_sheets(hierarchy, project)
    every = (*hierarchy.troubles, *troubles)
    return Loaded(tuple(sources), documents, design, every, variants=tuple(hierarchy.variants)), paths


def _project_file(path: Path) -> tuple[ProjectFile, tuple[InputError, ...]]:
    """The project file beside a root sheet, where there is one."""
    from gatecheck.parse.project_file import ProjectFile, read_project_file  # noqa: PLC0415 (only what is needed)

    if not os.path.isfile(path):  # noqa: PTH113 (is_file raises for odd names)
        return ProjectFile(), ()
    try:
        return read_project_file(shown_path(path), read_bytes(path, max_bytes=_MOST_PROJECT_BYTES)), ()
    except InputError as why:
        return ProjectFile(), (why,)


def _repository(folder: Path) -> Path | None:
    """The root of the repository a folder lies in."""
    return next((here for here in (folder, *folder.parents) if (here / ".git").exists()), None)


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
    root = _repository(folder)
    if root is None:
        return None
    above = [folder, *folder.parents]
    for here in above[1 : above.index(root) + 1]:
        if (here / NAME).is_file():
            return here / NAME
    return None

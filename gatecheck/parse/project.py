"""Which files belong together: from the paths of a command line to the designs to review, each once."""

from __future__ import annotations

import os
from dataclasses import dataclass
from pathlib import Path

from gatecheck.errors import InputError
from gatecheck.files import shown_path
from gatecheck.parse.sheet_owners import SheetOwners
from gatecheck.settings import NAME

_BOARD, _NETLIST, _SHEET, _PROJECT = ".kicad_pcb", ".net", ".kicad_sch", ".kicad_pro"
_READ = (_BOARD, _NETLIST, _SHEET)
_ORDER = {_BOARD: 0, _SHEET: 1, _NETLIST: 2, _PROJECT: 3}
# Copies that editors and panel tools leave beside the design. Read when named, passed over in a folder.
_COPY_PREFIXES = ("_autosave-", "~", "#auto_saved_files#")
_COPY_FOLDERS = ("-backups",)
_PANEL_SUFFIXES = ("_panelized", "-panelized", "_panel", "-panel")
# Our choice: bounds the walk of a folder given by mistake.
_MAX_ENTRIES = 200_000


@dataclass(frozen=True, slots=True)
class Project:
    """One design to review: the file to read, and those beside it that were passed over, with the reason.

    `named` says that the user named this very file, and not a folder it lies in. `sheets` is the root sheet of
    a board.
    """

    path: Path
    named: bool = True
    sheets: Path | None = None
    passed_over: tuple[tuple[Path, str], ...] = ()


def find_projects(paths: list[Path]) -> list[Project]:
    """The designs behind files and folders, in the order given, each once.

    Files of one folder and stem are one design: its board with its sheets, or its sheets alone, or its netlist
    where there is neither. A sheet stands for the root sheets it is part of. A file of a kind that designs do
    not have stands by itself, so that reading it says what is wrong with it.

    Raises:
        InputError: if a folder has no design in it.
    """
    chosen: dict[object, list[tuple[Path, bool]]] = {}
    owners = SheetOwners()
    for path in paths:
        # Not Path.is_dir: it raises for names that the system cannot hold, and opening says that better.
        folder = os.path.isdir(path)  # noqa: PTH112 (see above)
        # A project file stands for the designs it speaks of: those of its folder.
        below = path if folder else path.parent if path.name == NAME and path.exists() else None
        for given in _designs_below(below) if below is not None else [path]:
            sheet = given.suffix.lower() == _SHEET
            if sheet and below is not None and owners.left_over(given):
                continue
            for file in owners.roots_of(given) if sheet else [given]:
                chosen.setdefault(_design_of(file), []).append((file, below is None))
    return [_project(files) for files in chosen.values()]


def _design_of(file: Path) -> object:
    """What files of one design share: folder and stem, however the folder was spelled."""
    known = file.suffix.lower() in (_BOARD, _NETLIST, _SHEET, _PROJECT) and os.path.exists(file)  # noqa: PTH110
    whole = os.path.realpath(file.parent)
    return (whole, file.stem) if known else (whole, file.name, "")


def _project(files: list[tuple[Path, bool]]) -> Project:
    """One design from its files: the board first, then sheets, then a netlist."""
    unique = dict(files)
    ordered = sorted(unique, key=lambda file: _ORDER.get(file.suffix.lower(), len(_ORDER)))
    main = ordered[0]
    if main.suffix.lower() in (_SHEET, _PROJECT):
        beside = (main.with_suffix(suffix) for suffix in _ORDER)
        main = next((file for file in beside if os.path.isfile(file)), main)  # noqa: PTH113 (is_file raises for odd names)
    sheets = main.with_suffix(_SHEET) if main.suffix.lower() == _BOARD else None
    what = "board" if main.suffix.lower() == _BOARD else "schematic"
    others = [
        (file, f"the {what} beside it is reviewed")
        for file in ordered
        if file != main and file.suffix.lower() == _NETLIST
    ]
    legacy = main.with_suffix(".sch")
    if os.path.isfile(legacy):  # noqa: PTH113 (is_file raises for names the system cannot hold)
        others.append((legacy, "a legacy text schematic; the file beside it is reviewed"))
    there = sheets is not None and os.path.isfile(sheets)  # noqa: PTH113 (the same)
    return Project(main, any(unique.values()), sheets if there else None, tuple(others))


def _designs_below(folder: Path) -> list[Path]:
    """Design files below a folder; hidden folders, links and copies are passed over.

    Raises:
        InputError: if there is none, or the folder is too large to search.
    """
    found: list[Path] = []
    seen = 0
    for here, folders, names in os.walk(folder):
        folders[:] = sorted(n for n in folders if not n.startswith(".") and not n.endswith(_COPY_FOLDERS))
        seen += len(names) + len(folders)
        if seen > _MAX_ENTRIES:
            raise InputError(
                f"this folder holds more than {_MAX_ENTRIES} files",
                "name the design's own folder",
                shown_path(folder),
            )
        files = (Path(here, name) for name in sorted(names) if _is_design(name))
        found += [file for file in files if file.is_file() and not file.is_symlink()]
    if not found:
        raise InputError(
            "there is no board, schematic or netlist in this folder",
            "name a folder with a .kicad_pcb, .kicad_sch or exported .net file",
            shown_path(folder),
        )
    return found


def _is_design(name: str) -> bool:
    stem, suffix = Path(name).stem, Path(name).suffix
    copy = name.startswith((*_COPY_PREFIXES, ".")) or stem.lower().endswith(_PANEL_SUFFIXES)
    return suffix.lower() in _READ and not copy

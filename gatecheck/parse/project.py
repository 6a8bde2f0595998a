"""Which files belong together: from the paths of a command line to the designs to review, each once."""

from __future__ import annotations

import os
from dataclasses import dataclass
from pathlib import Path

from gatecheck.errors import InputError
from gatecheck.files import shown_path

_BOARD, _NETLIST, _SHEET, _PROJECT = ".kicad_pcb", ".net", ".kicad_sch", ".kicad_pro"
_READ = (_BOARD, _NETLIST)
# Copies that editors and panel tools leave beside the design. Read when named, passed over in a folder.
_COPY_PREFIXES = ("_autosave-", "~", "#auto_saved_files#")
_COPY_FOLDERS = ("-backups",)
_PANEL_SUFFIXES = ("_panelized", "-panelized", "_panel", "-panel")
# Our choice: bounds the walk of a folder given by mistake.
_MAX_ENTRIES = 200_000


@dataclass(frozen=True, slots=True)
class Project:
    """One design to review: the file to read, and those beside it that were passed over, with the reason."""

    path: Path
    passed_over: tuple[tuple[Path, str], ...] = ()


def find_projects(paths: list[Path]) -> list[Project]:
    """The designs behind files and folders, in the order given, each once.

    Files of one folder and stem are one design; its board is read, or its netlist where there is no board.

    Raises:
        InputError: if a path does not exist, or a folder has no design in it.
    """
    chosen: dict[Path, list[Path]] = {}
    for path in paths:
        for file in _files(path):
            chosen.setdefault(_stem(file), []).append(file)
    projects = []
    for stem, files in chosen.items():
        unique = list(dict.fromkeys(files))
        boards = [file for file in unique if file.suffix.lower() == _BOARD]
        main = boards[0] if boards else unique[0]
        if main.suffix.lower() in (_SHEET, _PROJECT):
            board = stem.with_name(stem.name + _BOARD)
            main = board if board.is_file() else main
        others = [
            (file, "the board beside it is reviewed")
            for file in unique
            if file != main and file.suffix.lower() == _NETLIST
        ]
        projects.append(Project(main, tuple(others)))
    return projects


def _stem(path: Path) -> Path:
    """What files of one design share: folder and name without the ending."""
    return path.with_name(path.name[: -len(path.suffix)] if path.suffix else path.name)


def _files(path: Path) -> list[Path]:
    # Not Path.is_dir: it raises for names that the system cannot hold, and opening says that better.
    if not os.path.isdir(path):  # noqa: PTH112 (see above)
        return [path]
    found = _designs_below(path)
    if not found:
        raise InputError(
            "there is no board and no netlist in this folder",
            "name a folder with a .kicad_pcb or an exported .net file",
            shown_path(path),
        )
    return found


def _designs_below(folder: Path) -> list[Path]:
    """Design files below a folder, boards before netlists; hidden folders, links, copies are passed over."""
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
        found += [Path(here, name) for name in sorted(names) if _is_design(name)]
    return found


def _is_design(name: str) -> bool:
    stem, suffix = Path(name).stem, Path(name).suffix
    copy = name.startswith((*_COPY_PREFIXES, ".")) or stem.lower().endswith(_PANEL_SUFFIXES)
    return suffix.lower() in _READ and not copy

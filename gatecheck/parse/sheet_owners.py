"""Which root sheets a sheet file belongs to, told by the files that sheets name, without parsing them."""

from __future__ import annotations

import os
import re
from pathlib import Path

from gatecheck.errors import InputError
from gatecheck.files import read_bytes

_NAMED = re.compile(rb'\(property\s+"Sheet ?file"\s+"((?:[^"\\]|\\.){1,4096})"')
_SHEET = ".kicad_sch"
# What makes a sheet the root of a project: a project or a board of its name beside it.
_ROOT_MARKS = (".kicad_pro", ".kicad_pcb")
# Our choice: bounds the search in a folder given by mistake, and how far up a project is looked for.
_MOST_CANDIDATES, _MOST_FOLDERS = 500, 5


class SheetOwners:
    """Remembers what each sheet file names, so that a folder of sheets is read once."""

    def __init__(self) -> None:
        self._named: dict[Path, list[Path]] = {}

    def roots_of(self, sheet: Path) -> list[Path]:
        """The root sheets that lead to a sheet; itself where it is one, or where none is found."""
        if is_root(sheet) or not os.path.isfile(sheet):  # noqa: PTH113 (odd names raise)
            return [sheet]
        wanted = sheet.resolve()
        leading = [found for found in _candidates(sheet) if wanted in self._below(found)]
        marked = [found for found in leading if is_root(found)]
        # Without a project file: those that no other one leads to.
        tops = marked or [found for found in leading if not any(found.resolve() in self._below(o) for o in leading)]
        return tops or [sheet]

    def left_over(self, sheet: Path) -> bool:
        """No project leads to a sheet, though there is one in its folder: nobody uses it any more."""
        roots = self.roots_of(sheet)
        return not any(map(is_root, roots)) and any(map(is_root, sheet.parent.glob("*" + _SHEET)))

    def _below(self, root: Path) -> set[Path]:
        """All sheets below one, itself left out unless it contains itself."""
        found: set[Path] = set()
        todo = [root.resolve()]
        while todo and len(found) < _MOST_CANDIDATES:
            for below in self._names(todo.pop()):
                if below not in found:
                    found.add(below)
                    todo.append(below)
        return found

    def _names(self, file: Path) -> list[Path]:
        if file not in self._named:
            try:
                names = _NAMED.findall(read_bytes(file))
            except InputError:
                names = []
            words = (name.decode("utf-8", errors="replace").replace("\\\\", "/") for name in names)
            self._named[file] = [Path(os.path.normpath(file.parent / word)) for word in words]
        return self._named[file]


def is_root(sheet: Path) -> bool:
    """A project or a board of the same name lies beside it."""
    return any(os.path.isfile(sheet.with_suffix(mark)) for mark in _ROOT_MARKS)  # noqa: PTH113 (odd names raise)


def _candidates(sheet: Path) -> list[Path]:
    """Other sheets of its folder and the folders above, as far as the repository reaches."""
    here = sheet.resolve().parent
    folders = [sheet.parent]
    for folder in (here, *here.parents[: _MOST_FOLDERS - 1]):
        if folder != here:
            folders.append(Path(os.path.relpath(folder)))
        if (folder / ".git").exists():
            break
    found = [file for folder in folders for file in sorted(folder.glob("*" + _SHEET))]
    return [file for file in found if file.resolve() != sheet.resolve()][:_MOST_CANDIDATES]
